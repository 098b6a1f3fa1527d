/**
 * A process of a few lines that outlives Mortise by a moment: should Mortise be killed outright, it ends the process groups
 * that Mortise had started and removes its scratch folder. It learns of the death by the end of its standard input.
 */
import { type ChildProcess, spawn } from 'node:child_process';

// Fixed text for the standard shell, since a second Node would cost more than many a case. Nothing declared ever gets into it:
// group ids come as lines of digits, the folder as an argument.
const GUARD = `
groups=' '
while read -r verb group; do
  case "$verb" in
    hold) groups="$groups$group " ;;
    free) groups="\${groups%% $group *} \${groups#* $group }" ;;
    rest) exit 0 ;;
  esac
done
for group in $groups; do kill -s TERM -- "-$group" 2>/dev/null; done
[ "$groups" = ' ' ] || sleep 1
for group in $groups; do kill -s KILL -- "-$group" 2>/dev/null; done
rm -rf -- "$1"
`;

export interface Guard {
  /** A process group to be ended should Mortise die. */
  hold(group: number): void;
  free(group: number): void;
  /** Nothing is left to guard. */
  rest(): void;
}

/** @param scratch  absolute path of the folder to be removed should Mortise die */
export function startGuard(scratch: string): Guard {
  // A session of its own: what ends the terminal's processes must not end the guard.
  const child: ChildProcess = spawn('/bin/sh', ['-c', GUARD, 'guard', scratch], {
    detached: true,
    stdio: ['pipe', 'ignore', 'ignore'],
  });
  child.on('error', () => {});
  child.stdin!.on('error', () => {});
  child.unref();
  (child.stdin as unknown as { unref?: () => void }).unref?.();
  const tell = (line: string) => void child.stdin!.write(`${line}\n`);
  return {
    hold: (group) => tell(`hold ${group}`),
    free: (group) => tell(`free ${group}`),
    rest: () => {
      tell('rest');
      child.stdin!.end();
    },
  };
}
