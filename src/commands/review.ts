/** `mortise review`: what a change does, before it is merged. */
import { findAssembly } from '../manifests/manifest-files.edge.ts';
import { hasStop } from '../model/finding.ts';
import { Register } from '../register/register.edge.ts';
import type { Report } from '../report/report.ts';
import { reportJson } from '../report/report-json.ts';
import { reportText } from '../report/report-text.ts';
import { reviewReport } from '../report/review-report.ts';
import { type GatheredReview, gatherReview } from '../review/gather-review.ts';
import { type ScratchCommit, scratchCommit } from '../review/scratch-commit.edge.ts';
import { openRepository } from '../sources/open-tree.edge.ts';
import type { Repository } from '../sources/repository.edge.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { jobsOf } from './jobs.ts';
import { orUsage, RUN_OPTIONS } from './running.ts';
import { textOptions } from './text-options.ts';
import { version } from './version.ts';
import { checkReports, writeReports } from './write-reports.ts';

export const command: Command = {
  name: 'review',
  answers: 'what does this change do to interfaces, versions and results',
  usage: 'mortise review [BASE..HEAD] [--staged] [--no-run]',
  options: {
    staged: { type: 'boolean', says: 'review what is staged against HEAD' },
    'no-run': { type: 'boolean', says: 'run nothing: only what reading tells' },
    'run-head-commands': {
      type: 'boolean',
      says: 'build and run as the manifests of the head say; trust the change first',
    },
    report: {
      type: 'string',
      multiple: true,
      value: 'FILE',
      says: 'also write the report; its form goes by the suffix: .txt .json .md .html .sarif .xml',
    },
    ...RUN_OPTIONS,
  },
  help: `
Takes everything between two commits as one change and says, in this order: what changed at each interface and contract and
who calls it; units, conventions, constants, domains and tables; the least bump asked and the one declared; which cases can
see it; after running just those, what moved; which recorded results rest on it; what to look at by eye. Without a range it
reviews the work tree against HEAD. Without manifests every source file is a module.

Reading executes nothing of either side: no hook, filter, diff program or submodule. Cases are built and run by the manifests
of the base, but what is built is the code of the head: give --no-run for a change that you do not trust at all.

  mortise review main..their-branch --no-run
  mortise review HEAD~100.. --no-run --report review.html
  mortise review --staged

Exit status: 0 nothing of gravity stop; 1 a stop; 2 wrong usage; 3 a case could not be run; 130 interrupted.`,
  async run(invocation, surroundings) {
    const { words, options } = invocation;
    if (words.length > 1) throw new UsageError(`mortise review takes one range; "${words[1]}" is a second`);
    if (words.length === 1 && options.staged === true)
      throw new UsageError('--staged reviews what is staged against HEAD; leave out the range');
    const reports = (options.report as readonly string[] | undefined) ?? [];
    checkReports(reports);
    const place = findAssembly(surroundings.cwd, typeof options.assembly === 'string' ? options.assembly : undefined);
    const repository = openRepository(place?.root ?? surroundings.cwd);
    let scratch: ScratchCommit | null = null;
    try {
      const ends = await endsOf(words[0], repository, invocation);
      if (ends.head === null) {
        scratch = await scratchCommit(repository, options.staged === true ? 'index' : 'work tree', ends.base);
        const same = (await scratch.repository.treeOf(scratch.commit)) === (await repository.treeOf(ends.base));
        if (same)
          throw new UsageError(
            `nothing differs between HEAD and the ${options.staged === true ? 'index' : 'work tree'}; name a range: BASE..HEAD`,
          );
      }
      const gathered = await orUsage(() => gather(repository, ends, scratch, place?.folder, invocation, surroundings));
      if (surroundings.signal.aborted || !gathered.complete) return EXIT.interrupted;
      const report = reportOf(gathered, ends, scratch, invocation);
      await writeReports(report, reports, surroundings);
      surroundings.out(
        options.json === true
          ? reportJson(report, version())
          : reportText(report, textOptions(invocation, surroundings)),
      );
      return statusOf(gathered);
    } finally {
      scratch?.remove();
      repository.close();
    }
  },
};

interface Ends {
  readonly base: string;
  /** null is the work tree or the index. */
  readonly head: string | null;
  readonly written: { readonly base: string; readonly head: string };
}

async function endsOf(text: string | undefined, repository: Repository, { options }: Invocation): Promise<Ends> {
  if (text === undefined)
    return {
      base: await repository.resolve('HEAD'),
      head: null,
      written: { base: 'HEAD', head: options.staged === true ? 'the index' : 'the work tree' },
    };
  if (!text.includes('..') || text.startsWith('..'))
    throw new UsageError(
      `"${text}" has no base: write BASE..HEAD, such as ${text.replace(/^\.+/, '') || 'main'}..HEAD`,
    );
  // Forges write three dots for what a branch changed since it parted; that is what is told here either way.
  const range = await repository.range(text.replace('...', '..'));
  const [base = '', head = ''] = text.split(/\.{2,3}/);
  return { base: range.from!, head: range.to, written: { base, head: head === '' ? 'HEAD' : head } };
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
