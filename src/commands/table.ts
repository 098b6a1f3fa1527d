/** The commands by name, each loaded only when it is asked for. One line a command, in the order of `mortise help`. */
import type { Command } from './command.ts';

export const COMMANDS: Readonly<Record<string, () => Promise<{ command: Command }>>> = {
  open: () => import('./open.ts'),
  draft: () => import('./draft.ts'),
  check: () => import('./check.ts'),
  audit: () => import('./audit.ts'),
  review: () => import('./review.ts'),
  compare: () => import('./compare.ts'),
  drift: () => import('./drift.ts'),
  lineage: () => import('./lineage.ts'),
  register: () => import('./register.ts'),
  notice: () => import('./notice.ts'),
  rerun: () => import('./rerun.ts'),
  swap: () => import('./swap.ts'),
  trace: () => import('./trace.ts'),
  demo: () => import('./demo.ts'),
  help: () => import('./help.ts'),
  unit: () => import('./unit.ts'),
  callers: () => import('./callers.ts'),
  interface: () => import('./interface.ts'),
  constants: () => import('./constants.ts'),
  completion: () => import('./completion.ts'),
  man: () => import('./man.ts'),
};
