/** How many things a command may do at once. */
import { type Invocation, UsageError } from './command.ts';

/** The value of `--jobs`; undefined when it was not given. @throws {UsageError} */
export function jobsOf(invocation: Invocation): number | undefined {
  const { jobs } = invocation.options;
  if (jobs === undefined) return undefined;
  const count = Number(jobs);
  if (!Number.isInteger(count) || count < 1) throw new UsageError(`--jobs ${String(jobs)}: give a whole number from 1`);
  return count;
}
