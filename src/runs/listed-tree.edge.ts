/** A listing as a source tree, so that manifests are read from exactly the files that are built and run. */
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { loadManifests } from '../manifests/load-manifests.ts';
import { readManifestFiles, readShippedContracts } from '../manifests/manifest-files.edge.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { SourceTree } from '../sources/tree.ts';
import { GitFailed, git, type TreeListing } from './tree-files.edge.ts';

/** The bytes of one listed file; null when it is not there, is a link, or the clone lacks it. */
export function readListed(listing: TreeListing, path: string): Uint8Array | null {
  const file = listing.files.find((one) => one.path === path);
  if (file === undefined || file.mode === '120000' || file.mode === '160000') return null;
  try {
    return listing.workTree ? readFileSync(join(listing.root, path)) : git(listing.root, ['cat-file', 'blob', file.id]);
  } catch (error) {
    if (error instanceof GitFailed || (error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  }
}

/** The manifests of a listed tree; what is wrong with them is left to those who ask for findings. */
export async function manifestsOf(
  listing: TreeListing,
  folder: string,
  assembly = `${folder === '' ? '' : `${folder}/`}assembly.yaml`,
): Promise<ManifestSet> {
  const tree: SourceTree = {
    root: listing.root,
    revision: listing.workTree ? null : listing.commit,
    entries: async () =>
      listing.files.map(({ path, id, mode }) => ({
        path,
        id,
        kind: mode === '120000' ? 'link' : mode === '160000' ? 'submodule' : 'file',
      })),
    read: async (path) => readListed(listing, path),
  };
  const { files } = await readManifestFiles(tree, folder);
  return loadManifests(files, { folder, assembly, shipped: readShippedContracts() }).set;
}
