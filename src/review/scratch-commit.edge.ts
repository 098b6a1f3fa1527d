/**
 * The work tree or the index as a commit, in a scratch repository that borrows the real one's objects. Nothing is written into
 * the real one, and no filter, hook or fsmonitor runs: files are read and hashed here.
 */
import { copyFileSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { lstat, readlink } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { deflateSync } from 'node:zlib';
import { runGit } from '../sources/git.edge.ts';
import { objectId } from '../sources/git-object.ts';
import { bytesFromPath, pathFromBytes } from '../sources/git-path.ts';
import { Repository } from '../sources/repository.edge.ts';
import { SourceProblem } from '../sources/source-problem.ts';
import { readWorkFile } from '../sources/work-tree.edge.ts';

export interface ScratchCommit {
  /** Of the scratch folder; holds every object of the real repository and those of the commit. */
  readonly repository: Repository;
  readonly commit: string;
  /** Paths that differ from HEAD and could not be read. */
  readonly unread: readonly string[];
  remove(): void;
}

export type Uncommitted = 'work tree' | 'index';

interface Leaf {
  readonly mode: string;
  readonly id: string;
}

/** @throws {SourceProblem} for a bare repository, and for an index with conflicts that are not resolved */
export async function scratchCommit(real: Repository, of: Uncommitted, parent: string): Promise<ScratchCommit> {
  if (real.place.bare)
    throw new SourceProblem(
      `${real.place.root} is a bare repository without a work tree.`,
      'name a range: BASE..HEAD.',
    );
  const folder = mkdtempSync(join(tmpdir(), 'mortise-review-'));
  try {
    const objects = new ScratchObjects(folder, real);
    const leaves = of === 'index' ? await indexLeaves(real) : null;
    const { files, unread } = leaves === null ? await workLeaves(real, parent, objects) : { files: leaves, unread: [] };
    const tree = objects.tree(files);
    const seconds = Math.floor(Date.now() / 1000);
    const who = `not committed <> ${seconds} +0000`;
    const commit = objects.write(
      'commit',
      Buffer.from(`tree ${tree}\nparent ${parent}\nauthor ${who}\ncommitter ${who}\n\nthe ${of}\n`),
    );
    await layRepository(folder, real);
    const place = { ...real.place, root: folder, bare: true, gitFolder: folder, commonFolder: folder };
    const repository = new Repository(place);
    return {
      repository,
      commit,
      unread,
      remove() {
        repository.close();
        rmSync(folder, { recursive: true, force: true });
      },
    };
  } catch (error) {
    rmSync(folder, { recursive: true, force: true });
    throw error;
  }
}

async function layRepository(folder: string, real: Repository): Promise<void> {
  mkdirSync(join(folder, 'refs'), { recursive: true });
  const sha256 = real.format === 'sha256';
  writeFileSync(
    join(folder, 'config'),
    `[core]\n\trepositoryformatversion = ${sha256 ? 1 : 0}\n\tbare = true\n${sha256 ? '[extensions]\n\tobjectformat = sha256\n' : ''}`,
  );
  const tags = await real.tags();
  const lines = tags
    .map(({ name, commit }) => `${commit} ${name}\n`)
    .sort((a, b) => (a.slice(41) < b.slice(41) ? -1 : 1));
  writeFileSync(join(folder, 'packed-refs'), lines.join(''));
  if (real.place.shallow) copyFileSync(join(real.place.commonFolder, 'shallow'), join(folder, 'shallow'));
  writeFileSync(join(folder, 'HEAD'), 'ref: refs/heads/none\n');
}

/** Writes loose objects beside those it borrows. */
class ScratchObjects {
  private readonly folder: string;
  private readonly real: Repository;

  constructor(folder: string, real: Repository) {
    this.folder = join(folder, 'objects');
    this.real = real;
    mkdirSync(join(this.folder, 'info'), { recursive: true });
    writeFileSync(join(this.folder, 'info', 'alternates'), `${join(real.place.commonFolder, 'objects')}\n`);
  }

  write(type: 'blob' | 'tree' | 'commit', bytes: Uint8Array): string {
    const id = objectId(type, bytes, this.real.format);
    mkdirSync(join(this.folder, id.slice(0, 2)), { recursive: true });
    const packed = deflateSync(Buffer.concat([Buffer.from(`${type} ${bytes.length}\0`), bytes]), { level: 1 });
    writeFileSync(join(this.folder, id.slice(0, 2), id.slice(2)), packed);
    return id;
  }

  /** @param files  path as Mortise spells it to what stands there */
  tree(files: ReadonlyMap<string, Leaf>): string {
    const names = new Map<string, { leaf: Leaf } | { below: Map<string, Leaf> }>();
    for (const [path, leaf] of files) {
      const slash = path.indexOf('/');
      if (slash < 0) names.set(path, { leaf });
      else {
        const name = path.slice(0, slash);
        const known = names.get(name);
        const below = known !== undefined && 'below' in known ? known.below : new Map<string, Leaf>();
        below.set(path.slice(slash + 1), leaf);
        names.set(name, { below });
      }
    }
    const entries = [...names].map(([name, it]) => {
      const bytes = bytesFromPath(name);
      const [mode, id] = 'leaf' in it ? [it.leaf.mode, it.leaf.id] : ['40000', this.tree(it.below)];
      // Git orders a folder as if its name ended with a slash.
      const order = mode === '40000' ? Buffer.concat([bytes, Buffer.from('/')]) : bytes;
      return {
        order,
        bytes: Buffer.concat([Buffer.from(`${mode} `), bytes, Buffer.from([0]), Buffer.from(id, 'hex')]),
      };
    });
    entries.sort((a, b) => Buffer.compare(a.order, b.order));
    return this.write('tree', Buffer.concat(entries.map((one) => one.bytes)));
  }
}

async function indexLeaves(real: Repository): Promise<Map<string, Leaf>> {
  const { status, out, err } = await runGit(real.place, 'refs', ['ls-files', '-s', '-z']);
  if (status !== 0)
    throw new SourceProblem(
      `The index could not be read: ${err.trim()}`,
      'mend it with "git reset", or review a range.',
    );
  const leaves = new Map<string, Leaf>();
  for (let at = 0; at < out.length; ) {
    const end = out.indexOf(0, at);
    const tab = out.indexOf(9, at);
    const [mode, id, stage] = out.toString('latin1', at, tab).split(' ');
    const path = pathFromBytes(out.subarray(tab + 1, end));
    if (stage !== '0')
      throw new SourceProblem(`The index holds a conflict in ${path}.`, 'resolve it and stage the file, then review.');
    leaves.set(path, { mode: mode!, id: id! });
    at = end + 1;
  }
  return leaves;
}

async function workLeaves(
  real: Repository,
  parent: string,
  objects: ScratchObjects,
): Promise<{ files: Map<string, Leaf>; unread: string[] }> {
  const { entries } = await real.list(parent);
  const files = new Map<string, Leaf>(entries.map(({ path, mode, id }) => [path, { mode, id }]));
  const unread: string[] = [];
  for (const path of await real.dirtyFiles()) {
    const leaf = await workLeaf(real, path, objects);
    if (leaf === 'gone') files.delete(path);
    else if (leaf === null) unread.push(path);
    else if (files.get(path)?.id !== leaf.id || files.get(path)?.mode !== leaf.mode) files.set(path, leaf);
  }
  return { files, unread };
}

async function workLeaf(real: Repository, path: string, objects: ScratchObjects): Promise<Leaf | null | 'gone'> {
  const file = Buffer.concat([Buffer.from(`${real.place.root}/`), bytesFromPath(path)]);
  const stats = await lstat(file).catch(() => null);
  if (stats === null) return 'gone';
  if (stats.isSymbolicLink())
    return { mode: '120000', id: objects.write('blob', await readlink(file, { encoding: 'buffer' })) };
  const bytes = await readWorkFile(real.place.root, path);
  if (bytes === null) return null;
  return { mode: (stats.mode & 0o100) === 0 ? '100644' : '100755', id: objects.write('blob', bytes) };
}
