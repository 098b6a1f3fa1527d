/** What `mortise review` loads only when something must be read: the answer kept from before needs none of it. */

import { hasStop } from '../model/finding.ts';
import { Register } from '../register/register.edge.ts';
import type { Report } from '../report/report.ts';
import { reportJson } from '../report/report-json.ts';
import { reportText } from '../report/report-text.ts';
import { reviewReport } from '../report/review-report.ts';
import { type GatheredReview, gatherReview } from '../review/gather-review.ts';
import { type ScratchCommit, scratchCommit } from '../review/scratch-commit.edge.ts';
import type { Repository } from '../sources/repository.edge.ts';
import { EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { jobsOf } from './jobs.ts';
import type { Ends } from './review.ts';
import { orUsage } from './running.ts';
import { textOptions } from './text-options.ts';
import { version } from './version.ts';
import { writeReports } from './write-reports.ts';

export interface Reviewed {
  readonly status: ExitStatus;
  /** Empty when it was interrupted. */
  readonly printed: string;
}

export async function reviewChange(
  repository: Repository,
  ends: Ends,
  folder: string | undefined,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<Reviewed> {
  const { options } = invocation;
  let scratch: ScratchCommit | null = null;
  try {
    if (ends.head === null) {
      scratch = await scratchCommit(repository, options.staged === true ? 'index' : 'work tree', ends.base);
      const same = (await scratch.repository.treeOf(scratch.commit)) === (await repository.treeOf(ends.base));
      if (same) throw new UsageError(`nothing differs between HEAD and ${ends.written.head}; name a range: BASE..HEAD`);
    }
    const gathered = await orUsage(() => gather(repository, ends, scratch, folder, invocation, surroundings));
    if (surroundings.signal.aborted || !gathered.complete) return { status: EXIT.interrupted, printed: '' };
    const report = reportOf(gathered, ends, scratch, invocation);
    await writeReports(report, (options.report as readonly string[] | undefined) ?? [], surroundings);
    const printed =
      options.json === true ? reportJson(report, version()) : reportText(report, textOptions(invocation, surroundings));
    return { status: statusOf(gathered), printed };
  } finally {
    scratch?.remove();
  }
}

function gather(
  repository: Repository,
  ends: Ends,
  scratch: ScratchCommit | null,
  folder: string | undefined,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<GatheredReview> {
  const { options } = invocation;
  const jobs = jobsOf(invocation);
  const { executor } = options;
  const run = options['no-run'] !== true && !repository.place.bare;
  return gatherReview({
    repository: scratch?.repository ?? repository,
    base: ends.base,
    head: scratch?.commit ?? ends.head!,
    folder: folder ?? 'manifests',
    root: repository.place.root,
    run: run
      ? {
          env: surroundings.env,
          signal: surroundings.signal,
          ...(jobs === undefined ? {} : { jobs }),
          ...(typeof executor === 'string' ? { executor } : {}),
        }
      : null,
    headCommands: options['run-head-commands'] === true,
    register: repository.place.bare ? null : new Register(repository.place.root),
    cache: scratch === null,
    signal: surroundings.signal,
    ...(jobs === undefined ? {} : { workers: jobs }),
  });
}

function reportOf(
  { review, manifests, parted }: GatheredReview,
  ends: Ends,
  scratch: ScratchCommit | null,
  { options }: Invocation,
): Report {
  const named = (written: string, commit: string) =>
    commit.startsWith(written) ? commit.slice(0, 10) : `${written} (${commit.slice(0, 10)})`;
  const base = named(ends.written.base, ends.base);
  const report = reviewReport(
    scratch === null || scratch.unread.length === 0
      ? review
      : { ...review, notes: [...review.notes, `${scratch.unread.join(', ')} could not be read`] },
    manifests,
    {
      base,
      head: ends.head === null ? ends.written.head : named(ends.written.head, ends.head),
      parted: parted === ends.base ? base : parted.slice(0, 10),
      now: new Date().toISOString(),
      ran: review.outcomes.length > 0,
      commandsFrom: options['run-head-commands'] === true ? 'head' : 'base',
    },
  );
  return scratch === null ? report : withoutRevision(report, scratch.commit);
}

/** The scratch commit is nowhere once the review is done, so no place may name it. */
function withoutRevision(report: Report, commit: string): Report {
  const clean = (_key: string, value: unknown) =>
    typeof value === 'object' && value !== null && (value as { revision?: unknown }).revision === commit
      ? { ...value, revision: undefined }
      : typeof value === 'string'
        ? value.replaceAll(commit.slice(0, 10), 'not committed')
        : value;
  const { findings, sections, drawings } = JSON.parse(
    JSON.stringify({ findings: report.findings, sections: report.sections, drawings: report.drawings }, clean),
  ) as Pick<Report, 'findings' | 'sections' | 'drawings'>;
  return { ...report, findings, sections, ...(drawings === undefined ? {} : { drawings }) };
}

function statusOf({ review }: GatheredReview): ExitStatus {
  if (hasStop(review.findings)) return EXIT.stop;
  return review.outcomes.some((one) => one.state === 'not runnable' || one.state === 'interrupted')
    ? EXIT.incomplete
    : EXIT.ok;
}
