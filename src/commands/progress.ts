/** Progress of a long command as lines on standard error, so that standard output holds the answer alone. */
import type { AuditEvent } from '../audit/gather.ts';
import type { Surroundings } from './command.ts';

const STEP_WORDS = {
  manifests: 'reading manifests',
  joints: 'reading source, checking joints',
  constants: 'taking stock of constants',
  history: 'reading history',
  cases: 'running cases',
  register: 'reading the register',
} as const;

/** On a terminal a line a step and a case; elsewhere nothing, for logs that keep only what matters. */
export function progressLines(surroundings: Surroundings): (event: AuditEvent) => void {
  if (!surroundings.stdoutIsTerminal) return () => {};
  return (event) => {
    if (event.what === 'step') surroundings.err(`${STEP_WORDS[event.step]}\n`);
    if (event.what === 'finished')
      surroundings.err(`  ${event.done} of ${event.of}  ${event.case}: ${event.class ?? event.state}\n`);
  };
}
