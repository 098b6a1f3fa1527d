import { execFileSync } from 'node:child_process';
import { chmodSync, existsSync, mkdirSync, readdirSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { findRepository } from '../../src/sources/find-repository.edge.ts';
import { idAt, openRepository, openTree } from '../../src/sources/open-tree.edge.ts';
import { contentSwhid } from '../../src/sources/swhid.ts';
import { makeRepository, temporaryFolder } from './repositories.ts';

const text = (bytes: Uint8Array | null) => (bytes === null ? null : Buffer.from(bytes).toString('utf8'));
const paths = async (cwd: string, revision?: string) =>
  (await (await openTree(cwd, revision)).entries()).map((entry) => entry.path);

describe('openTree', () => {
  it('reads the work tree without a revision and the commit with one', async () => {
    const repository = makeRepository();
    repository.write('src/eos.f90', 'one\n');
    const first = repository.commit('first');
    repository.write('src/eos.f90', 'two\n');
    repository.write('src/new.f90', 'new\n');
    const work = await openTree(join(repository.root, 'src'));
    expect(work.revision).toBeNull();
    expect((await work.entries()).map((entry) => entry.path)).toEqual(['src/eos.f90', 'src/new.f90']);
    expect(text(await work.read('src/eos.f90'))).toBe('two\n');
    const committed = await openTree(repository.root, 'main');
    expect(committed.revision).toBe(first);
    expect(text(await committed.read('src/eos.f90'))).toBe('one\n');
    expect(await committed.read('src/new.f90')).toBeNull();
  });

  it('keeps bytes that are not UTF-8, in files and in names, and names with newlines', async () => {
    const repository = makeRepository();
    const name = Buffer.concat([Buffer.from(`${repository.root}/caf`), Buffer.from([0xe9]), Buffer.from('.f')]);
    writeFileSync(name, Buffer.from([0xc5, 0x20, 0xe9, 0x0a]));
    repository.write('two\nlines.f', 'x\n');
    repository.commit('names');
    for (const revision of [undefined, 'HEAD']) {
      const tree = await openTree(repository.root, revision);
      expect((await tree.entries()).map((entry) => entry.path)).toEqual(['caf\\xe9.f', 'two\nlines.f']);
      expect([...(await tree.read('caf\\xe9.f'))!]).toEqual([0xc5, 0x20, 0xe9, 0x0a]);
      expect(text(await tree.read('two\nlines.f'))).toBe('x\n');
    }
  });

  it('lists links but never follows them, whether to a file or through a folder, and never leaves the root', async () => {
    const outside = temporaryFolder();
    writeFileSync(join(outside, 'secret'), 'secret\n');
    const repository = makeRepository();
    symlinkSync(join(outside, 'secret'), join(repository.root, 'link'));
    repository.write('in/file', 'ok\n');
    repository.commit('link');
    const committed = await openTree(repository.root, 'HEAD');
    expect((await committed.entries()).find((entry) => entry.path === 'link')?.kind).toBe('link');
    rmSync(join(repository.root, 'in'), { recursive: true });
    symlinkSync(outside, join(repository.root, 'in'));
    const work = await openTree(repository.root);
    for (const path of [
      'link',
      'in/secret',
      '../secret',
      'in/../in/secret',
      '/etc/passwd',
      '.git/config',
      '.GIT/config',
    ]) {
      expect(await work.read(path), path).toBeNull();
      expect(await committed.read(path), path).toBeNull();
    }
  });

  it('does not wait for ever on a pipe', async () => {
    const repository = makeRepository();
    execFileSync('mkfifo', [join(repository.root, 'pipe')]);
    expect(await (await openTree(repository.root)).read('pipe')).toBeNull();
  });

  it('reads plain folders that are in no repository', async () => {
    const folder = temporaryFolder();
    mkdirSync(join(folder, 'a'));
    writeFileSync(join(folder, 'a', 'b.f90'), 'x\n');
    expect(findRepository(folder)).toBeNull();
    expect(await paths(folder)).toEqual(['a/b.f90']);
    await expect(openTree(folder, 'HEAD')).rejects.toThrow(/no git repository/);
  });

  it('says which revision is unknown and what to do, and takes no option for a revision', async () => {
    const repository = makeRepository();
    repository.commit('empty');
    await expect(openTree(repository.root, 'nonesuch')).rejects.toMatchObject({
      name: 'SourceProblem',
      next: expect.stringContaining('git log'),
    });
    for (const revision of ['--help', '-n1', '', 'a\nb', '--output=x']) {
      await expect(openTree(repository.root, revision), revision).rejects.toThrow(/is no revision/);
    }
  });

  it('reads bare, linked, detached and sha256 repositories', async () => {
    for (const format of ['sha1', 'sha256']) {
      const repository = makeRepository(`--object-format=${format}`);
      repository.write('a.f', 'a\n');
      const commit = repository.commit('a');
      repository.git('checkout', '-q', '--detach');
      const linked = join(temporaryFolder(), 'linked');
      repository.git('worktree', 'add', '-q', '--detach', linked);
      const bare = join(temporaryFolder(), 'bare.git');
      repository.git('clone', '-q', '--bare', repository.root, bare);
      for (const place of [repository.root, linked, bare]) {
        const tree = await openTree(place, 'HEAD');
        expect(tree.revision).toBe(commit);
        expect(text(await tree.read('a.f'))).toBe('a\n');
      }
      expect(await paths(linked)).toEqual(['a.f']);
      await expect(openTree(bare)).rejects.toThrow(/bare/);
    }
  });

  it('takes a missing object of shallow and partial clones as an answer, and fetches nothing', async () => {
    const repository = makeRepository();
    repository.git('config', 'uploadpack.allowFilter', 'true');
    repository.write('src/a.f', 'old\n');
    const old = repository.commit('old');
    repository.write('src/a.f', 'new\n');
    repository.commit('new');
    const from = `file://${repository.root}`;
    const shallow = join(temporaryFolder(), 'shallow');
    repository.git('clone', '-q', '--depth=1', from, shallow);
    expect(text(await (await openTree(shallow, 'HEAD')).read('src/a.f'))).toBe('new\n');
    await expect(openTree(shallow, old)).rejects.toThrow(/is no revision/);

    const blobless = join(temporaryFolder(), 'blobless');
    repository.git('clone', '-q', '--filter=blob:none', '--no-checkout', from, blobless);
    const tree = await openTree(blobless, 'HEAD');
    expect(await paths(blobless, 'HEAD')).toEqual(['src/a.f']);
    expect(await tree.read('src/a.f')).toBeNull();

    const treeless = join(temporaryFolder(), 'treeless');
    repository.git('clone', '-q', '--filter=tree:0', '--no-checkout', from, treeless);
    expect(await paths(treeless, 'HEAD~1')).toEqual([]);
  });

  it('runs nothing that the repository names', async () => {
    const repository = makeRepository();
    const trap = join(temporaryFolder(), 'trap');
    const mark = `${trap}.ran`;
    writeFileSync(trap, `#!/bin/sh\ntouch ${mark}\ncat\n`);
    chmodSync(trap, 0o755);
    repository.write('.gitattributes', '* filter=trap diff=trap\n');
    repository.write('a.f', 'a\n');
    repository.commit('a');
    for (const [key, value] of [
      ['core.fsmonitor', trap],
      ['core.hooksPath', join(trap, '..')],
      ['core.pager', trap],
      ['core.sshCommand', trap],
      ['core.worktree', '/etc'],
      ['filter.trap.clean', trap],
      ['filter.trap.smudge', trap],
      ['filter.trap.process', trap],
      ['diff.trap.textconv', trap],
      ['diff.trap.command', trap],
      ['diff.external', trap],
      ['log.showSignature', 'true'],
      ['gpg.program', trap],
      ['extensions.partialClone', 'origin'],
      ['remote.origin.promisor', 'true'],
      ['remote.origin.url', `ext::${trap}`],
      ['protocol.ext.allow', 'always'],
      ['alias.rev-parse', `!${trap}`],
    ] as const) {
      execFileSync('git', ['config', '-f', join(repository.root, '.git/config'), key, value]);
    }
    repository.write('a.f', 'changed\n');
    const tree = await openTree(repository.root, 'HEAD');
    expect(text(await tree.read('a.f'))).toBe('a\n');
    const work = openRepository(repository.root);
    expect(await work.dirtyFiles()).toEqual(['a.f']);
    expect(await work.object(`${'0'.repeat(39)}1`)).toBeNull();
    await work.tags();
    await openTree(repository.root).then((one) => one.entries());
    expect(existsSync(mark)).toBe(false);
    work.close();
  });

  it('writes nothing into the repository that it reads', async () => {
    const repository = makeRepository();
    repository.write('a.f', 'a\n');
    repository.commit('a');
    const before = execFileSync('find', ['.', '-newer', 'a.f', '-type', 'f'], {
      cwd: repository.root,
      encoding: 'utf8',
    });
    const tree = await openTree(repository.root, 'HEAD');
    await tree.entries();
    await openRepository(repository.root).dirtyFiles();
    expect(execFileSync('find', ['.', '-newer', 'a.f', '-type', 'f'], { cwd: repository.root, encoding: 'utf8' })).toBe(
      before,
    );
    expect(readdirSync(repository.root)).toEqual(['.git', 'a.f']);
  });
});

describe('Repository', () => {
  it('tells what is not committed by content, so that touched files and turned line ends are clean', async () => {
    const repository = makeRepository();
    repository.write('same.f', 'a\nb\n');
    repository.write('turned.f', 'a\nb\n');
    repository.write('gone.f', 'g\n');
    repository.write('.gitignore', '*.o\n');
    repository.commit('all');
    repository.write('same.f', 'a\nb\n');
    repository.write('turned.f', 'a\r\nb\r\n');
    repository.write('new.f', 'n\n');
    repository.write('made.o', 'o\n');
    rmSync(join(repository.root, 'gone.f'));
    const opened = openRepository(repository.root);
    expect(await opened.dirtyFiles()).toEqual(['gone.f', 'new.f']);
    opened.close();
  });

  it('reads tags through annotation, ranges, and common ancestors', async () => {
    const repository = makeRepository();
    const first = repository.commit('first');
    repository.git('tag', '-a', 'v1.0', '-m', 'the first');
    const second = repository.commit('second');
    repository.git('tag', 'v1.1');
    const opened = openRepository(repository.root);
    expect((await opened.tags()).map(({ name, commit, subject }) => ({ name, commit, subject }))).toEqual([
      { name: 'refs/tags/v1.0', commit: first, subject: 'the first' },
      { name: 'refs/tags/v1.1', commit: second, subject: '' },
    ]);
    expect(await opened.range('v1.0..')).toEqual({ from: first, to: second });
    expect(await opened.range('..v1.0')).toEqual({ from: null, to: first });
    expect(await opened.mergeBase(first, second)).toBe(first);
    await expect(opened.range('v1.0...v1.1')).rejects.toThrow(/no range/);
    opened.close();
  });

  it('gives a file and a folder of a commit the identifiers that git gives them', async () => {
    const repository = makeRepository();
    repository.write('src/a.f', 'a\n');
    const commit = repository.commit('a');
    const opened = openRepository(repository.root);
    const file = await idAt(opened, commit, 'src/a.f');
    expect(`swh:1:cnt:${file?.id}`).toBe(contentSwhid(Buffer.from('a\n')));
    expect(await idAt(opened, commit, 'src')).toEqual({ type: 'dir', id: repository.git('rev-parse', 'HEAD:src') });
    expect(await idAt(opened, commit, 'none')).toBeNull();
    opened.close();
  });

  it('answers many reads at once from one process, in any order', async () => {
    const repository = makeRepository();
    for (let file = 0; file < 200; file += 1) repository.write(`${file}.f`, `${'x'.repeat(file * 100)}\n`);
    repository.commit('many');
    const tree = await openTree(repository.root, 'HEAD');
    const entries = await tree.entries();
    const read = await Promise.all(entries.map(async ({ path }) => [path, (await tree.read(path))?.length]));
    expect(read).toEqual(entries.map(({ path }) => [path, Number.parseInt(path, 10) * 100 + 1]));
  });
});
