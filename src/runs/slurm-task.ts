/** The scripts that run inside an allocation: one loop a worker, one file a run. Pure text. */
import type { ProcessEnd, ProcessJob } from './process-end.ts';

/**
 * A worker takes one task after another out of `todo/` by renaming it, which only one can, runs it, and says in `done/` how it
 * ended. A pool of such workers inside a few jobs keeps all processors busy; a job for each short run would mostly wait for
 * the scheduler. The workers go on when the login is lost, and end when there was nothing to do for a while.
 */
export const WORKER = `#!/bin/sh
spool=$1
patience=$2
me="\${SLURM_ARRAY_JOB_ID:-$SLURM_JOB_ID}_\${SLURM_ARRAY_TASK_ID:-0}"
mkdir -p "$spool/taken/$me"
# After a preemption Slurm starts the worker anew: what it had taken is done again.
for task in "$spool/taken/$me"/*.sh; do [ -e "$task" ] && mv "$task" "$spool/todo/"; done
events="/sys/fs/cgroup$(sed -n 's/^0:://p' /proc/self/cgroup 2>/dev/null)/memory.events"
killed() { sed -n 's/^oom_kill //p' "$events" 2>/dev/null; }
idle=0
while [ ! -e "$spool/stop" ]; do
  got=
  for task in "$spool"/todo/*.sh; do
    [ -e "$task" ] || break
    got=\${task##*/}
    mv "$task" "$spool/taken/$me/$got" 2>/dev/null && break
    got=
  done
  if [ -z "$got" ]; then
    idle=$((idle + 1))
    [ "$idle" -gt "$patience" ] && break
    sleep 0.1
    continue
  fi
  idle=0
  before=$(killed)
  begin=$(date +%s%N)
  sh "$spool/taken/$me/$got"
  status=$?
  end=$(date +%s%N)
  memory=no
  [ "$before" = "$(killed)" ] || memory=yes
  printf '%s %s %s %s\\n' "$status" "$begin" "$end" "$memory" > "$spool/taken/$me/end"
  mv "$spool/taken/$me/end" "$spool/done/\${got%.sh}"
  rm -f "$spool/taken/$me/$got"
done
`;

/** The script of one run. Every word is quoted as a whole, so the shell has nothing to interpret. */
export function taskScript(job: ProcessJob): string {
  const environment = Object.entries(job.environment).map(([name, value]) => quoted(`${name}=${value}`));
  // timeout(1) makes a process group of its own and ends it as a whole, in two seconds by force; 0 is no limit.
  const words = ['timeout', '-k', '2', String(job.timeLimitSeconds ?? 0), ...job.words].map(quoted);
  return `cd ${quoted(job.folder)} || exit 125\nexec env -i ${[...environment, ...words].join(' ')} >>${quoted(job.log)} 2>&1 </dev/null\n`;
}

export function quoted(word: string): string {
  return `'${word.replaceAll("'", "'\\''")}'`;
}

/** What a worker wrote into `done/`; null when it is not whole. */
export function readEnd(text: string, job: ProcessJob): ProcessEnd | null {
  const match = /^(\d+) (\d+) (\d+) (yes|no)\n$/.exec(text);
  if (match === null) return null;
  const status = Number(match[1]);
  const seconds = Number(BigInt(match[3]!) - BigInt(match[2]!)) / 1e9;
  const base = { exitCode: null, signal: null, seconds, peakMegabytes: null };
  if (match[4] === 'yes' && status !== 0) return { ...base, how: 'out of memory' };
  // timeout(1): 124 when the time was over, 137 when the end had to be forced.
  const over = job.timeLimitSeconds !== null && seconds >= job.timeLimitSeconds * 0.99;
  if (status === 124 || (status === 137 && over)) return { ...base, how: 'timed out' };
  if (status === 127)
    return { ...base, how: 'not started', why: `there is no program "${job.words[0]}" in PATH on the node` };
  if (status > 128 && status < 160) return { ...base, how: 'ended', signal: `signal ${status - 128}` };
  return { ...base, how: 'ended', exitCode: status };
}
