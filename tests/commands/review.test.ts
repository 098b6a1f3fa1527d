import { existsSync, mkdtempSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { mortise } from '../support/run-mortise.ts';
import { commitAll, gitIn, laySmallCode, SMALL_CODE, writeFiles } from '../support/small-code.ts';

const COOL = SMALL_CODE['src/cool.ts']!;
/** Arguments in another order: the gravest thing that can be done to a caller without a word. */
const SWAPPED = COOL.replace('rho: number, temp: number', 'temp: number, rho: number');
const CALLER = `import { cool } from './cool.ts';
export function step(density: number, temperature: number): number {
  return cool(density, temperature);
}
`;

interface Document {
  readonly title: string;
  readonly facts: readonly { name: string; value: string }[];
  readonly sections: readonly { title: string; rows: readonly (string | { text: string })[][]; lines?: string[] }[];
  readonly findings: readonly {
    kind: string;
    gravity: string;
    says: string;
    place: { file: string; revision?: string };
  }[];
}

async function reviewed(root: string, ...words: string[]): Promise<Document> {
  const { out, err } = await mortise(root, 'review', ...words, '--json');
  if (out === '') throw new Error(err);
  return JSON.parse(out) as Document;
}

const section = (document: Document, title: string) =>
  document.sections
    .find((one) => one.title === title)
    ?.rows.map((row) => row.map((cell) => (typeof cell === 'string' ? cell : cell.text))) ?? [];

describe('mortise review', () => {
  let root: string;
  beforeAll(() => {
    root = laySmallCode({ 'src/step.ts': CALLER });
    gitIn(root, 'checkout', '-q', '-b', 'theirs');
    writeFiles(root, { 'src/cool.ts': SWAPPED });
    commitAll(root, 'Tidy');
    writeFiles(root, { 'NOTES.md': 'nothing\n' });
    commitAll(root, 'Note');
  });

  it('tells the change of an interface, who calls it, and the version that should have said so', async () => {
    const document = await reviewed(root, 'main..theirs', '--no-run');
    expect(section(document, 'Interfaces and contracts')).toEqual(
      expect.arrayContaining([
        [
          'cool',
          expect.stringMatching(/^argument \w+ of cool moved/),
          expect.stringMatching(/^src\/cool\.ts:\d+$/),
          'src/step.ts:3:10',
        ],
      ]),
    );
    expect(section(document, 'Versions')).toEqual([
      ['cool', 'major', 'none', '1.0.0', 'version: 2.0.0 in manifests/modules/cool.yaml'],
    ]);
    expect(document.findings.filter((one) => one.kind === 'drift-undeclared')).toHaveLength(1);
  });

  it('ends with 1 where a stop was found', async () => {
    expect((await mortise(root, 'review', 'main..theirs', '--no-run')).status).toBe(1);
  });

  it('says which case can see it and why', async () => {
    const document = await reviewed(root, 'main..theirs', '--no-run');
    expect(section(document, 'Cases')).toEqual([['front', 'yes', 'it plugs in cool']]);
  });

  it('tells a change from where it parted, whatever the base did since', async () => {
    const code = laySmallCode();
    gitIn(code, 'checkout', '-q', '-b', 'theirs');
    writeFiles(code, { 'NOTES.md': 'nothing\n' });
    commitAll(code, 'Note');
    gitIn(code, 'checkout', '-q', 'main');
    writeFiles(code, { 'src/cool.ts': SWAPPED });
    commitAll(code, 'Ours');
    const document = await reviewed(code, 'main..theirs', '--no-run');
    expect(section(document, 'Interfaces and contracts')).toEqual([]);
    expect(document.facts.find((fact) => fact.name === 'files that differ')!.value).toBe('1');
    expect(document.sections.find((one) => one.title === 'Limits of this review')!.lines!.join()).toMatch(
      /the base went on/,
    );
  });

  it('needs a base', async () => {
    const { status, err } = await mortise(root, 'review', 'theirs');
    expect([status, err]).toEqual([2, expect.stringContaining('write BASE..HEAD')]);
  });

  it('works without manifests, on modules drafted from the sources', async () => {
    const bare = mkdtempSync(join(tmpdir(), 'mortise-drafted-'));
    gitIn(bare, 'init', '-q', '-b', 'main');
    writeFiles(bare, { 'src/cool.ts': COOL, 'src/step.ts': CALLER });
    commitAll(bare, 'Begin');
    writeFiles(bare, { 'src/cool.ts': SWAPPED });
    commitAll(bare, 'Tidy');
    const document = await reviewed(bare, 'HEAD~1..HEAD');
    expect(section(document, 'Interfaces and contracts').map((row) => row[3])).toContain('src/step.ts:3:10');
    expect(document.facts).toContainEqual({ name: 'modules', value: 'drafted, one a source file' });
    expect(document.sections.find((one) => one.title === 'To look at by eye')!.lines!.join()).toMatch(
      /no case is declared/,
    );
  });

  it('writes every form of report', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'mortise-forms-'));
    const files = ['txt', 'md', 'html', 'sarif', 'xml', 'json'].map((form) => join(folder, `review.${form}`));
    await mortise(root, 'review', 'main..theirs', '--no-run', ...files.flatMap((file) => ['--report', file]));
    for (const file of files) expect(readFileSync(file, 'utf8')).toMatch(/argument \w+ of cool moved/);
  });

  it('refuses a report of an unknown form before doing anything', async () => {
    const { status, err } = await mortise(root, 'review', 'main..theirs', '--report', 'review.pdf');
    expect([status, err]).toEqual([2, expect.stringContaining('.sarif')]);
  });
});

describe('a review of what is not committed', () => {
  it('sees the work tree, and names no commit for it', async () => {
    const root = laySmallCode({ 'src/step.ts': CALLER });
    writeFiles(root, { 'src/cool.ts': SWAPPED });
    const document = await reviewed(root, '--no-run');
    const [undeclared] = document.findings.filter((one) => one.kind === 'drift-undeclared');
    expect(undeclared!.place).toMatchObject({ file: 'src/cool.ts' });
    expect(undeclared!.place.revision).toBeUndefined();
    expect(document.title).toMatch(/the work tree$/);
    expect(gitIn(root, 'status', '--short').trim()).toBe('M src/cool.ts');
  });

  it('sees what is staged and not what is not', async () => {
    const root = laySmallCode();
    writeFiles(root, { 'src/cool.ts': SWAPPED });
    gitIn(root, 'add', 'src/cool.ts');
    writeFiles(root, { 'src/cool.ts': COOL, 'src/step.ts': CALLER });
    const staged = await reviewed(root, '--staged', '--no-run');
    expect(section(staged, 'Versions')).toHaveLength(1);
    expect(staged.facts).toContainEqual({ name: 'files that differ', value: '1' });
    const work = await reviewed(root, '--no-run');
    expect(section(work, 'Versions').map((row) => row[0])).not.toContain('cool');
  });

  it('leaves no object behind in the repository', async () => {
    const root = laySmallCode();
    writeFiles(root, { 'src/cool.ts': SWAPPED });
    const before = gitIn(root, 'count-objects');
    await reviewed(root, '--no-run');
    expect(gitIn(root, 'count-objects')).toBe(before);
  });

  it('says so when nothing differs', async () => {
    const { status, err } = await mortise(laySmallCode(), 'review');
    expect([status, err]).toEqual([2, expect.stringContaining('nothing differs')]);
  });
});

describe('cases of a review', () => {
  const MOVED = SMALL_CODE['run.mjs']!.replace('10 + 1000', '10 + 1001');

  async function recorded(): Promise<string> {
    const root = laySmallCode();
    await mortise(root, 'rerun', 'front', '--record', '--reason', 'agrees with the exact solution');
    commitAll(root, 'Record');
    return root;
  }

  it('are run at the head, and what moved is told', async () => {
    const root = await recorded();
    writeFiles(root, { 'run.mjs': MOVED });
    commitAll(root, 'Move');
    const document = await reviewed(root, 'HEAD~1..HEAD');
    expect(section(document, 'Quantities that moved')[0]!.slice(0, 3)).toEqual([
      'front',
      'temperature',
      'beyond tolerance',
    ]);
    expect(document.findings.map((one) => one.kind)).toContain('result-beyond-tolerance');
  });

  it('are left alone where a kept run read none of the changed files', async () => {
    const root = laySmallCode({ 'src/unused.ts': 'export const unused = 1;\n' });
    await mortise(root, 'rerun', 'front', '--record', '--reason', 'agrees with the exact solution');
    commitAll(root, 'Record');
    await mortise(root, 'rerun', 'front', '--at', 'HEAD');
    writeFiles(root, { 'src/unused.ts': 'export const unused = 2;\n' });
    commitAll(root, 'Change what nothing reads');
    const document = await reviewed(root, 'HEAD~1..HEAD');
    const [row] = section(document, 'Cases');
    // Where the file system does not tell what was read, every file may be part of the build.
    expect(row!.slice(0, 3).join()).toMatch(/^front,(no,its build and run read none|yes,no kept run tells)/);
    expect(section(document, 'Quantities that moved')).toEqual([]);
  });

  it('are held against the reference of the base, even where the change renews it', async () => {
    const root = await recorded();
    writeFiles(root, { 'run.mjs': MOVED });
    await mortise(root, 'rerun', 'front', '--record', '--reason', 'trust me', '--even-changed');
    commitAll(root, 'Move and renew');
    const document = await reviewed(root, 'HEAD~1..HEAD');
    expect(document.findings.map((one) => one.kind)).toEqual(
      expect.arrayContaining(['result-beyond-tolerance', 'reference-renewed']),
    );
  });

  it('are run by the command of the base unless the head is trusted', async () => {
    const root = await recorded();
    const evil = join(root, '..', `${root.split('/').pop()}-evil`);
    writeFiles(root, {
      'evil.mjs': `import { writeFileSync } from 'node:fs'; writeFileSync(${JSON.stringify(evil)}, '');`,
      'manifests/cases/front.yaml': SMALL_CODE['manifests/cases/front.yaml']!.replace('run.mjs', 'evil.mjs'),
    });
    commitAll(root, 'Another command');
    const document = await reviewed(root, 'HEAD~1..HEAD');
    expect(existsSync(evil)).toBe(false);
    expect(document.findings.map((one) => one.kind)).toContain('commands-differ');
    await reviewed(root, 'HEAD~1..HEAD', '--run-head-commands');
    expect(existsSync(evil)).toBe(true);
  });

  it('follow the policy of the base: a change does not decide that it is harmless', async () => {
    const root = laySmallCode();
    writeFiles(root, {
      'src/cool.ts': SWAPPED,
      'manifests/assembly.yaml': `${SMALL_CODE['manifests/assembly.yaml']}policy: {argument-reordered: none}\n`,
    });
    commitAll(root, 'Harmless');
    const document = await reviewed(root, 'HEAD~1..HEAD', '--no-run');
    expect(section(document, 'Versions')[0]!.slice(0, 2)).toEqual(['cool', 'major']);
  });
});

describe('repositories of every kind', () => {
  function changed(root: string): void {
    writeFiles(root, { 'src/cool.ts': SWAPPED });
    commitAll(root, 'Tidy');
  }
  const versions = async (root: string, range = 'HEAD~1..HEAD') =>
    section(await reviewed(root, range, '--no-run'), 'Versions');

  it('a bare one is reviewed without its cases', async () => {
    const root = laySmallCode();
    changed(root);
    const bare = `${root}-bare.git`;
    gitIn(root, 'clone', '-q', '--bare', root, bare);
    expect(section(await reviewed(bare, 'HEAD~1..HEAD'), 'Versions')).toHaveLength(1);
  });

  it('one with a detached head', async () => {
    const root = laySmallCode();
    changed(root);
    gitIn(root, 'checkout', '-q', '--detach');
    expect(await versions(root)).toHaveLength(1);
  });

  it('one with ids of SHA-256', async () => {
    const root = mkdtempSync(join(tmpdir(), 'mortise-sha256-'));
    gitIn(root, 'init', '-q', '-b', 'main', '--object-format=sha256');
    writeFiles(root, SMALL_CODE);
    commitAll(root, 'Begin');
    writeFiles(root, { 'src/cool.ts': SWAPPED });
    expect(section(await reviewed(root, '--no-run'), 'Versions')).toHaveLength(1);
    commitAll(root, 'Tidy');
    expect(await versions(root)).toHaveLength(1);
  });

  it('a linked work tree', async () => {
    const root = laySmallCode();
    changed(root);
    gitIn(root, 'worktree', 'add', '-q', '--detach', `${root}-linked`);
    expect(await versions(`${root}-linked`)).toHaveLength(1);
    writeFiles(`${root}-linked`, { 'src/cool.ts': COOL });
    expect(section(await reviewed(`${root}-linked`, '--no-run'), 'Versions')).toHaveLength(1);
  });

  it('a merge that was resolved by hand', async () => {
    const root = laySmallCode();
    gitIn(root, 'checkout', '-q', '-b', 'side');
    writeFiles(root, { 'src/cool.ts': COOL.replace('1e-3', '2e-3') });
    commitAll(root, 'Side');
    gitIn(root, 'checkout', '-q', 'main');
    writeFiles(root, { 'src/cool.ts': COOL.replace('1e-3', '3e-3') });
    commitAll(root, 'Main');
    try {
      gitIn(root, 'merge', 'side');
    } catch {
      // The conflict that is wanted.
    }
    writeFiles(root, { 'src/cool.ts': SWAPPED });
    commitAll(root, 'Merge');
    const [row] = await versions(root, 'HEAD^1..HEAD');
    expect(row!.slice(0, 2)).toEqual(['cool', 'major']);
  });

  it('a shallow one says when its history is too short', async () => {
    const root = laySmallCode();
    gitIn(root, 'checkout', '-q', '-b', 'theirs');
    changed(root);
    gitIn(root, 'checkout', '-q', 'main');
    writeFiles(root, { 'NOTES.md': 'nothing\n' });
    commitAll(root, 'Note');
    const shallow = `${root}-shallow`;
    gitIn(root, 'clone', '-q', '--depth', '1', '--no-single-branch', `file://${root}`, shallow);
    const document = await reviewed(shallow, 'origin/main..origin/theirs', '--no-run');
    expect(document.sections.find((one) => one.title === 'Limits of this review')!.lines!.join()).toMatch(/too short/);
    const missing = await mortise(shallow, 'review', 'HEAD~1..HEAD', '--no-run');
    expect([missing.status, missing.err]).toEqual([2, expect.stringContaining('shallow')]);
  });

  it('an index with a conflict is refused by name', async () => {
    const root = laySmallCode();
    gitIn(root, 'checkout', '-q', '-b', 'side');
    writeFiles(root, { 'src/cool.ts': COOL.replace('1e-3', '2e-3') });
    commitAll(root, 'Side');
    gitIn(root, 'checkout', '-q', 'main');
    writeFiles(root, { 'src/cool.ts': COOL.replace('1e-3', '3e-3') });
    commitAll(root, 'Main');
    try {
      gitIn(root, 'merge', 'side');
    } catch {
      // The conflict that is wanted.
    }
    const { status, err } = await mortise(root, 'review', '--staged', '--no-run');
    expect([status, err]).toEqual([2, expect.stringContaining('src/cool.ts')]);
  });
});
