import { mkdtempSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { mortise } from '../support/run-mortise.ts';
import { fallFor, type HostileRepository, layHostileRepository, SECRET } from './hostile-repository.ts';

/** Everything but line ends and tabs that a terminal would act on, and marks that reorder text. */
const ACTS = /[\u0000-\u0008\u000b-\u001f\u007f-\u009f\u202a-\u202e\u2066-\u2069]/;

describe('a repository that attacks whoever reads it', () => {
  let hostile: HostileRepository;
  beforeAll(() => {
    hostile = layHostileRepository();
  });

  const reviews: [string, string[], number][] = [
    ['a range', ['HEAD~1..HEAD'], 1],
    ['a range without its cases', ['HEAD~1..HEAD', '--no-run'], 1],
    ['the work tree', ['--no-run'], 0],
    ['the index', ['--staged', '--no-run'], 0],
  ];

  it.each(reviews)('executes nothing, and shows nothing raw, when %s is reviewed', async (_, words, expected) => {
    const folder = mkdtempSync(join(tmpdir(), 'mortise-hostile-report-'));
    const files = ['txt', 'md', 'html', 'sarif', 'xml', 'json'].map((form) => join(folder, `review.${form}`));
    const { status, out, err } = await mortise(
      hostile.root,
      'review',
      ...words,
      ...files.flatMap((file) => ['--report', file]),
    );
    expect(err).toBe('');
    expect(status).toBe(expected);
    expect(hostile.executed()).toEqual([]);
    for (const text of [out, err, ...files.map((file) => readFileSync(file, 'utf8'))]) {
      expect(text).not.toMatch(ACTS);
      expect(text).not.toContain(SECRET);
    }
    const [, markdown, html] = files.map((file) => readFileSync(file, 'utf8'));
    expect(html).not.toMatch(/<img|<script|<a\b|<b>\.ts/);
    // Inside a code span Markdown leaves everything as it is.
    expect(markdown!.replace(/(`+)[^\n]*?\1/g, '')).not.toMatch(/<img|<script|@everyone|!\[x\]/);
  });

  it('names what the change tries', async () => {
    const { out } = await mortise(hostile.root, 'review', 'HEAD~1..HEAD', '--no-run', '--json');
    const findings = (JSON.parse(out) as { findings: { kind: string; place: { file: string } }[] }).findings;
    const found = findings.map((one) => `${one.kind} ${one.place.file}`);
    expect(found).toEqual(
      expect.arrayContaining([
        'link-leaves manifests/modules/linked.yaml',
        'link-leaves src/up',
        'submodule-moved library',
        'text-hides src/cool.ts',
        'commands-differ manifests/cases/front.yaml',
        'commands-differ manifests/assembly.yaml',
        'manifest-outside manifests/modules/linked.yaml',
      ]),
    );
    expect(
      found.filter((one) => /^manifest-\S+ manifests\/modules\/(tagged|tagged2|bomb|outside)\.yaml$/.test(one)).length,
    ).toBeGreaterThanOrEqual(4);
  });

  it.each([['drift'], ['check'], ['lineage'], ['constants']])(
    'executes nothing when mortise %s reads it',
    async (name) => {
      const { out, err } = await mortise(hostile.root, name);
      expect(hostile.executed()).toEqual([]);
      expect(`${out}${err}`).not.toMatch(ACTS);
      expect(`${out}${err}`).not.toContain(SECRET);
    },
  );

  // Last, since it leaves marks: without it the tests above could pass on attacks that never work.
  it('is armed: git, asked in the ordinary way, runs what it plants', () => {
    fallFor(hostile);
    expect(hostile.executed()).toEqual(expect.arrayContaining(['diff-driver', 'filter-process', 'fsmonitor']));
  });
});
