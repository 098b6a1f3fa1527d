/** Reads the modules of a code with the readers that ship: what check and audit see of the source. */
import type { FileInterface } from '../model/interface.ts';
import type { ManifestSet } from '../model/manifest.ts';
import { readSource, readSourceFile } from '../readers/read-source.ts';
import type { SourceTree } from '../sources/tree.ts';
import { moduleInterfaces } from './module-interfaces.ts';

/**
 * Every file of the modules, with the preprocessor names that the build sets and the files that it includes.
 *
 * @param modules  as for `moduleInterfaces`
 */
export async function codeInterfaces(
  set: ManifestSet,
  tree: SourceTree,
  modules?: Iterable<string>,
): Promise<Map<string, FileInterface>> {
  const define = set.assembly?.value.build?.define;
  const interfaces = await moduleInterfaces(
    set,
    tree,
    (path, bytes, include) => readSource(path, bytes, { include, ...(define === undefined ? {} : { define }) }),
    modules,
  );
  // A table that is too long to be read whole is opened where it lies.
  const tables = [...set.modules.values()].flatMap((one) => (one.value.tables ?? []).map((table) => table.file));
  for (const path of new Set(tables)) {
    const file = interfaces.has(path) ? null : await tree.onDisk?.(path);
    if (file != null) interfaces.set(path, await readSourceFile(path, file));
  }
  return interfaces;
}
