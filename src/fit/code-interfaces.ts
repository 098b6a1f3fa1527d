/** Reads the modules of a code with the readers that ship: what check and audit see of the source. */
import type { FileInterface } from '../model/interface.ts';
import type { ManifestSet } from '../model/manifest.ts';
import { readSource } from '../readers/read-source.ts';
import type { SourceTree } from '../sources/tree.ts';
import { moduleInterfaces } from './module-interfaces.ts';

/**
 * Every file of the modules, with the preprocessor names that the build sets and the files that it includes.
 *
 * @param modules  as for `moduleInterfaces`
 */
export function codeInterfaces(
  set: ManifestSet,
  tree: SourceTree,
  modules?: Iterable<string>,
): Promise<Map<string, FileInterface>> {
  const define = set.assembly?.value.build?.define;
  return moduleInterfaces(
    set,
    tree,
    (path, bytes, include) => readSource(path, bytes, { include, ...(define === undefined ? {} : { define }) }),
    modules,
  );
}
