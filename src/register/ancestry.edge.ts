/** What git knows of commits that brought a defect in or mended it: who descends from them, and where the same patch was picked. */
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import { runGit } from '../sources/git.edge.ts';
import { isRevisionText } from '../sources/safe-git.ts';
import type { Ancestry } from './notice.ts';
import type { Notice } from './record.ts';

/** Asks git about every commit that the notices name. A commit that this repository does not hold is answered with null. */
export async function ancestryFor(
  place: RepositoryPlace,
  notices: readonly Notice[],
  entryCommits: readonly string[],
): Promise<Ancestry> {
  const named = [...new Set(notices.flatMap((one) => [...(one.broughtIn ?? []), ...(one.mendedAt ?? [])]))];
  const known = new Map<string, string>();
  for (const text of [...named, ...entryCommits]) {
    if (!isRevisionText(text)) continue;
    const { status, out } = await runGit(place, 'refs', [
      'rev-parse',
      '--verify',
      '--quiet',
      '--end-of-options',
      `${text}^{commit}`,
    ]);
    if (status === 0) known.set(text, out.toString('utf8').trim());
  }
  const graph = await childrenOf(place, [...known.values()]);
  const holders = new Map<string, ReadonlySet<string>>();
  for (const text of named) {
    const commit = known.get(text);
    if (commit === undefined) continue;
    const alike = [commit, ...(await pickedFrom(place, commit))];
    holders.set(text, descendants(graph, alike));
  }
  const contents = new Map<Notice, ReadonlySet<string>>();
  for (const notice of notices) contents.set(notice, await contentsWithDefect(place, notice, known));
  return {
    holds: (commit, ancestor) => {
      const own = known.get(commit);
      const set = holders.get(ancestor);
      return own === undefined || set === undefined ? null : set.has(own);
    },
    contentsWithDefect: (notice) => contents.get(notice) ?? new Set(),
  };
}

async function childrenOf(place: RepositoryPlace, from: readonly string[]): Promise<ReadonlyMap<string, string[]>> {
  const { out } = await runGit(
    place,
    'refs',
    ['rev-list', '--parents', '--all', '--stdin', '--ignore-missing'],
    `${from.join('\n')}\n`,
  );
  const children = new Map<string, string[]>();
  for (const line of out.toString('latin1').split('\n')) {
    const [commit, ...parents] = line.split(' ');
    for (const parent of parents) {
      const known = children.get(parent);
      if (known === undefined) children.set(parent, [commit!]);
      else known.push(commit!);
    }
  }
  return children;
}

function descendants(children: ReadonlyMap<string, string[]>, from: readonly string[]): ReadonlySet<string> {
  const seen = new Set(from);
  const open = [...from];
  for (let commit = open.pop(); commit !== undefined; commit = open.pop()) {
    for (const child of children.get(commit) ?? []) {
      if (seen.has(child)) continue;
      seen.add(child);
      open.push(child);
    }
  }
  return seen;
}

/** Commits with the same patch: what `git cherry-pick` makes on another branch. Only commits that touch the same files are looked at. */
async function pickedFrom(place: RepositoryPlace, commit: string): Promise<string[]> {
  const files = await filesOf(place, commit);
  if (files.length === 0) return [];
  const quiet = ['--no-ext-diff', '--no-textconv', '--no-color', '--no-renames'];
  const patches = await runGit(place, 'refs', [
    'log',
    '-p',
    '--all',
    '--no-merges',
    ...quiet,
    '--format=commit %H',
    '--',
    ...files,
  ]);
  const own = await runGit(place, 'refs', [
    'diff-tree',
    '-p',
    '-r',
    ...quiet,
    '--pretty=format:commit %H',
    commit,
    '--',
    ...files,
  ]);
  const ids = await runGit(place, 'refs', ['patch-id', '--stable'], patches.out.toString('latin1'));
  const wanted = (await runGit(place, 'refs', ['patch-id', '--stable'], own.out.toString('latin1'))).out
    .toString('latin1')
    .split(' ')[0];
  return ids.out
    .toString('latin1')
    .split('\n')
    .map((line) => line.split(' '))
    .filter(([id, other]) => id === wanted && other !== undefined && other !== commit)
    .map(([, other]) => other!);
}

async function filesOf(place: RepositoryPlace, commit: string): Promise<string[]> {
  const { out } = await runGit(place, 'refs', [
    'diff-tree',
    '-r',
    '-z',
    '--no-commit-id',
    '--name-only',
    '--no-renames',
    '--root',
    commit,
  ]);
  return out
    .toString('utf8')
    .split('\0')
    .filter((name) => name !== '');
}

/** Content of the files that the defect was brought in with: a copy of one in another code has the defect too. */
async function contentsWithDefect(
  place: RepositoryPlace,
  notice: Notice,
  known: ReadonlyMap<string, string>,
): Promise<ReadonlySet<string>> {
  const contents = new Set<string>();
  for (const text of notice.broughtIn ?? []) {
    const commit = known.get(text);
    if (commit === undefined) continue;
    const { out } = await runGit(place, 'refs', [
      'diff-tree',
      '-r',
      '-z',
      '--raw',
      '--no-abbrev',
      '--no-commit-id',
      '--no-renames',
      '--root',
      commit,
    ]);
    for (const field of out.toString('latin1').split('\0')) {
      const match = /^:\d+ \d+ [0-9a-f]+ ([0-9a-f]+) [AM]$/.exec(field);
      if (match !== null) contents.add(match[1]!);
    }
  }
  return contents;
}
