/** Who calls what changed, at the head: git finds the files that hold the name, the reader of the language finds the calls. */
import { CALL_BREAKING } from '../history/callers.ts';
import type { Change } from '../model/change.ts';
import { compareText, type Place } from '../model/place.ts';
import { languageOf, readSource } from '../readers/read-source.ts';
import { runGit } from '../sources/git.edge.ts';
import { pathFromBytes } from '../sources/git-path.ts';
import { commitTree } from '../sources/open-tree.edge.ts';
import type { Repository } from '../sources/repository.edge.ts';

/** Files searched for one name; a name in more of them is no name that tells. */
const MOST_FILES = 200;

/**
 * @returns lower-case name of each procedure whose interface changed to the places of its calls, those in changed files too
 */
export async function findCallers(
  repository: Repository,
  commit: string,
  changes: readonly Change[],
): Promise<Map<string, Place[]>> {
  const names = new Set(changes.filter(({ kind }) => CALL_BREAKING.has(kind)).map(procedureOf));
  const calls = new Map<string, Place[]>([...names].map((name) => [name, []]));
  const plain = [...names].filter((name) => /^\w+$/.test(name));
  if (plain.length === 0) return calls;
  const tree = commitTree(repository, commit);
  for (const path of await filesWith(repository, commit, plain)) {
    const bytes = await tree.read(path);
    if (bytes === null) continue;
    for (const call of (await readSource(path, bytes)).calls) {
      const places = calls.get(call.callee.toLowerCase());
      places?.push({ file: path, line: call.line, column: call.column, revision: commit });
    }
  }
  return calls;
}

/** The procedure that a change of it, or of one of its arguments, is about. */
export function procedureOf(change: Change): string {
  return change.subject.split('.')[0]!.toLowerCase();
}

/** Reads objects alone: neither attributes nor text conversion nor configuration of the repository take part. */
async function filesWith(repository: Repository, commit: string, names: readonly string[]): Promise<string[]> {
  const words = ['grep', '-l', '-z', '-I', '-i', '-w', '-F', '--no-color', '--no-textconv', '--no-recurse-submodules'];
  const { out } = await runGit(repository.place, 'objects', [
    ...words,
    ...names.flatMap((name) => ['-e', name]),
    commit,
  ]);
  const paths: string[] = [];
  const prefix = commit.length + 1;
  for (let at = 0; at < out.length; ) {
    const end = out.indexOf(0, at);
    if (end < 0) break;
    const path = pathFromBytes(out.subarray(at + prefix, end));
    const language = languageOf(path);
    if (language !== null && language !== 'table') paths.push(path);
    at = end + 1;
  }
  return paths.sort(compareText).slice(0, MOST_FILES);
}
