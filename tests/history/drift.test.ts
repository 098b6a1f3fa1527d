import { afterAll, describe, expect, it } from 'vitest';
import { type DriftReport, drift } from '../../src/history/drift.ts';
import { openRepository } from '../../src/sources/open-tree.edge.ts';
import { makeRepository, type TestRepository } from '../sources/repositories.ts';

const opened: { close(): void }[] = [];
afterAll(() => opened.map((one) => one.close()));

async function driftOf(repository: TestRepository, range?: string): Promise<DriftReport> {
  const open = openRepository(repository.root);
  opened.push(open);
  return drift(open, await open.range(range), { cache: false, workers: 0 });
}

const manifest = (version: string, extra = '') => `module: eos
component: equation-of-state
version: ${version}
source: {language: c, files: [src/eos.c]}
${extra}`;
const EOS = `double eos(double rho, double temp) {
  return 8.31e7 * rho * temp;
}
`;
const steps = (report: DriftReport) =>
  report.steps.map((step) => [
    step.module,
    step.commit.subject,
    step.changes.map(({ kind }) => kind).join(),
    step.asked,
    step.state,
  ]);

describe('drift with manifests', () => {
  it('finds an argument added without a bump at its commit, and calls left behind', async () => {
    const repository = makeRepository();
    repository.write('manifests/modules/eos.yaml', manifest('1.0.0'));
    repository.write('src/eos.c', EOS);
    repository.write('src/hydro.c', 'double eos(double, double);\ndouble p(void) {\n  return eos(1.0, 2.0);\n}\n');
    repository.commit('begin');
    repository.write('src/eos.c', EOS.replace('temp)', 'temp, double ye)').replace('* temp', '* temp * ye'));
    const bad = repository.commit('take composition');
    repository.write('src/eos.c', EOS.replace('temp)', 'temp, double ye)').replace('* temp', '* ye * temp'));
    repository.commit('tidy');
    const report = await driftOf(repository);
    expect(report.findings).toHaveLength(1);
    expect(report.findings[0]).toMatchObject({
      kind: 'drift-undeclared',
      gravity: 'stop',
      module: 'eos',
      place: { file: 'src/eos.c', line: 1, revision: bad },
      says: expect.stringContaining('eos takes ye, required'),
    });
    const step = report.steps.find(({ commit }) => commit.id === bad)!;
    expect(step.callers).toEqual([{ file: 'src/hydro.c', line: 3, column: expect.any(Number), revision: bad }]);
  });

  it('takes a bump in the same commit, or in a later commit of the same release, as declared', async () => {
    for (const together of [true, false]) {
      const repository = makeRepository();
      repository.write('manifests/modules/eos.yaml', manifest('1.0.0'));
      repository.write('src/eos.c', EOS);
      repository.commit('begin');
      repository.git('tag', 'v1.0.0');
      repository.write('src/eos.c', EOS.replace('temp)', 'temp, double ye)'));
      if (!together) repository.commit('take composition');
      repository.write('manifests/modules/eos.yaml', manifest('2.0.0'));
      repository.commit('two');
      repository.git('tag', 'v2.0.0');
      expect((await driftOf(repository)).findings).toEqual([]);
    }
  });

  it('does not let a bump of a later release declare what an earlier one carried', async () => {
    const repository = makeRepository();
    repository.write('manifests/modules/eos.yaml', manifest('1.0.0'));
    repository.write('src/eos.c', EOS);
    repository.commit('begin');
    repository.write('src/eos.c', EOS.replace('temp)', 'temp, double ye)'));
    const bad = repository.commit('take composition');
    repository.git('tag', 'v1.1');
    repository.write('manifests/modules/eos.yaml', manifest('2.0.0'));
    repository.commit('too late');
    repository.git('tag', 'v2.0');
    const report = await driftOf(repository);
    expect(report.findings.map(({ kind, place }) => [kind, place.revision])).toEqual([['drift-undeclared', bad]]);
  });

  it('finds a domain narrowed and a convention moved in the manifest without a bump', async () => {
    const offers = (low: string, zero: string) =>
      manifest(
        '1.0.0',
        `offers:\n  - contract: gas-state ^1\n    conventions: {energy-zero: ${zero}}\n    domain: {temperature: [${low}, 1e8]}\n`,
      );
    const repository = makeRepository();
    repository.write('src/eos.c', EOS);
    repository.write('manifests/modules/eos.yaml', offers('10', 'ionised'));
    repository.commit('begin');
    repository.write('manifests/modules/eos.yaml', offers('100', 'ionised'));
    const first = repository.commit('narrow');
    repository.write('manifests/modules/eos.yaml', offers('100', 'neutral-atom'));
    const second = repository.commit('move');
    const report = await driftOf(repository);
    expect(report.findings.map(({ place, says }) => [place.revision, says]).sort()).toEqual(
      [
        [first, expect.stringContaining('the domain of temperature under gas-state is [100, 100000000], was [10')],
        [second, expect.stringContaining('energy-zero under gas-state is neutral-atom, was ionised')],
      ].sort(),
    );
  });
});

describe('drift without manifests', () => {
  it('drafts a module a file and follows it through moves and new names', async () => {
    const repository = makeRepository();
    repository.write('eos.c', EOS);
    repository.commit('begin');
    repository.git('mv', 'eos.c', 'state.c');
    repository.commit('rename');
    repository.write('state.c', `${EOS}\ndouble sound(double rho) {\n  return rho;\n}\n`);
    repository.commit('sound');
    const report = await driftOf(repository);
    expect(report.manifests).toBe(false);
    expect(steps(report)).toEqual([
      ['state', 'begin', '', 'none', 'declared'],
      ['state', 'rename', '', 'none', 'declared'],
      ['state', 'sound', 'procedure-added', 'minor', 'open'],
    ]);
    expect(report.steps.map(({ event }) => event)).toEqual(['born', 'moved', null]);
    expect(report.findings.map(({ kind }) => kind)).toEqual(['drift-unversioned']);
  });

  it('holds what went out between two tags against them', async () => {
    const repository = makeRepository();
    repository.write('eos.c', EOS);
    repository.commit('begin');
    repository.git('tag', 'v1.0');
    repository.write('eos.c', EOS.replace('temp)', 'temp, double ye)'));
    const bad = repository.commit('take composition');
    repository.git('tag', 'v1.0.1');
    repository.write('eos.c', EOS.replace('temp)', 'temp, double ye, double z)'));
    repository.commit('and metals');
    repository.git('tag', 'v2.0');
    const report = await driftOf(repository);
    expect(report.findings.map(({ place, gravity }) => [place.revision, gravity])).toEqual([[bad, 'caution']]);
    expect(report.findings[0]!.next).toContain('2.0.0');
  });

  it('takes over nothing that a merge found on one of its sides, and finds what the merge itself made', async () => {
    const repository = makeRepository();
    repository.write('eos.c', EOS);
    repository.write('other.c', 'double other(double a) {\n  return a;\n}\n');
    repository.commit('begin');
    repository.git('checkout', '-q', '-b', 'side');
    repository.write('eos.c', EOS.replace('temp)', 'temp, double ye)'));
    repository.commit('on the side');
    repository.git('checkout', '-q', 'main');
    repository.write('other.c', 'double other(double a, double b) {\n  return a;\n}\n');
    repository.commit('on main');
    repository.git('merge', '-q', '--no-ff', '--no-commit', 'side');
    repository.write('eos.c', `${EOS.replace('temp)', 'temp, double ye)')}\ndouble evil(double x) {\n  return x;\n}\n`);
    repository.commit('merge');
    const report = await driftOf(repository);
    const told = report.steps
      .filter(({ event }) => event === null)
      .map((step) => [step.commit.subject, step.changes.map(({ says }) => says).join()]);
    expect(told.sort()).toEqual([
      ['merge', 'function evil is new'],
      ['on main', 'other takes b, required'],
      ['on the side', 'eos takes ye, required'],
    ]);
  });

  it('reads shallow and partial clones as far as they go', async () => {
    const repository = makeRepository();
    repository.git('config', 'uploadpack.allowFilter', 'true');
    for (let count = 0; count < 4; count += 1) {
      repository.write('eos.c', EOS.replace('temp)', `temp, double x${count})`));
      repository.commit(`state ${count}`);
    }
    const { mkdtempSync } = await import('node:fs');
    const folder = mkdtempSync('/tmp/mortise-test-');
    const from = `file://${repository.root}`;
    repository.git('clone', '-q', '--depth=2', from, `${folder}/shallow`);
    const shallow = openRepository(`${folder}/shallow`);
    expect((await drift(shallow, await shallow.range(undefined), { cache: false })).commits).toBe(2);
    repository.git('clone', '-q', '--filter=blob:none', '--no-checkout', from, `${folder}/blobless`);
    const blobless = openRepository(`${folder}/blobless`);
    const report = await drift(blobless, await blobless.range(undefined), { cache: false });
    expect(report.commits).toBe(4);
    expect(report.notes.join()).toContain('not in this clone');
    expect(report.steps.flatMap(({ changes }) => changes)).toEqual([]);
    repository.git('clone', '-q', '--filter=tree:0', '--no-checkout', from, `${folder}/treeless`);
    const treeless = openRepository(`${folder}/treeless`);
    expect((await drift(treeless, await treeless.range(undefined), { cache: false })).notes.join()).toContain('lacks');
    for (const one of [shallow, blobless, treeless]) one.close();
  });
});
