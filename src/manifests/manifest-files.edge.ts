/** Fetches the bytes of manifests: from a source tree at a revision, and the contracts that ship with the program. */
import { existsSync, readdirSync, readFileSync, realpathSync } from 'node:fs';
import { basename, dirname, join, relative, resolve, sep } from 'node:path';
import type { Finding } from '../model/finding.ts';
import { shippedManifests } from '../sources/assets.edge.ts';
import { findRepository } from '../sources/find-repository.edge.ts';
import type { SourceTree } from '../sources/tree.ts';

export interface ManifestFiles {
  /** Path from the root of the tree to the bytes. */
  readonly files: Map<string, Uint8Array>;
  /** Links, and files that could not be read. */
  readonly findings: Finding[];
}

/** Where an assembly was found. */
export interface AssemblyPlace {
  /** Absolute path of the code: the repository that holds the manifests, or the folder that holds their folder. */
  readonly root: string;
  /** Folder of the manifests, from the root, with `/`; empty when it is the root itself. */
  readonly folder: string;
  /** Path of the assembly from the root, with `/`. */
  readonly file: string;
}

/**
 * Looks for `manifests/assembly.yaml` in a folder and in every folder above it.
 *
 * @param given  a path from `cwd`, when the assembly was named on the command line
 * @returns null when there is none
 */
export function findAssembly(cwd: string, given?: string): AssemblyPlace | null {
  if (given !== undefined) {
    const file = resolve(cwd, given);
    return existsSync(file) ? placeOf(file) : null;
  }
  for (const folder of upward(resolve(cwd))) {
    const candidates = [join(folder, 'manifests', 'assembly.yaml'), join(folder, 'manifests', 'assembly.yml')];
    if (basename(folder) === 'manifests') candidates.push(join(folder, 'assembly.yaml'), join(folder, 'assembly.yml'));
    const file = candidates.find((candidate) => existsSync(candidate));
    if (file !== undefined) return placeOf(file);
  }
  return null;
}

/** Reads every `.yaml` and `.yml` file below the folder of the manifests. Links are not followed: each is a finding. */
export async function readManifestFiles(tree: SourceTree, folder = 'manifests'): Promise<ManifestFiles> {
  const files = new Map<string, Uint8Array>();
  const findings: Finding[] = [];
  const prefix = folder === '' ? '' : `${folder}/`;
  for (const entry of await tree.entries()) {
    if (!entry.path.startsWith(prefix) || !/\.ya?ml$/.test(entry.path) || entry.kind === 'submodule') continue;
    const bytes = entry.kind === 'link' ? null : await tree.read(entry.path);
    if (bytes !== null) {
      files.set(entry.path, bytes);
      continue;
    }
    findings.push({
      kind: entry.kind === 'link' ? 'manifest-outside' : 'manifest-unreadable',
      gravity: 'stop',
      place: {
        file: entry.path,
        line: 1,
        column: 1,
        ...(tree.revision === null ? {} : { revision: tree.revision }),
      },
      says:
        entry.kind === 'link'
          ? 'This manifest is a link; links are not followed, since they can leave the repository.'
          : 'This manifest could not be read; the clone may lack its content.',
      evidence: [],
      next:
        entry.kind === 'link'
          ? 'put the file itself here.'
          : 'fetch the missing content, or check the permissions of the file.',
    });
  }
  return { files, findings };
}

/** The contract library that ships with the program, under the paths it has in the package. */
export function readShippedContracts(): Map<string, Uint8Array> {
  const folder = shippedManifests('contracts');
  const files = new Map<string, Uint8Array>();
  if (!existsSync(folder)) return files;
  for (const name of readdirSync(folder).sort()) {
    if (name.endsWith('.yaml')) files.set(`mortise:contracts/${name}`, readFileSync(join(folder, name)));
  }
  return files;
}

function placeOf(file: string): AssemblyPlace {
  const real = realpathSync(file);
  const folder = dirname(real);
  const repository = findRepository(folder);
  const root =
    repository !== null && !repository.bare
      ? repository.root
      : basename(folder) === 'manifests'
        ? dirname(folder)
        : folder;
  const slashes = (path: string) => path.split(sep).join('/');
  return { root, folder: slashes(relative(root, folder)), file: slashes(relative(root, real)) };
}

function* upward(folder: string): Generator<string> {
  for (let at = folder; ; at = dirname(at)) {
    yield at;
    if (dirname(at) === at) return;
  }
}
