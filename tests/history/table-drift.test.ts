import { afterAll, expect, it } from 'vitest';
import { drift } from '../../src/history/drift.ts';
import { openRepository } from '../../src/sources/open-tree.edge.ts';
import { makeRepository, type TestRepository } from '../sources/repositories.ts';

const opened: { close(): void }[] = [];
afterAll(() => opened.map((one) => one.close()));

const MANIFEST = `module: opacity
component: opacity
version: 1.0.0
source: {language: table, files: [tables/opacity.csv]}
tables:
  - file: tables/opacity.csv
`;

/** Rosseland opacities of nobody: what matters is where the axis ends and what the headings say. */
const table = (heading: string, points: readonly number[]) =>
  `${heading}\n${points.map((point, index) => `${point},${(index * 7919) % 13}`).join('\n')}\n`;

async function changesOf(repository: TestRepository): Promise<string[][]> {
  const open = openRepository(repository.root);
  opened.push(open);
  const report = await drift(open, await open.range(undefined), { cache: false, workers: 0 });
  return report.steps.at(-1)!.changes.map(({ kind, says }) => [kind, says]);
}

it('tells where the axis of a table ends now, though no manifest gives its range', async () => {
  const repository = makeRepository();
  repository.write('manifests/modules/opacity.yaml', MANIFEST);
  repository.write('tables/opacity.csv', table('temperature [K],kappa [cm2/g]', [10, 100, 1000, 10000, 100000]));
  repository.commit('begin');
  repository.write('tables/opacity.csv', table('temperature [K],kappa [cm2/g]', [10, 100, 1000, 10000]));
  repository.commit('take the new table');
  expect(await changesOf(repository)).toEqual(
    expect.arrayContaining([
      ['table-content', 'table tables/opacity.csv has other content'],
      ['table-edges-narrowed', 'axis temperature runs from 10 to 10000, ran from 10 to 100000'],
    ]),
  );
});

it('tells that a heading names another unit, and that an axis holds logarithms now', async () => {
  const repository = makeRepository();
  repository.write('manifests/modules/opacity.yaml', MANIFEST);
  repository.write('tables/opacity.csv', table('temperature [K],kappa [cm2/g]', [10, 100, 1000]));
  repository.commit('begin');
  repository.write('tables/opacity.csv', table('temperature [log10(K)],kappa [m2/kg]', [1, 2, 3]));
  repository.commit('tidy');
  const changes = await changesOf(repository);
  expect(changes).toContainEqual(['unit-changed', 'the unit of kappa is m2/kg, was cm2/g']);
  expect(changes).toContainEqual([
    'convention-changed',
    'axis temperature holds logarithms to base 10, held plain values',
  ]);
  expect(changes.map(([kind]) => kind)).not.toContain('table-edges-narrowed');
});
