/** What is asked of a repository: what a revision means, its tags and branches, its trees and objects, what is not committed. */
import type { SimpleGit } from 'simple-git';
import type { RepositoryPlace } from './find-repository.edge.ts';
import { gitAbsent, gitEnvironment, runGit } from './git.edge.ts';
import { type ObjectFormat, objectId, parseCommit, parseTree } from './git-object.ts';
import { pathFromBytes } from './git-path.ts';
import { type GitObject, ObjectReader } from './object-reader.edge.ts';
import { isRevisionText, SAFE_CONFIG } from './safe-git.ts';
import { SourceProblem } from './source-problem.ts';
import type { TreeEntry } from './tree.ts';
import { listWorkTree, readWorkFile } from './work-tree.edge.ts';

export interface Ref {
  /** `refs/tags/v1.2`, `refs/heads/main`. */
  readonly name: string;
  /** The commit it leads to, through annotated tags. */
  readonly commit: string;
  /** Of the tag itself where it is annotated, of the commit otherwise. Seconds since 1970. */
  readonly seconds: number;
  /** First line of what an annotated tag says; empty otherwise. */
  readonly subject: string;
}

export interface ListedEntry extends TreeEntry {
  readonly id: string;
  readonly mode: string;
}

export interface Listing {
  readonly entries: readonly ListedEntry[];
  /** Folders that the clone lacks. */
  readonly missing: readonly string[];
}

/** A range of commits as written on the command line. */
export interface CommitRange {
  /** Commits reachable from here are left out; null for the whole history. */
  readonly from: string | null;
  readonly to: string;
}

export class Repository {
  readonly place: RepositoryPlace;
  private readonly objects: ObjectReader;
  private git: Promise<SimpleGit> | null = null;

  constructor(place: RepositoryPlace) {
    this.place = place;
    this.objects = new ObjectReader(place);
  }

  get format(): ObjectFormat {
    return this.place.objectFormat;
  }

  /**
   * The full commit id that a revision stands for.
   * @throws {SourceProblem} when it stands for none
   */
  async resolve(revision: string): Promise<string> {
    const id = await this.tryResolve(revision);
    if (id !== null) return id;
    if (isRevisionText(revision) && revision === 'HEAD') {
      throw new SourceProblem('This repository has no commit yet.', 'commit something, or read the work tree.');
    }
    throw new SourceProblem(
      `"${revision}" is no revision of ${this.place.root}.`,
      `name a commit, tag or branch; "git log --oneline" lists commits${this.place.shallow ? ', but this clone is shallow and lacks the older ones' : ''}.`,
    );
  }

  /** @returns null when it stands for no commit */
  async tryResolve(revision: string): Promise<string | null> {
    if (!isRevisionText(revision)) return null;
    const text = await this.answer(['rev-parse', '--verify', '--quiet', '--end-of-options', `${revision}^{commit}`]);
    return /^[0-9a-f]{40,64}$/.test(text?.trim() ?? '') ? text!.trim() : null;
  }

  /**
   * `A..B`, `A..` (to HEAD), `..B` (from the beginning), or one revision (everything up to it).
   * @throws {SourceProblem} when a side stands for no commit
   */
  async range(text: string | undefined): Promise<CommitRange> {
    if (text === undefined) return { from: null, to: await this.resolve('HEAD') };
    if (text.includes('...')) {
      throw new SourceProblem(`"${text}" is no range here.`, 'write two dots: REV..REV.');
    }
    const dots = text.indexOf('..');
    if (dots < 0) return { from: null, to: await this.resolve(text) };
    const from = text.slice(0, dots);
    return {
      from: from === '' ? null : await this.resolve(from),
      to: await this.resolve(text.slice(dots + 2) || 'HEAD'),
    };
  }

  /** Name of the branch that is checked out; null when detached. */
  async branch(): Promise<string | null> {
    return (await this.ask(['symbolic-ref', '--quiet', '--short', 'HEAD']))?.trim() || null;
  }

  async refs(prefix: 'refs/tags' | 'refs/heads' | 'refs/remotes' | 'refs'): Promise<Ref[]> {
    const format =
      '%(refname)%00%(objecttype)%00%(objectname)%00%(*objecttype)%00%(*objectname)%00%(creatordate:unix)%00%(contents:subject)';
    const text = (await this.answer(['for-each-ref', `--format=${format}`, prefix])) ?? '';
    return text.split('\n').flatMap((line) => {
      const [name, type, id, peeledType, peeledId, seconds, subject] = line.split('\0');
      const commit = type === 'commit' ? id : peeledType === 'commit' ? peeledId : undefined;
      if (name === undefined || commit === undefined) return [];
      return [{ name, commit, seconds: Number(seconds), subject: type === 'tag' ? (subject ?? '') : '' }];
    });
  }

  tags(): Promise<Ref[]> {
    return this.refs('refs/tags');
  }

  /** A best common ancestor; null for unrelated histories. */
  async mergeBase(a: string, b: string): Promise<string | null> {
    return (await this.ask(['merge-base', a, b]))?.split('\n')[0]?.trim() || null;
  }

  object(id: string): Promise<GitObject | null> {
    return this.objects.read(id);
  }

  /** Id of a commit's tree; null when the clone lacks the commit. */
  async treeOf(commit: string): Promise<string | null> {
    const object = await this.objects.read(commit);
    return object?.type === 'commit' ? parseCommit(object.bytes).tree : null;
  }

  /** The bytes of a blob; null when the clone lacks it. */
  async blob(id: string): Promise<Uint8Array | null> {
    const object = await this.objects.read(id);
    return object?.type === 'blob' ? object.bytes : null;
  }

  /** Every file of a commit, folder by folder. Folders that a partial clone lacks are named, not fetched. */
  async list(commit: string): Promise<Listing> {
    const object = await this.objects.read(commit);
    const tree = object?.type === 'commit' ? parseCommit(object.bytes).tree : null;
    if (tree === null) return { entries: [], missing: [''] };
    const words = ['ls-tree', '-r', '-z', '--full-tree', tree];
    const { status, out } = await runGit(this.place, 'objects', words);
    return status === 0 ? { entries: parseListing(out), missing: [] } : this.walk(tree);
  }

  /** Files whose content, kind or presence differs from HEAD, and files git does not know and does not ignore. */
  async dirtyFiles(): Promise<string[]> {
    if (this.place.bare) return [];
    const head = await this.tryResolve('HEAD');
    const known = new Map((head === null ? [] : (await this.list(head)).entries).map((entry) => [entry.path, entry]));
    const dirty: string[] = [];
    const found = new Set<string>();
    for (const entry of await listWorkTree(this.place)) {
      found.add(entry.path);
      const before = known.get(entry.path);
      if (before === undefined || before.kind !== entry.kind) dirty.push(entry.path);
      else if (entry.kind === 'file' && !(await this.sameContent(entry.path, before.id))) dirty.push(entry.path);
    }
    for (const [path, entry] of known) if (!found.has(path) && entry.kind !== 'submodule') dirty.push(path);
    return dirty.sort();
  }

  close(): void {
    this.objects.close();
  }

  /**
   * Hashed by ourselves: git would run the clean filters that the repository's configuration names.
   * Line ends alone are no difference, since a checkout may turn them.
   */
  private async sameContent(path: string, id: string): Promise<boolean> {
    const bytes = await readWorkFile(this.place.root, path);
    if (bytes === null) return false;
    if (objectId('blob', bytes, this.format) === id) return true;
    if (!bytes.includes(13)) return false;
    const turned = Buffer.from(bytes).toString('latin1').replaceAll('\r\n', '\n');
    return objectId('blob', Buffer.from(turned, 'latin1'), this.format) === id;
  }

  private async walk(root: string): Promise<Listing> {
    const entries: ListedEntry[] = [];
    const missing: string[] = [];
    const open: { prefix: string; id: string }[] = [{ prefix: '', id: root }];
    for (let folder = open.pop(); folder !== undefined; folder = open.pop()) {
      const object = await this.objects.read(folder.id);
      if (object?.type !== 'tree') {
        missing.push(folder.prefix);
        continue;
      }
      for (const { mode, name, id } of parseTree(object.bytes, this.format)) {
        const path = `${folder.prefix}${pathFromBytes(name)}`;
        if (mode === '40000') open.push({ prefix: `${path}/`, id });
        else entries.push({ path, id, mode, kind: kindOf(mode) });
      }
    }
    return { entries: entries.sort((a, b) => (a.path < b.path ? -1 : 1)), missing };
  }

  /** What nearly every run asks first, without the time it takes to load a library. */
  private async answer(words: readonly string[]): Promise<string | null> {
    const { status, out } = await runGit(this.place, 'refs', words);
    return status === 0 ? out.toString('utf8') : null;
  }

  /** Text from git, on the repository's own folder; null when git answers with a failure. */
  private async ask(words: readonly string[]): Promise<string | null> {
    this.git ??= this.open();
    const git = await this.git;
    try {
      return await git.raw([...words]);
    } catch (error) {
      if (/ENOENT/.test(String(error))) throw gitAbsent(error);
      return null;
    }
  }

  private async open(): Promise<SimpleGit> {
    const { simpleGit } = await import('simple-git');
    // The library refuses settings that could run a program; ours are the ones that keep programs from running.
    const unsafe = {
      allowUnsafeFsMonitor: true,
      allowUnsafeHooksPath: true,
      allowUnsafeDiffExternal: true,
      allowUnsafeSshCommand: true,
      allowUnsafePager: true,
      allowUnsafeProtocolOverride: true,
      allowUnsafeGpgProgram: true,
      allowUnsafeConfigPaths: true,
      allowUnsafeConfigEnvCount: true,
    };
    const options = { baseDir: this.place.root, config: [...SAFE_CONFIG], unsafe, maxConcurrentProcesses: 2 };
    return simpleGit(options).env(gitEnvironment(this.place, 'refs'));
  }
}

function parseListing(out: Buffer): ListedEntry[] {
  const entries: ListedEntry[] = [];
  for (let at = 0; at < out.length; ) {
    const end = out.indexOf(0, at);
    const tab = out.indexOf(9, at);
    const [mode = '', , id = ''] = out.toString('latin1', at, tab).split(' ');
    entries.push({ path: pathFromBytes(out.subarray(tab + 1, end)), id, mode, kind: kindOf(mode) });
    at = end + 1;
  }
  return entries;
}

function kindOf(mode: string): TreeEntry['kind'] {
  return mode === '120000' ? 'link' : mode === '160000' ? 'submodule' : 'file';
}
