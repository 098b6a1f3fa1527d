/** What nearly every command begins with: find the assembly, read the manifests at a revision, say what is wrong with them. */
import { loadManifests } from '../manifests/load-manifests.ts';
import {
  type AssemblyPlace,
  findAssembly,
  readManifestFiles,
  readShippedContracts,
} from '../manifests/manifest-files.edge.ts';
import { type Finding, sortFindings } from '../model/finding.ts';
import type { ManifestSet } from '../model/manifest.ts';
import { findRepository } from '../sources/find-repository.edge.ts';
import { openTree } from '../sources/open-tree.edge.ts';
import type { SourceTree } from '../sources/tree.ts';
import type { Invocation, Surroundings } from './command.ts';

export interface OpenedCode {
  readonly place: AssemblyPlace;
  readonly tree: SourceTree;
  readonly set: ManifestSet;
  /** About manifests only. */
  readonly findings: readonly Finding[];
}

/**
 * Opens the code that a command was called on, honouring `--assembly` and `--at`.
 *
 * @returns the finding alone when there is no assembly
 * @throws {SourceProblem} when the revision is not known; the command line answers it as a mistake in the call
 */
export async function openCode(
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<OpenedCode | { readonly place: null; readonly findings: readonly Finding[] }> {
  const { assembly, at } = invocation.options;
  const given = typeof assembly === 'string' ? assembly : undefined;
  const place = findAssembly(surroundings.cwd, given) ?? (at === undefined ? null : inHistory(surroundings.cwd, given));
  if (place === null) return { place: null, findings: [absent(given)] };
  const tree = await openTree(place.root, typeof at === 'string' ? at : undefined);
  const { files, findings } = await readManifestFiles(tree, place.folder);
  const loaded = loadManifests(files, {
    folder: place.folder,
    assembly: place.file,
    shipped: readShippedContracts(),
    ...(tree.revision === null ? {} : { revision: tree.revision }),
  });
  const none =
    loaded.set.assembly === null && !files.has(place.file) ? [absent(place.file, tree.revision ?? undefined)] : [];
  return { place, tree, set: loaded.set, findings: sortFindings([...findings, ...loaded.findings, ...none]) };
}

/** An assembly that the work tree no longer has can still stand at a revision. */
function inHistory(cwd: string, given?: string): AssemblyPlace | null {
  const repository = findRepository(cwd);
  if (repository === null) return null;
  const file = given ?? 'manifests/assembly.yaml';
  return { root: repository.root, folder: file.includes('/') ? file.slice(0, file.lastIndexOf('/')) : '', file };
}

function absent(file = 'manifests/assembly.yaml', revision?: string): Finding {
  return {
    kind: 'manifest-absent',
    gravity: 'stop',
    place: { file, line: 1, column: 1, ...(revision === undefined ? {} : { revision }) },
    says:
      revision === undefined
        ? `There is no ${file} here or in any folder above.`
        : `There is no ${file} at this revision.`,
    evidence: [],
    next: 'go into the code, name the assembly with --assembly FILE, or write manifests with "mortise draft".',
  };
}
