import { Ajv2020 } from 'ajv/dist/2020.js';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { parse, stringify } from 'yaml';
import { manifestSchema, schemaText } from '../../src/manifests/json-schema.ts';
import { loadManifests } from '../../src/manifests/load-manifests.ts';
import { readShippedContracts } from '../../src/manifests/manifest-files.edge.ts';
import { ManifestText } from '../../src/manifests/manifest-text.ts';
import type { Problem } from '../../src/manifests/problem.ts';
import type { Shape } from '../../src/manifests/shape.ts';
import { MANIFEST_SHAPES, type ManifestSort } from '../../src/manifests/shapes.ts';
import { validate } from '../../src/manifests/validate.ts';
import { readYamlTree } from '../../src/manifests/yaml-tree.ts';
import { SOUND } from './manifest-text.ts';

const SORTS = Object.keys(MANIFEST_SHAPES) as ManifestSort[];
// ajv's strict mode asks for a type beside every pattern, which a schema for property names does not need.
const ajv = new Ajv2020({ strict: true, strictTypes: false, allErrors: true });
const schemas = Object.fromEntries(SORTS.map((sort) => [sort, ajv.compile(manifestSchema(sort))]));

/** What the checks of the loader say of one manifest, without the names that only other manifests could declare. */
function problemsOf(sort: ManifestSort, text: string): Problem[] {
  const { root, problems } = readYamlTree(new ManifestText('x.yaml', text));
  const found = [...problems];
  if (root !== null) validate(root, MANIFEST_SHAPES[sort], { problems: found });
  return found;
}

describe('the published JSON Schemas', () => {
  it.each(SORTS)('say for %s what the shapes of the loader say', async (sort) => {
    await expect(schemaText(sort)).toMatchFileSnapshot(`../../manifests/schema/${sort}.schema.json`);
  });

  it('accept every manifest that the loader finds sound', () => {
    const sort = (path: string): ManifestSort =>
      path.includes('modules')
        ? 'module'
        : path.includes('contracts')
          ? 'contract'
          : path.includes('cases')
            ? 'case'
            : 'assembly';
    for (const [path, text] of Object.entries(SOUND)) {
      expect(schemas[sort(path)]!(parse(text)), path).toBe(true);
    }
    for (const [path, bytes] of readShippedContracts()) {
      const check = schemas.contract!;
      expect(check(parse(new TextDecoder().decode(bytes))), `${path} ${JSON.stringify(check.errors)}`).toBe(true);
    }
  });

  it.each(SORTS)('and the loader accept alike whatever is made by the shape of %s', (sort) => {
    fc.assert(
      fc.property(sample(MANIFEST_SHAPES[sort]), (value) => {
        const accepted = schemas[sort]!(value);
        expect(accepted, JSON.stringify(schemas[sort]!.errors)).toBe(true);
        expect(problemsOf(sort, stringify(value, { aliasDuplicateObjects: false }))).toEqual([]);
      }),
      { numRuns: 150 },
    );
  });

  it.each(SORTS)('and the loader refuse alike what is spoilt in a manifest made by the shape of %s', (sort) => {
    fc.assert(
      fc.property(
        sample(MANIFEST_SHAPES[sort]),
        fc.nat(),
        fc.constantFrom<unknown>('##', [[]], { '#': 1 }, true, -1.5),
        (value, at, put) => {
          const spoilt = replaceAt(structuredClone(value), at, put);
          const byLoader = problemsOf(sort, stringify(spoilt, { aliasDuplicateObjects: false })).length === 0;
          const bySchema = schemas[sort]!(spoilt);
          // A range whose ends are exchanged, a path with an empty part and the like are beyond a schema: it may accept more, never less.
          if (byLoader) expect(bySchema, JSON.stringify(spoilt)).toBe(true);
          if (!bySchema) expect(byLoader, JSON.stringify(spoilt)).toBe(false);
        },
      ),
      { numRuns: 200 },
    );
  });

  it('ship with the program beside the contracts, all of which are sound', () => {
    const { set, findings } = loadManifests(new Map(), { shipped: readShippedContracts() });
    expect(findings).toEqual([]);
    expect(set.contracts.size).toBeGreaterThanOrEqual(12);
    // Constants obey no identity among themselves that a probe could test without their digits.
    const without = [...set.contracts.values()].filter(({ value }) => value.identities === undefined);
    expect(without.map(({ value }) => value.contract)).toEqual(['physical-constants']);
  });
});

const TEXTS: Readonly<Record<string, readonly string[]>> = {
  prose: ['some words', 'Saha equilibrium: n_e', "it's"],
  name: ['density', 'eos-ionising', 'x.y_z', 'constructor'],
  symbol: ['/temperature', 'eos_ionising', 'state.rho', 'double precision'],
  variable: ['EOS', '_x', 'n1'],
  version: ['1.2.3', '0.1.0-rc.1+build.5', '10.20.30'],
  'contract-reference': ['gas-state ^1.2', 'opacity >=1 <3', 'x 1.x'],
  unit: ['g/cm3', 'erg/g', 'K', '1'],
  path: ['src/eos/a.f90', 'a b/c', '.hidden'],
  digest: [`sha256:${'0f'.repeat(32)}`],
  day: ['2027-01-31', '2024-02-29'],
  command: ['node run.js --out {out}', 'make'],
};

/** Values that have a shape. */
function sample(shape: Shape): fc.Arbitrary<unknown> {
  switch (shape.is) {
    case 'text':
      return fc.constantFrom(...TEXTS[shape.form]!);
    case 'choice':
      return fc.constantFrom(...shape.of);
    case 'number':
      return shape.whole === true
        ? fc.integer({ min: shape.least ?? -1000, max: 100_000 })
        : fc.double({ min: shape.above !== undefined ? 1e-30 : (shape.least ?? -1e30), max: 1e30, noNaN: true });
    case 'flag':
      return fc.boolean();
    case 'scalar':
      return fc.oneof(fc.constantFrom('ionising', 'x'), fc.integer(), fc.boolean());
    case 'range':
      return fc
        .tuple(
          fc.option(fc.double({ min: -1e9, max: 0, noNaN: true })),
          fc.option(fc.double({ min: 0, max: 1e9, noNaN: true })),
        )
        .map(([low, high]) => [low, high]);
    case 'list':
      return fc.array(sample(shape.of), { minLength: shape.atLeast ?? 0, maxLength: 3 });
    case 'map': {
      const keys = typeof shape.key === 'string' ? TEXTS[shape.key]! : shape.key;
      return fc
        .uniqueArray(fc.constantFrom(...keys), { minLength: shape.atLeast ?? 0, maxLength: 3 })
        .chain((names) => fc.tuple(...names.map((name) => fc.tuple(fc.constant(name), sample(shape.of)))))
        .map((entries) => Object.fromEntries(entries));
    }
    case 'either':
      return fc.oneof(...shape.of.map(sample));
    case 'record': {
      const keys = Object.entries(shape.keys);
      const model = Object.fromEntries(keys.map(([name, key]) => [name, sample(key.shape)]));
      return fc.record(model, { requiredKeys: keys.filter(([, key]) => key.required).map(([name]) => name) });
    }
  }
}

/** Puts a value at the n-th place of a tree, counted through all maps and lists. */
function replaceAt(value: unknown, at: number, put: unknown): unknown {
  const places: [Record<string, unknown>, string][] = [];
  const walk = (node: unknown) => {
    if (typeof node !== 'object' || node === null) return;
    for (const key of Object.keys(node)) {
      places.push([node as Record<string, unknown>, key]);
      walk((node as Record<string, unknown>)[key]);
    }
  };
  walk(value);
  const place = places[at % Math.max(1, places.length)];
  if (place === undefined) return put;
  place[0][place[1]] = put;
  return value;
}
