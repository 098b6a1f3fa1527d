/** `mortise review`: what a change does, before it is merged. */
import { join } from 'node:path';
import { driftKeyOf } from '../history/drift-key.ts';
import { keepReport, keptReport } from '../history/report-cache.edge.ts';
import { findAssembly } from '../manifests/manifest-files.edge.ts';
import { listRecordFiles, REGISTER_FOLDER } from '../register/register-files.edge.ts';
import { openRepository } from '../sources/open-tree.edge.ts';
import type { Repository } from '../sources/repository.edge.ts';
import { type Command, EXIT, type Invocation, type Surroundings, UsageError } from './command.ts';
import { textOptions } from './text-options.ts';

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
    executor: { type: 'string', value: 'NAME', says: 'run on this executor of the assembly; "local" is this machine' },
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
    if (reports.length > 0) (await import('./write-reports.ts')).checkReports(reports);
    const place = findAssembly(surroundings.cwd, typeof options.assembly === 'string' ? options.assembly : undefined);
    const repository = openRepository(place?.root ?? surroundings.cwd);
    try {
      const ends = await endsOf(words[0], repository, invocation);
      const key = await keyOf(repository, ends, place?.folder, invocation, surroundings);
      const kept = key === null ? null : keptReport(repository.place, key);
      if (kept !== null) {
        surroundings.out(kept.slice(1));
        return kept[0] === '1' ? EXIT.stop : EXIT.ok;
      }
      const { reviewChange } = await import('./review-change.ts');
      const { status, printed } = await reviewChange(repository, ends, place?.folder, invocation, surroundings);
      if (printed !== '') surroundings.out(printed);
      if (key !== null && (status === EXIT.ok || status === EXIT.stop))
        keepReport(repository.place, key, `${status}${printed}`);
      return status;
    } finally {
      repository.close();
    }
  },
};

export interface Ends {
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

/** Two commits that are only read always give the same answer. @returns null where something else can change it */
async function keyOf(
  repository: Repository,
  { base, head, written }: Ends,
  folder: string | undefined,
  { options }: Invocation,
  surroundings: Surroundings,
): Promise<string | null> {
  if (head === null || options['no-run'] !== true || options.report !== undefined) return null;
  // Names of records hold the seal of their content.
  const records = listRecordFiles(join(repository.place.root, REGISTER_FOLDER));
  const range = driftKeyOf({ from: base, to: head }, folder ?? 'manifests', await repository.tags());
  return `review ${range} ${JSON.stringify([written, options, records, textOptions({ words: [], options }, surroundings)])}`;
}
