/** What rerun, swap and trace share: opening the code, progress on a terminal, mistakes as messages. */
import { manifestsUnreadable } from '../manifests/load-manifests.ts';
import { printable } from '../model/printable.ts';
import { findingsText } from '../report/finding-text.ts';
import { NoPath } from '../runs/commit-graph.ts';
import { NotDeclared } from '../runs/configuration.ts';
import { NoExchange } from '../runs/exchange.ts';
import { NotRecorded } from '../runs/record-reference.ts';
import type { LaboratoryRequest } from '../runs/rerun.ts';
import type { RunEvent } from '../runs/run-event.ts';
import { StoreUnusable } from '../runs/store.edge.ts';
import { NoQuantity } from '../runs/trace-case.ts';
import { GitFailed } from '../runs/tree-files.edge.ts';
import { EXIT, type ExitStatus, type Invocation, type OptionSpec, type Surroundings, UsageError } from './command.ts';
import { jobsOf } from './jobs.ts';
import { type OpenedCode, openCode } from './open-code.ts';
import { textOptions } from './text-options.ts';

export const RUN_OPTIONS: Readonly<Record<string, OptionSpec>> = {
  executor: { type: 'string', value: 'NAME', says: 'run on this executor of the assembly; "local" is this machine' },
};

/** Opens the code, or prints what is wrong with its manifests. */
export async function openForRuns(
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<OpenedCode | { readonly place: null; readonly status: ExitStatus }> {
  const opened = await openCode(invocation, surroundings);
  if (opened.place !== null && !manifestsUnreadable(opened.findings)) return opened;
  if (invocation.options.json === true) surroundings.out(`${JSON.stringify({ findings: opened.findings }, null, 2)}\n`);
  else surroundings.out(findingsText(opened.findings, textOptions(invocation, surroundings)));
  return { place: null, status: EXIT.usage };
}

/** What every run is asked with. */
export function runRequest(opened: OpenedCode, invocation: Invocation, surroundings: Surroundings): LaboratoryRequest {
  const { executor } = invocation.options;
  const jobs = jobsOf(invocation);
  return {
    root: opened.place.root,
    manifests: opened.set,
    manifestFolder: opened.place.folder,
    env: surroundings.env,
    signal: surroundings.signal,
    onEvent: progress(invocation, surroundings),
    ...(typeof executor === 'string' ? { executor } : {}),
    ...(jobs === undefined ? {} : { jobs }),
  };
}

/** A line an event, beside the answer and not in it; none where nobody watches. */
function progress(invocation: Invocation, surroundings: Surroundings): (event: RunEvent) => void {
  if (!surroundings.stdoutIsTerminal || invocation.options.json === true) return () => {};
  return (event) => {
    const line = eventText(event);
    if (line !== null) surroundings.err(`${printable(line)}\n`);
  };
}

function eventText(event: RunEvent): string | null {
  const about = (seconds: number | null) => (seconds === null ? '' : `, about ${secondsText(seconds)}`);
  switch (event.what) {
    case 'planned': {
      const known = event.cases.filter((one) => one.expectedSeconds !== null);
      const seconds = known.reduce((sum, one) => sum + one.expectedSeconds!, 0) / event.atOnce;
      const told = known.length === 0 ? '' : `, about ${secondsText(seconds)} if all are run`;
      return `${event.cases.length} cases, ${event.atOnce} at once${told}`;
    }
    case 'building':
      return `${event.build} …${about(event.expectedSeconds)}`;
    case 'built':
      return `${event.build} ${event.well ? 'done' : 'failed'} after ${secondsText(event.seconds)}`;
    case 'started':
      return `${event.case} …${about(event.expectedSeconds)}`;
    case 'finished':
      return `[${event.done}/${event.of}] ${event.case}: ${event.class ?? event.state}`;
    default:
      return null;
  }
}

export function secondsText(seconds: number): string {
  if (seconds < 0.1) return `${Math.round(seconds * 1000)} ms`;
  if (seconds < 100) return `${seconds.toFixed(1)} s`;
  return seconds < 6000 ? `${Math.round(seconds / 60)} min` : `${(seconds / 3600).toFixed(1)} h`;
}

/** Turns mistakes of the caller into usage errors; everything else is thrown on. */
export async function orUsage<T>(work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (error) {
    const mistakes = [NotDeclared, NoExchange, NoQuantity, NoPath, GitFailed, NotRecorded, StoreUnusable];
    if (mistakes.some((one) => error instanceof one)) throw new UsageError((error as Error).message, { cause: error });
    throw error;
  }
}

/** JSON has no infinities and no NaN; as text they are at least not lost. */
export function jsonText(document: unknown): string {
  const finite = (_key: string, value: unknown) =>
    typeof value === 'number' && !Number.isFinite(value) ? String(value) : value;
  return `${JSON.stringify(document, finite, 2)}\n`;
}
