import { describe, expect, it } from 'vitest';
import { checkStates } from '../../src/audit/states.ts';
import { axisRange, edgesOf } from '../../src/fit/fit-tables.ts';
import type { Dataset } from '../../src/model/interface.ts';
import type { Declaration, ModuleManifest, TableAxis } from '../../src/model/manifest.ts';

const declared = (axis: TableAxis): Declaration<ModuleManifest> => ({
  file: 'manifests/modules/opacity.yaml',
  value: {
    module: 'opacity',
    component: 'opacity',
    version: '1.0.0',
    source: { language: 'table', files: ['opacity.h5'] },
    tables: [{ file: 'opacity.h5', axes: { logt: axis } }],
  },
  placeOf: (path) => ({ file: 'manifests/modules/opacity.yaml', line: path.length, column: 1 }),
  lineText: () => '',
  excerptOf: () => ({ line: 1, text: '', column: 1, width: 1 }),
});

const visited = (high: number) => ({
  by: 'case cloud-shock',
  modules: new Set(['opacity']),
  states: { temperature: { range: [10, high] as const, unit: 'K' } },
});

const logt: Dataset = {
  name: '/logt',
  type: 'float64',
  bytes: 8,
  shape: [61],
  attributes: {},
  axis: { first: 1, last: 7, spacing: 'linear', points: 61, logBase: '10' },
};

const check = (axis: TableAxis, high: number, dataset: Dataset | null) =>
  checkStates(
    [declared(axis)],
    [visited(high)],
    () => null,
    (_file, _name, one) => edgesOf(one, dataset === null ? null : axisRange(dataset, one)),
  ).map(({ kind, says, place }) => [kind, says, place.line]);

describe('the states that a run visits', () => {
  it('are held against the edges of the table itself where no manifest declares them', () => {
    const axis = { quantity: 'temperature', unit: 'K' };
    expect(check(axis, 9e6, logt)).toEqual([]);
    expect(check(axis, 3e7, logt)).toEqual([
      [
        'table-left',
        'case cloud-shock leaves table opacity.h5 of opacity: temperature reaches 3e7 K, valid up to 1e7 K.'.replace(
          'case',
          'Case',
        ),
        4,
      ],
    ]);
    expect(check(axis, 3e7, null)).toEqual([]);
  });

  it('are held against the table rather than against a range that was written for another', () => {
    const axis = { quantity: 'temperature', unit: 'K', range: [10, 1e9] as const };
    expect(check(axis, 3e7, logt)).toHaveLength(1);
    expect(check(axis, 3e7, null)).toEqual([]);
  });

  it('stay inside where the manifest gives the same edges in fewer digits', () => {
    const axis = { quantity: 'temperature', unit: 'K', range: [10, 1.0001e7] as const };
    expect(check(axis, 1.00005e7, logt)).toEqual([]);
  });
});
