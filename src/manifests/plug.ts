/** An assembly with another module in a component: what a swap, and a case with its own modules, are checked and run with. */
import type { Assembly, Declaration, ManifestSet } from '../model/manifest.ts';

/**
 * The same set with other modules plugged in. Places still lead to the manifest as it is written.
 *
 * @param changes  component to module
 */
export function plug(set: ManifestSet, changes: Readonly<Record<string, string>>): ManifestSet {
  if (set.assembly === null || Object.keys(changes).length === 0) return set;
  const value: Assembly = { ...set.assembly.value, plugged: { ...set.assembly.value.plugged, ...changes } };
  const assembly: Declaration<Assembly> = Object.create(set.assembly, { value: { value, enumerable: true } });
  return { ...set, assembly };
}
