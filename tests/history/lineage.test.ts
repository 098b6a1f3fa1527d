import { afterAll, describe, expect, it } from 'vitest';
import { lineage } from '../../src/history/lineage.ts';
import { openRepository } from '../../src/sources/open-tree.edge.ts';
import { makeRepository, type TestRepository } from '../sources/repositories.ts';

const opened: { close(): void }[] = [];
afterAll(() => opened.map((one) => one.close()));

const burn = (rate: string, more = '') => `double burn(double rho, double temp) {
  double t9 = temp / 1.0e9;
  double eps = 0.0;
  if (t9 > 10.0) t9 = 10.0;
  for (int i = 0; i < 4; i++) {
    eps += rho * pow(t9, -2.0 / 3.0) * exp(${rate} / pow(t9, 0.3333)) * (1.0 + 0.04 * t9 + 0.01 * t9 * t9);
  }
  ${more}
  return eps;
}
`;
/** Other names, another layout. */
const copied = (text: string) =>
  text.replaceAll('t9', 'x').replaceAll('eps', 'q').replaceAll('rho', 'd').replaceAll('  ', '      ');

async function lineageOf(here: TestRepository, there: TestRepository) {
  const [a, b] = [openRepository(here.root), openRepository(there.root)];
  opened.push(a, b);
  const options = { folder: 'manifests', workers: 0, cache: false };
  const found = await lineage(a, await a.resolve('HEAD'), 'burn', [{ name: 'other', repository: b }], options);
  return found.lineage!;
}

function original(): TestRepository {
  const repository = makeRepository();
  repository.write('burn.c', burn('-3.20'));
  repository.commit('first');
  repository.write('burn.c', burn('-3.38'));
  repository.commit('new rate');
  repository.git('tag', 'v2.1');
  return repository;
}

describe('lineage across repositories', () => {
  it('finds where a copy parted under other names, and what each side lacks', async () => {
    const there = original();
    const here = makeRepository();
    for (let day = 0; day < 9; day += 1) here.commit('days go by');
    here.write('old/ignite.c', copied(burn('-3.38')));
    here.commit('take burn from the other code');
    here.git('mv', 'old/ignite.c', 'burn.c');
    here.commit('move');
    here.write('burn.c', copied(burn('-3.38', 'if (rho < 0.0) return 0.0;')));
    here.commit('guard');
    there.write('burn.c', burn('-3.38', 'if (temp < 1.0e6) return 0.0;'));
    const mend = there.commit('mend at low temperature');
    const found = await lineageOf(here, there);
    expect(found.events.map(({ what }) => what)).toEqual(['born', 'moved from old/ignite.c']);
    expect(found.copies).toHaveLength(1);
    const { descent, version } = found.copies[0]!;
    expect(descent.direction).toBe('from there to here');
    expect(version).toBe('2.1.0');
    expect(descent.split.commit).toBe(there.git('rev-parse', 'v2.1'));
    expect(descent.procedures).toHaveLength(1);
    expect(descent.procedures[0]!.missingHere.map(({ commit }) => commit)).toEqual([mend]);
    expect(descent.procedures[0]!.missingThere).toHaveLength(1);
    expect(found.findings.map(({ kind }) => kind)).toEqual(['copy-behind']);
  });

  it('turns the direction round when seen from the original', async () => {
    const here = original();
    const there = makeRepository();
    for (let day = 0; day < 9; day += 1) there.commit('days go by');
    there.write('burn.c', copied(burn('-3.38')));
    there.commit('take it');
    const found = await lineageOf(here, there);
    expect(found.copies[0]!.descent.direction).toBe('from here to there');
    expect(found.findings).toEqual([]);
  });

  it('calls the direction unknown where neither side shows what led up to the shared version', async () => {
    const here = makeRepository();
    here.write('burn.c', burn('-3.38'));
    here.commit('begin');
    const there = makeRepository();
    there.write('burn.c', burn('-3.38'));
    there.commit('begin');
    const { descent } = (await lineageOf(here, there)).copies[0]!;
    expect(descent.direction).toBe('unknown');
    expect(descent.evidence.length).toBeGreaterThan(0);
  });

  it('finds no copy in a code that has nothing of the module', async () => {
    const there = makeRepository();
    there.write(
      'other.c',
      'int sum(int n, const int *x) {\n  int s = 0;\n  for (int i = 0; i < n; i++) { if (x[i] > 3) s += x[i] * i; else s -= 2; }\n  return s;\n}\n',
    );
    there.commit('begin');
    expect((await lineageOf(original(), there)).copies).toEqual([]);
  });
});
