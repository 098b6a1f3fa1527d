/** Reads the source files that modules name, each once, through a tree and a reader that are handed in. */
import type { FileInterface } from '../model/interface.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { SourceTree } from '../sources/tree.ts';

export type ReadSource = (path: string, bytes: Uint8Array) => Promise<FileInterface>;

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
  for (const path of new Set(paths)) {
    const bytes = await tree.read(path);
    if (bytes !== null) interfaces.set(path, await read(path, bytes));
  }
  return interfaces;
}

function pluggedAnywhere(set: ManifestSet): string[] {
  const byCases = [...set.cases.values()].flatMap((one) => Object.values(one.value.with ?? {}));
  return [...Object.values(set.assembly?.value.plugged ?? {}), ...byCases];
}
