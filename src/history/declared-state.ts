/** What the declaring files of one commit say: the manifests, and the version of the code as a whole. */
import { loadManifests } from '../manifests/load-manifests.ts';
import type { ManifestSet } from '../model/manifest.ts';
import { decodeText } from '../sources/git-object.ts';
import type { Repository } from '../sources/repository.edge.ts';
import { type DeclaringFiles, isManifest } from './declaring-files.ts';
import { isVersionFile, versionIn } from './version-text.ts';

export interface DeclaredState {
  readonly set: ManifestSet;
  /** As version files say; null when none does. */
  readonly version: string | null;
  readonly versionFile: string | null;
  /** Path to the name of the module that owns it, for sources and tables. */
  readonly owners: ReadonlyMap<string, string>;
  readonly files: DeclaringFiles;
}

export class DeclaredStates {
  private readonly repository: Repository;
  private readonly folder: string;
  private readonly known = new Map<DeclaringFiles, Promise<DeclaredState>>();
  private readonly blobs = new Map<string, Promise<Uint8Array | null>>();

  constructor(repository: Repository, folder: string) {
    this.repository = repository;
    this.folder = folder;
  }

  of(files: DeclaringFiles): Promise<DeclaredState> {
    const before = this.known.get(files);
    if (before !== undefined) return before;
    const state = this.read(files);
    this.known.set(files, state);
    return state;
  }

  private async read(files: DeclaringFiles): Promise<DeclaredState> {
    const manifests = new Map<string, Uint8Array>();
    let best: { rank: number; version: string; path: string } | null = null;
    for (const [path, id] of files) {
      const bytes = await this.blob(id);
      if (bytes === null) continue;
      if (isManifest(path, this.folder) && !path.includes('/references/')) manifests.set(path, bytes);
      if (!isVersionFile(path)) continue;
      const said = versionIn(path, decodeText(bytes));
      if (said !== null && (best === null || said.rank < best.rank)) best = { ...said, path };
    }
    // Findings about manifests of the past help nobody; an unsound one declares nothing at its commit.
    const { set } = loadManifests(manifests, { folder: this.folder });
    const owners = new Map<string, string>();
    for (const [name, { value }] of set.modules) {
      for (const file of value.source.files) owners.set(file, name);
      for (const table of value.tables ?? []) owners.set(table.file, name);
    }
    return { set, version: best?.version ?? null, versionFile: best?.path ?? null, owners, files };
  }

  private blob(id: string): Promise<Uint8Array | null> {
    const before = this.blobs.get(id);
    if (before !== undefined) return before;
    const read = this.repository.blob(id);
    this.blobs.set(id, read);
    return read;
  }
}
