/** Reads the source files that modules name, each once, through a tree and a reader that are handed in. */
import type { FileInterface } from '../model/interface.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { SourceTree } from '../sources/tree.ts';

/** Bytes of a file that another includes, or null; as readers ask for it. */
export type FindIncluded = (path: string, from: string) => Uint8Array | null;
export type ReadSource = (path: string, bytes: Uint8Array, include: FindIncluded) => Promise<FileInterface>;

/** An include file may include others; deeper chains than this are no longer followed. */
const MOST_ROUNDS = 8;

/**
 * @param modules  names of the modules to read; when absent those plugged into the assembly and those that cases put there,
 *   or all when there is no assembly
 * @returns path to interface; a file that the tree does not have is not in it, which fit reports
 */
export async function moduleInterfaces(
  set: ManifestSet,
  tree: SourceTree,
  read: ReadSource,
  modules?: Iterable<string>,
): Promise<Map<string, FileInterface>> {
  const names = modules ?? (set.assembly === null ? set.modules.keys() : pluggedAnywhere(set));
  const declared = [...new Set(names)].flatMap((name) => set.modules.get(name)?.value ?? []);
  const paths = declared.flatMap((module) => [
    ...module.source.files,
    // Self-describing tables are read for their axes; what no reader knows comes back empty.
    ...(module.tables ?? []).map((table) => table.file),
  ]);
  const interfaces = new Map<string, FileInterface>();
  const included = new IncludedFiles(tree, new Set(paths.map(folderOf)));
  for (const path of new Set(paths)) {
    const bytes = await tree.read(path);
    if (bytes !== null) interfaces.set(path, await included.readWith(path, bytes, read));
  }
  return interfaces;
}

/**
 * Readers ask for included files at once, a tree answers later: what a reader asked for in vain is fetched, and the file
 * is read again, until it asks for nothing new.
 */
class IncludedFiles {
  private readonly tree: SourceTree;
  private readonly folders: ReadonlySet<string>;
  private readonly known = new Map<string, Uint8Array | null>();

  constructor(tree: SourceTree, folders: ReadonlySet<string>) {
    this.tree = tree;
    this.folders = folders;
  }

  async readWith(path: string, bytes: Uint8Array, read: ReadSource): Promise<FileInterface> {
    for (let round = 1; ; round++) {
      const wanted = new Set<string>();
      const result = await read(path, bytes, (name, from) => this.find(name, from, wanted));
      if (wanted.size === 0 || round === MOST_ROUNDS) return result;
      for (const one of wanted) this.known.set(one, await this.tree.read(one));
    }
  }

  /** Beside the file that includes it, from the root, or beside any other source file: the first that is there. */
  private find(name: string, from: string, wanted: Set<string>): Uint8Array | null {
    for (const folder of new Set([folderOf(from), '', ...this.folders])) {
      const path = inside(folder, name);
      if (path === null) continue;
      if (!this.known.has(path)) wanted.add(path);
      const bytes = this.known.get(path);
      if (bytes != null) return bytes;
    }
    return null;
  }
}

function folderOf(path: string): string {
  return path.slice(0, Math.max(0, path.lastIndexOf('/')));
}

/** A path from the root, or null when it would leave the repository. */
function inside(folder: string, name: string): string | null {
  if (name.startsWith('/')) return null;
  const parts = folder === '' ? [] : folder.split('/');
  for (const part of name.split('/')) {
    if (part === '..') {
      if (parts.pop() === undefined) return null;
    } else if (part !== '.' && part !== '') {
      parts.push(part);
    }
  }
  return parts.join('/');
}

function pluggedAnywhere(set: ManifestSet): string[] {
  const byCases = [...set.cases.values()].flatMap((one) => Object.values(one.value.with ?? {}));
  return [...Object.values(set.assembly?.value.plugged ?? {}), ...byCases];
}
