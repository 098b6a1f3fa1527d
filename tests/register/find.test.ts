import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import { answers, dayOf, type Query } from '../../src/register/find.ts';
import type { Entry } from '../../src/register/record.ts';
import { Register } from '../../src/register/register.edge.ts';
import { readRegister } from '../../src/register/register-index.edge.ts';
import { sampleContent, standing } from './sample-entry.ts';

const entry = standing();

describe('a question', () => {
  it.each<[string, Query, boolean]>([
    ['words anywhere, in any case, by their beginnings', { text: 'FRONT gfort' }, true],
    ['words of which one is absent', { text: 'front missing' }, false],
    ['a module', { module: 'eos' }, true],
    ['a module and a range that holds its version', { module: 'eos', versions: '>=2.0.3 <2.1.0' }, true],
    ['a module and a range that does not', { module: 'eos', versions: '>2.0.3' }, false],
    ['a range that holds only another module', { module: 'eos', versions: '^1' }, false],
    ['a range that holds the release of a prerelease', { module: 'hydro', versions: '<=1.4.0' }, true],
    ['a component', { component: 'hydrodynamics' }, true],
    ['the SWHID of a source file', { content: `swh:1:cnt:${'b'.repeat(40)}` }, true],
    ['the git id of the same content', { content: 'b'.repeat(40) }, true],
    ['the beginning of an id', { content: 'aaaaaaaa' }, true],
    ['the digest of an output', { content: `sha256:${'c'.repeat(64)}` }, true],
    ['too short a beginning', { content: 'aaaa' }, false],
    ['a case', { case: 'shock' }, true],
    ['another case', { case: 'sod' }, false],
    ['the day itself', { from: '2024-05-06', to: '2024-05-06' }, true],
    ['days before', { to: '2024-05-05' }, false],
    ['an ORCID iD in another form', { person: 'https://orcid.org/0000-0002-1825-0097' }, true],
    ['part of a name', { person: 'carberry' }, true],
    ['a DOI as a link', { result: 'https://doi.org/10.1000/182' }, true],
    ['a DOI that begins the same', { result: '10.1000/18' }, false],
    ['a machine', { machine: 'cluster-7' }, true],
    ['a standing', { standing: 'recorded' }, true],
    ['several at once, one of them false', { module: 'eos', person: 'nobody' }, false],
  ])('by %s', (_, query, expected) => {
    expect(answers(entry, query)).toBe(expected);
  });
});

describe('the index', () => {
  const root = mkdtempSync(join(tmpdir(), 'mortise-register-'));
  process.env.XDG_CACHE_HOME = join(root, 'cache');
  afterAll(() => rmSync(root, { recursive: true, force: true }));
  const register = new Register(root);
  const modules = ['eos', 'hydro', 'cooling'];
  for (let number = 0; number < 40; number++) {
    const content: Entry = {
      ...sampleContent,
      result: { title: `Run ${number}`, doi: `10.1000/${number}`, figure: String(number % 5) },
      code: [{ commit: number.toString(16).padStart(40, '0') }],
      modules: modules.map((module, at) => ({
        module,
        component: `${module}-role`,
        version: `${1 + (number % 3)}.${at}.${number % 7}`,
      })),
      people: [{ name: `Person ${number % 4}` }],
      dates: { published: `20${10 + (number % 10)}-01-02` },
      cases: [{ case: number % 2 === 0 ? 'even' : 'odd', quantity: 'q', class: 'roundoff', tolerances: 0 }],
    };
    register.add({ kind: 'entry', by: { name: 'R. Vale' }, title: `Run ${number}`, content });
  }

  it('answers every question as the entries themselves do', () => {
    const state = readRegister(register.folder);
    const all = [...state.entries.values()].sort((a, b) =>
      dayOf(a) < dayOf(b) ? 1 : dayOf(a) > dayOf(b) ? -1 : a.id < b.id ? 1 : -1,
    );
    const index = register.index();
    const some = <T>(values: readonly T[]) => fc.option(fc.constantFrom(...values), { nil: undefined });
    const query = fc.record({
      text: some(['run', 'run 1', 'hydro', 'nothing', 'person 2']),
      module: some(modules),
      versions: some(['^1', '>=2.0.4', '<1.1.3', '*']),
      component: some(['eos-role', 'none']),
      content: some([`${'0'.repeat(39)}3`, '00000000', 'ffffffff']),
      case: some(['even', 'odd']),
      from: some(['2012-01-01', '2015-01-02']),
      to: some(['2014-12-31', '2019-01-01']),
      person: some(['person', 'person 3', 'nobody']),
      result: some(['10.1000/1', 'run 2', 'figure 4']),
      machine: some(['cluster-7', 'gfortran']),
      standing: some(['recorded', 'withdrawn']),
    });
    fc.assert(
      fc.property(query, (asked) => {
        const given = Object.fromEntries(Object.entries(asked).filter(([, value]) => value !== undefined)) as Query;
        const expected = all.filter((one) => answers(one, given)).map((one) => one.id);
        expect(index.find(given, 0, 100).map((one) => one.id)).toEqual(expected);
        expect(index.count(given)).toBe(expected.length);
      }),
      { numRuns: 300 },
    );
  });

  it('follows the files: added, amended, withdrawn, removed by hand', () => {
    const [first] = register.index().find({ result: '10.1000/7' }, 0, 1);
    const before = register.entry(first!.id)!;
    register.add({
      kind: 'amendment',
      about: before.id,
      replaces: before.seal,
      by: { name: 'R. Vale' },
      content: { ...before.content, notes: 'moved to tape' },
    });
    expect(
      register
        .index()
        .find({ text: 'tape' }, 0, 5)
        .map((one) => one.id),
    ).toEqual([before.id]);
    register.add({ kind: 'withdrawal', about: before.id, by: { name: 'R. Vale' }, content: { reason: 'wrong run' } });
    expect(
      register
        .index()
        .find({ standing: 'withdrawn' }, 0, 5)
        .map((one) => one.id),
    ).toEqual([before.id]);
    for (const file of register.index().filesOf(before.id)) rmSync(join(register.folder, file));
    register.close();
    expect(register.index().count({ text: 'tape' })).toBe(0);
    expect(register.index().total).toBe(39);
    register.close();
  });

  it('is made again when it was damaged', () => {
    const folder = join(root, 'cache', 'mortise', 'register');
    const [file] = readdirSync(folder).filter((name) => name.endsWith('.sqlite'));
    writeFileSync(join(folder, file!), 'no database at all, but long enough to be taken for one'.repeat(100));
    expect(register.index().total).toBe(39);
    register.close();
  });
});
