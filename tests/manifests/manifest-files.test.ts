import { mkdirSync, mkdtempSync, realpathSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { findAssembly, readManifestFiles, readShippedContracts } from '../../src/manifests/manifest-files.edge.ts';
import type { SourceTree, TreeEntry } from '../../src/sources/tree.ts';

let root: string;
beforeEach(() => {
  root = realpathSync(mkdtempSync(join(tmpdir(), 'manifests-')));
});
afterEach(() => rmSync(root, { recursive: true }));

function put(path: string): void {
  mkdirSync(join(root, path, '..'), { recursive: true });
  writeFileSync(join(root, path), 'assembly: x\n');
}

function makeRepository(): void {
  mkdirSync(join(root, '.git/objects'), { recursive: true });
  mkdirSync(join(root, '.git/refs'));
  writeFileSync(join(root, '.git/HEAD'), 'ref: refs/heads/main\n');
}

describe('an assembly', () => {
  it('is found from a folder deep below its code', () => {
    put('manifests/assembly.yaml');
    makeRepository();
    mkdirSync(join(root, 'src/eos'), { recursive: true });
    expect(findAssembly(join(root, 'src/eos'))).toEqual({ root, folder: 'manifests', file: 'manifests/assembly.yaml' });
  });

  it('is found from inside the folder of the manifests', () => {
    put('manifests/assembly.yaml');
    mkdirSync(join(root, 'manifests/modules'));
    expect(findAssembly(join(root, 'manifests/modules'))?.root).toBe(root);
  });

  it('in a part of a repository has its paths from the root of the repository', () => {
    makeRepository();
    put('codes/cloud/manifests/assembly.yaml');
    expect(findAssembly(join(root, 'codes/cloud'))).toEqual({
      root,
      folder: 'codes/cloud/manifests',
      file: 'codes/cloud/manifests/assembly.yaml',
    });
  });

  it('may be named, and lies where it says also without a repository', () => {
    put('manifests/assembly-large.yaml');
    expect(findAssembly(root, 'manifests/assembly-large.yaml')).toEqual({
      root,
      folder: 'manifests',
      file: 'manifests/assembly-large.yaml',
    });
    expect(findAssembly(root, 'manifests/none.yaml')).toBeNull();
  });

  it('that is nowhere is null', () => {
    expect(findAssembly(root)).toBeNull();
  });
});

describe('the files of manifests', () => {
  const tree = (entries: readonly TreeEntry[], revision: string | null = null): SourceTree => ({
    root,
    revision,
    entries: async () => entries,
    read: async (path) => (path.includes('lost') ? null : new TextEncoder().encode(path)),
  });
  const file = (path: string): TreeEntry => ({ path, id: null, kind: 'file' });

  it('are all YAML files below their folder and nothing else', async () => {
    const { files, findings } = await readManifestFiles(
      tree([
        file('manifests/assembly.yaml'),
        file('manifests/modules/a.yml'),
        file('manifests/notes.md'),
        file('src/a.yaml'),
      ]),
    );
    expect([...files.keys()]).toEqual(['manifests/assembly.yaml', 'manifests/modules/a.yml']);
    expect(findings).toEqual([]);
  });

  it('that are links, or that the clone lacks, are findings and are not followed', async () => {
    const { files, findings } = await readManifestFiles(
      tree(
        [{ path: 'manifests/modules/b.yaml', id: null, kind: 'link' }, file('manifests/modules/lost.yaml')],
        'f'.repeat(40),
      ),
    );
    expect(files.size).toBe(0);
    expect(findings.map((one) => [one.kind, one.place.revision?.slice(0, 2)])).toEqual([
      ['manifest-outside', 'ff'],
      ['manifest-unreadable', 'ff'],
    ]);
  });

  it('that ship with the program are read from beside it', () => {
    expect(readShippedContracts().has('mortise:contracts/gas-state.yaml')).toBe(true);
  });

  it('found through a link lie where they really are', () => {
    put('code/manifests/assembly.yaml');
    symlinkSync(join(root, 'code'), join(root, 'alias'));
    expect(findAssembly(join(root, 'alias'))?.root).toBe(join(root, 'code'));
  });
});
