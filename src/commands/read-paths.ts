/** Paths named on a command line, read to interfaces, in the work tree or at a revision. */
import type { FileInterface } from '../model/interface.ts';
import { isSource, languageOf, readSource, readSourceFile } from '../readers/read-source.ts';
import { openTree } from '../sources/open-tree.edge.ts';
import type { SourceTree } from '../sources/tree.ts';
import { type Invocation, type OptionSpec, type Surroundings, UsageError } from './command.ts';
import { insideTree } from './paths.edge.ts';

export const DEFINE: OptionSpec = {
  type: 'string',
  multiple: true,
  value: 'NAME=VALUE',
  says: 'a preprocessor name; branches it rules out are not read',
};

export interface ReadPaths {
  /** Path in the repository to interface, in the order of the paths. */
  readonly files: Readonly<Record<string, FileInterface>>;
  readonly revision: string | null;
}

/** Honours `--at` and `--define`. @throws {UsageError} for a path without source */
export async function readPaths(
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ReadPaths> {
  const { at } = invocation.options;
  const tree = await openTree(surroundings.cwd, typeof at === 'string' ? at : undefined);
  const paths = await chosen(tree, words, surroundings);
  const define = defines(invocation);
  const include = await includable(tree);
  const files: Record<string, FileInterface> = {};
  for (const path of paths) {
    if (surroundings.signal.aborted) break;
    // A table on disk is opened where it lies: only headers and axes of it are read.
    const file = languageOf(path) === 'table' ? await tree.onDisk?.(path) : null;
    if (file != null) {
      files[path] = await readSourceFile(path, file);
      continue;
    }
    const bytes = await tree.read(path);
    if (bytes !== null)
      files[path] = await readSource(path, bytes, { include, ...(define === undefined ? {} : { define }) });
  }
  return { files, revision: tree.revision };
}

/** Include files are read beforehand: a reader asks for them at once. */
const INCLUDABLE = /\.(h|inc|cmn|com|fh|blk|fi|cb)$|(^|\/)[A-Z][A-Z0-9_]*$/;
const MOST_INCLUDED_BYTES = 64 << 20;

async function includable(tree: SourceTree): Promise<(path: string, from: string) => Uint8Array | null> {
  const byPath = new Map<string, Uint8Array>();
  const byName = new Map<string, string[]>();
  let total = 0;
  for (const entry of await tree.entries()) {
    if (entry.kind !== 'file' || !INCLUDABLE.test(entry.path) || total > MOST_INCLUDED_BYTES) continue;
    const bytes = await tree.read(entry.path);
    if (bytes === null) continue;
    total += bytes.length;
    byPath.set(entry.path, bytes);
    const name = entry.path.slice(entry.path.lastIndexOf('/') + 1);
    byName.set(name, [...(byName.get(name) ?? []), entry.path]);
  }
  return (path, from) => {
    const folder = from.includes('/') ? from.slice(0, from.lastIndexOf('/') + 1) : '';
    const found = byPath.get(folder + path) ?? byPath.get(path);
    if (found !== undefined) return found;
    // Else any file of that name: where several are, the build chooses, and the first stands for them.
    const [any] = byName.get(path.slice(path.lastIndexOf('/') + 1)) ?? [];
    return any === undefined ? null : (byPath.get(any) ?? null);
  };
}

/** Files named, and sources below folders named, in the tree's own paths. */
async function chosen(tree: SourceTree, words: readonly string[], surroundings: Surroundings): Promise<string[]> {
  const all = (await tree.entries()).filter((entry) => entry.kind === 'file').map((entry) => entry.path);
  const paths = new Set<string>();
  for (const word of words) {
    const inside = insideTree(tree.root, surroundings.cwd, word);
    const found =
      inside === null
        ? []
        : all.filter((path) => path === inside || ((inside === '' || path.startsWith(`${inside}/`)) && isSource(path)));
    if (found.length === 0)
      throw new UsageError(
        `there is no source file at or below ${word}${tree.revision === null ? '' : ' at this revision'}`,
      );
    for (const path of found) paths.add(path);
  }
  return [...paths].sort();
}

function defines({ options }: Invocation): Record<string, string> | undefined {
  const given = (options.define as readonly string[] | undefined) ?? [];
  if (given.length === 0) return undefined;
  return Object.fromEntries(
    given.map((text) => {
      const equals = text.indexOf('=');
      return equals < 0 ? [text, '1'] : [text.slice(0, equals), text.slice(equals + 1)];
    }),
  );
}
