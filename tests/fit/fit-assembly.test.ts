import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fitAssembly, fitCases } from '../../src/fit/fit-assembly.ts';
import type { FileInterface } from '../../src/model/interface.ts';
import { load, SOUND } from '../manifests/manifest-text.ts';
import { argument, call, file, procedure } from './interfaces.ts';

const EOS = 'manifests/modules/eos-ionising.yaml';
const HYDRO = 'manifests/modules/hydro.yaml';
const CONTRACT = 'manifests/contracts/gas-state.yaml';

const EOS_SOURCE = file('fortran', {
  procedures: [
    procedure('eos_ionising', [
      argument('rho', { intent: 'in' }),
      argument('temp', { intent: 'in' }),
      argument('pres', { intent: 'out' }),
      argument('eint', { intent: 'out' }),
    ]),
  ],
});
const HYDRO_SOURCE = file('fortran', { calls: [call('eos_ionising', 'rho', 'temp', 'pres', 'eint')] });

function fitted(
  changed: Readonly<Record<string, readonly [string, string]>> = {},
  sources: Readonly<Record<string, FileInterface | null>> = {},
) {
  const files = Object.fromEntries(
    Object.entries({ [HYDRO]: ['typescript', 'fortran'] as const, ...changed }).map(([path, [from, to]]) => {
      const text = SOUND[path]!.replace('typescript', 'fortran');
      expect(SOUND[path], path).toContain(from);
      return [path, from === 'typescript' ? text : text.replace(from, to)];
    }),
  );
  const { set, findings } = load(files);
  expect(findings).toEqual([]);
  const all = { 'src/eos/ionising.f90': EOS_SOURCE, 'src/hydro.ts': HYDRO_SOURCE, ...sources };
  const read = Object.entries(all).flatMap(([path, one]) => (one === null ? [] : [[path, one] as const]));
  return fitAssembly(set, new Map(read));
}

const brief = (result: ReturnType<typeof fitted>) =>
  result.findings.map(
    (one) =>
      `${one.gravity} ${one.kind} ${one.place.file.split('/').at(-1)}:${one.place.line}:${one.place.column} ${one.says}`,
  );

describe('a joint', () => {
  it('whose two halves agree fits, and nothing is said', () => {
    const { joints, findings } = fitted();
    expect(findings).toEqual([]);
    expect(joints.map((one) => [one.expecting.module, one.contract, one.offering?.module, one.state])).toEqual([
      ['hydro', 'gas-state', 'eos-ionising', 'fits'],
    ]);
    expect(joints[0]!.rows.map((one) => one.offering.carrier?.position)).toEqual([1, 2, 3, 4]);
    expect(joints[0]!.adapter).toBeNull();
  });

  it('with a module that nobody plugged in is unmet, and the modules that could meet it are named', () => {
    const result = fitted({ 'manifests/assembly.yaml': ['  equation-of-state: eos-ionising\n', ''] });
    expect(brief(result)).toEqual([
      'stop joint-unmet hydro.yaml:6:15 hydro expects gas-state, and no module is plugged into equation-of-state.',
    ]);
    expect(result.findings[0]!.next).toContain('plug "eos-ionising" into equation-of-state');
    expect(result.joints[0]).toMatchObject({ offering: null, state: 'does not fit' });
  });

  it('that is optional may stay unmet', () => {
    const { set } = load({
      'manifests/assembly.yaml': SOUND['manifests/assembly.yaml']!.replace('  equation-of-state: eos-ionising\n', ''),
      [HYDRO]: `${SOUND[HYDRO]}    optional: true\n`,
    });
    expect(fitAssembly(set, new Map([['src/hydro.ts', HYDRO_SOURCE]])).findings).toEqual([]);
  });

  it('with two modules that offer the same is told to choose', () => {
    const { set } = load({
      'manifests/assembly.yaml': `${SOUND['manifests/assembly.yaml']}  second: other\n`,
      'manifests/modules/other.yaml': SOUND[EOS]!.replace('module: eos-ionising', 'module: other').replace(
        'component: equation-of-state',
        'component: second',
      ),
    });
    const { findings } = fitAssembly(
      set,
      new Map([
        ['src/hydro.ts', HYDRO_SOURCE],
        ['src/eos/ionising.f90', EOS_SOURCE],
      ]),
    );
    expect(findings.map((one) => one.kind)).toEqual(['joint-ambiguous']);
    expect(findings[0]!.evidence.filter((one) => one.place !== undefined)).toHaveLength(2);
  });
});

describe('units', () => {
  it('of one dimension and another scale fit through an adapter, with the factor in the message', () => {
    const result = fitted({ [EOS]: ['internal-energy: erg/g', 'internal-energy: J/kg'] });
    expect(brief(result)).toEqual([
      'stop joint-unit eos-ionising.yaml:10:30 internal-energy crosses from erg/g at hydro to J/kg at eos-ionising; value in J/kg = 1e-4 * value in erg/g.',
    ]);
    const [joint] = result.joints;
    expect(joint!.state).toBe('fits through an adapter');
    expect(joint!.adapter!.steps.map((one) => [one.quantity, one.factor, one.offset])).toEqual([
      ['density', 1, 0],
      ['temperature', 1, 0],
      ['pressure', 1, 0],
      ['internal-energy', 1e-4, 0],
    ]);
    expect(result.findings[0]!.evidence.map((one) => one.place?.file)).toEqual([undefined, HYDRO, CONTRACT]);
  });

  it('that an adapter already converts are a note', () => {
    const { set } = load({
      [EOS]: SOUND[EOS]!.replace('internal-energy: erg/g', 'internal-energy: J/kg'),
      [HYDRO]: `${SOUND[HYDRO]}    adapter: {file: src/glue.f90}\n`,
    });
    const { findings, joints } = fitAssembly(
      set,
      new Map([
        ['src/hydro.ts', HYDRO_SOURCE],
        ['src/eos/ionising.f90', EOS_SOURCE],
      ]),
    );
    expect(findings.map((one) => [one.gravity, one.kind])).toEqual([['note', 'joint-unit']]);
    expect(joints[0]!.adapted).toBe(true);
  });

  it('with another zero carry an offset, and the domain is compared after it', () => {
    const result = fitted({
      [HYDRO]: [
        'domain: {density: [1e-25, 1e-18], temperature: [10, 1e7]}',
        'units: {temperature: degC}\n    domain: {temperature: [-263.15, 1000]}',
      ],
    });
    expect(result.findings.map((one) => one.kind)).toEqual(['joint-unit']);
    expect(result.joints[0]!.adapter!.steps[1]).toMatchObject({ factor: 1, offset: 273.15 });
  });

  it('of two dimensions do not fit', () => {
    const result = fitted({ [EOS]: ['internal-energy: erg/g', 'internal-energy: erg/cm3'] });
    expect(result.findings.map((one) => [one.gravity, one.kind])).toEqual([['stop', 'joint-dimension']]);
    expect(result.joints[0]!.state).toBe('does not fit');
    expect(result.joints[0]!.adapter).toBeNull();
  });
});

describe('a contract', () => {
  it('that says another dimension than both sides use is a caution', () => {
    const result = fitted({
      [EOS]: ['internal-energy: erg/g', 'internal-energy: erg/cm3'],
      [HYDRO]: ['    domain:', '    units: {internal-energy: erg/cm3}\n    domain:'],
    });
    expect(result.findings.map((one) => [one.gravity, one.kind])).toEqual([['caution', 'joint-dimension']]);
    expect(result.joints[0]!.state).toBe('fits');
  });
});

describe('conventions', () => {
  it('that both sides state and that differ do not fit', () => {
    const result = fitted({
      [HYDRO]: ['    domain:', '    conventions: {energy-zero: ionised}\n    domain:'],
    });
    expect(brief(result)).toEqual([
      'stop joint-convention hydro.yaml:7:32 internal-energy crosses with energy-zero ionised at hydro and neutral-atom at eos-ionising.',
    ]);
    expect(result.joints[0]!.rows.map((one) => one.state)).toEqual(['fits', 'fits', 'fits', 'does not fit']);
  });

  it('that only the offering side moves away from the default are a caution', () => {
    const result = fitted({ [EOS]: ['energy-zero: neutral-atom', 'energy-zero: ionised'] });
    expect(brief(result)).toEqual([
      "caution joint-convention hydro.yaml:6:15 eos-ionising gives internal-energy with energy-zero ionised; the contract's default is neutral-atom, and hydro does not say which it relies on.",
    ]);
  });
});

describe('domains', () => {
  it('of the asking side must lie inside those of the answering side', () => {
    const result = fitted({ [HYDRO]: ['[10, 1e7]', '[3, 1e9]'] });
    expect(brief(result)).toEqual([
      'stop joint-domain hydro.yaml:7:52 hydro can reach temperature below 10 and above 1e8 K, where eos-ionising is not valid.',
    ]);
    expect(result.findings[0]!.evidence[1]!.place).toMatchObject({ file: EOS, line: 12 });
  });

  it('are compared in the units of the answering side', () => {
    const kelvin = fitted({
      [HYDRO]: ['domain: {density: [1e-25, 1e-18]', 'units: {density: kg/m3}\n    domain: {density: [1e-22, 1e-15]'],
    });
    expect(kelvin.findings.map((one) => one.kind)).toEqual(['joint-unit']);
    const over = fitted({
      [HYDRO]: ['domain: {density: [1e-25, 1e-18]', 'units: {density: kg/m3}\n    domain: {density: [1e-22, 1e-9]'],
    });
    expect(over.findings.map((one) => one.kind)).toEqual(['joint-unit', 'joint-domain']);
  });

  it('without a bound lie inside nothing that has one', () => {
    const result = fitted({ [HYDRO]: ['temperature: [10, 1e7]', 'temperature: [10, null]'] });
    expect(result.findings.map((one) => one.kind)).toEqual(['joint-domain']);
  });

  it("fall back on the contract's when the answering side states none", () => {
    const result = fitted({
      [EOS]: ['    domain: {density: [1e-26, 1e-14], temperature: [10, 1e8]}\n', ''],
      [HYDRO]: ['[10, 1e7]', '[1, 1e7]'],
    });
    expect(brief(result)).toEqual([
      'stop joint-domain hydro.yaml:7:52 hydro can reach temperature below 3 K, where eos-ionising is not valid.',
    ]);
  });
});

describe('versions', () => {
  it('of the contract outside the range of a side do not fit', () => {
    const result = fitted({ [CONTRACT]: ['version: 1.2.0', 'version: 2.0.0'] });
    expect(brief(result)).toEqual([
      'stop joint-version eos-ionising.yaml:7:15 eos-ionising offers gas-state ^1.2, and the contract is at version 2.0.0.',
      'stop joint-version hydro.yaml:6:15 hydro expects gas-state ^1, and the contract is at version 2.0.0.',
    ]);
    expect(result.joints[0]!.state).toBe('does not fit');
  });
});

describe('arguments', () => {
  it('that the source takes in another order than it is called with are found by their names', () => {
    const swapped = file('fortran', { procedures: [procedure('eos_ionising', ['temp', 'rho', 'pres', 'eint'])] });
    const result = fitted({}, { 'src/eos/ionising.f90': swapped });
    expect(brief(result)).toEqual([
      'stop joint-order hydro.ts:7:3 hydro passes density, temperature, pressure, internal-energy; eos_ionising of eos-ionising takes temperature, density, pressure, internal-energy.',
    ]);
    expect(result.findings[0]!.evidence.map((one) => one.place?.file)).toEqual(['src/eos/ionising.f90', HYDRO]);
    expect(result.joints[0]!.rows.map((one) => one.state)).toEqual([
      'fits through an adapter',
      'fits through an adapter',
      'fits',
      'fits',
    ]);
  });

  it('that a call passes by names of its own are taken to be in the order of the procedure', () => {
    const own = file('fortran', { calls: [call('eos_ionising', 'a', 'b', 'c', 'd')] });
    const swapped = file('fortran', { procedures: [procedure('eos_ionising', ['temp', 'rho', 'pres', 'eint'])] });
    expect(fitted({}, { 'src/hydro.ts': own, 'src/eos/ionising.f90': swapped }).findings).toEqual([]);
  });

  it('whose order is declared and not seen need an adapter when the procedure takes another', () => {
    const result = fitted(
      { [HYDRO]: ['    domain:', '    order: [temperature, density, pressure, internal-energy]\n    domain:'] },
      { 'src/hydro.ts': file('fortran', {}) },
    );
    expect(brief(result)).toEqual([
      'stop joint-order hydro.yaml:7:12 hydro passes temperature, density, pressure, internal-energy; eos_ionising of eos-ionising takes density, temperature, pressure, internal-energy.',
    ]);
    expect(result.joints[0]!.state).toBe('fits through an adapter');
    expect(
      result.joints[0]!.adapter!.steps.map((one) => [one.quantity, one.expectedPosition, one.offeredPosition]),
    ).toEqual([
      ['density', 2, 1],
      ['temperature', 1, 2],
      ['pressure', 3, 3],
      ['internal-energy', 4, 4],
    ]);
  });

  it('that the manifest names and the source lacks are found, with the nearest', () => {
    const renamed = file('fortran', { procedures: [procedure('eos_ionising', ['rho', 'temp', 'pres', 'eints'])] });
    const result = fitted({}, { 'src/eos/ionising.f90': renamed, 'src/hydro.ts': file('fortran', {}) });
    expect(brief(result)).toEqual([
      'stop argument-missing eos-ionising.yaml:9:83 eos_ionising has no argument, result or field called "eint".',
      'caution argument-unmapped eos-ionising.yaml:9:5 eos_ionising takes "eints", and the manifest does not say what it carries.',
    ]);
    expect(result.findings[0]!.next).toBe('write "eints", or bring "eint" back.');
  });

  it('are compared in Fortran without regard to case', () => {
    const shouting = fitted({ [EOS]: ['density: rho', 'density: RHO'] });
    expect(shouting.findings).toEqual([]);
  });

  it.each([
    ['type', { type: 'integer', bytes: 4 }, 'argument-type', 'stop'],
    ['rank', { rank: 1, bounds: [':'], shape: [null] }, 'joint-shape', 'stop'],
    ['intent', { intent: 'out' as const }, 'argument-intent', 'stop'],
    ['loose intent', { intent: 'inout' as const }, 'argument-intent', 'caution'],
  ])('whose %s contradicts the contract are found', (_, more, kind, gravity) => {
    const source = file('fortran', {
      procedures: [procedure('eos_ionising', [argument('rho', more), 'temp', 'pres', 'eint'])],
    });
    const result = fitted({}, { 'src/eos/ionising.f90': source, 'src/hydro.ts': file('fortran', {}) });
    expect(result.findings.map((one) => [one.kind, one.gravity])).toEqual([[kind, gravity]]);
  });

  it('that are too few in a call are found at the call', () => {
    const short = file('fortran', { calls: [call('eos_ionising', 'rho', 'temp', 'pres')] });
    const result = fitted({}, { 'src/hydro.ts': short });
    expect(brief(result)).toEqual(['stop joint-call hydro.ts:7:3 eos_ionising takes 4 arguments; this call passes 3.']);
    expect(result.joints[0]!.state).toBe('does not fit');
  });

  it('of other bytes in a call are found, unless the build promotes the default', () => {
    const passes = (kind: string | undefined) => {
      const one = call('eos_ionising', 'rho', 'temp', 'pres', 'eint');
      const typed = one.args.map((each) => ({
        ...each,
        type: 'real',
        bytes: 4,
        ...(kind === undefined ? {} : { kind }),
      }));
      return file('fortran', { calls: [{ ...one, args: typed }] });
    };
    const result = fitted({}, { 'src/hydro.ts': passes(undefined) });
    expect(result.findings.map((each) => each.kind)).toEqual(Array(4).fill('joint-call'));
    const promoted = fitted(
      { 'manifests/assembly.yaml': ['plugged:', 'build: {run: make, makes: [x], promote: {real: 8}}\nplugged:'] },
      { 'src/hydro.ts': passes(undefined) },
    );
    expect(promoted.findings).toEqual([]);
  });

  it('that are fields of a record, members of a COMMON block or a result carry quantities too', () => {
    const source = file('fortran', {
      procedures: [
        procedure('eos_ionising', [argument('state', { type: 'type(gas)', bytes: null })], {
          result: argument('eos_ionising', { intent: 'out' }),
          kind: 'function',
        }),
      ],
      types: [
        {
          name: 'gas',
          kind: 'type',
          parent: null,
          fields: [argument('rho')],
          bindings: [],
          attributes: [],
          line: 1,
          column: 1,
        },
      ],
      commons: [
        { name: 'eosout', parent: 'eos_ionising', members: [argument('temp'), argument('pres')], line: 3, column: 1 },
      ],
    });
    const result = fitted(
      {
        [EOS]: [
          '{density: rho, temperature: temp, pressure: pres, internal-energy: eint}',
          '{density: state%rho, temperature: /eosout/temp, pressure: eosout/pres, internal-energy: result}',
        ],
      },
      { 'src/eos/ionising.f90': source, 'src/hydro.ts': file('fortran', {}) },
    );
    expect(result.findings).toEqual([]);
    expect(result.joints[0]!.rows.map((one) => one.offering.carrier?.how)).toEqual([
      'field',
      'common',
      'common',
      'result',
    ]);
  });
});

describe('the source', () => {
  it('that is missing is a stop at its path', () => {
    const result = fitted({}, { 'src/eos/ionising.f90': null });
    expect(brief(result)).toEqual([
      'stop source-missing eos-ionising.yaml:5:37 The source file src/eos/ionising.f90 is not there, or is a link.',
    ]);
  });

  it('without the procedure is a stop, and only a caution where something could not be read', () => {
    const source = file('fortran', { procedures: [procedure('eos_ionised', ['rho'])] });
    const result = fitted({}, { 'src/eos/ionising.f90': source, 'src/hydro.ts': file('fortran', {}) });
    expect(brief(result)).toEqual([
      'stop procedure-missing eos-ionising.yaml:5:73 The source of eos-ionising has no procedure called "eos_ionising".',
    ]);
    expect(result.findings[0]!.next).toBe('write "eos_ionised", or bring "eos_ionising" back.');
    const torn = { ...source, incomplete: [{ line: 4, why: 'a template' }] };
    const unsure = fitted({}, { 'src/eos/ionising.f90': torn, 'src/hydro.ts': file('fortran', {}) });
    expect(unsure.findings.map((one) => one.gravity)).toEqual(['caution']);
  });

  it('that states another unit in a comment is a caution with the comment as evidence', () => {
    const claim = {
      name: 'eint',
      parent: 'eos_ionising',
      what: 'unit' as const,
      value: 'J/kg',
      text: 'specific internal energy [J/kg]',
      from: 'comment' as const,
      line: 5,
      column: 30,
    };
    const result = fitted({}, { 'src/eos/ionising.f90': { ...EOS_SOURCE, claims: [claim] } });
    expect(brief(result)).toEqual([
      'caution claim-contradicts eos-ionising.yaml:10:30 The code says that eint is in J/kg; the manifest says that internal-energy is in erg/g, a factor of 1e4 apart.',
    ]);
    expect(result.findings[0]!.evidence[1]).toEqual({
      says: 'comment: specific internal energy [J/kg]',
      place: { file: 'src/eos/ionising.f90', line: 5, column: 30 },
    });
  });

  it('that states the same unit in other words is no finding', () => {
    const claim = {
      name: 'eint',
      parent: 'eos_ionising',
      what: 'unit' as const,
      value: 'erg g^-1',
      text: '[erg g^-1]',
      from: 'bracket' as const,
      line: 5,
      column: 30,
    };
    expect(fitted({}, { 'src/eos/ionising.f90': { ...EOS_SOURCE, claims: [claim] } }).findings).toEqual([]);
  });
});

describe('a module in TypeScript', () => {
  const quiet = file('fortran', {});
  const code = (result: { type: string } | null) =>
    file('typescript', {
      procedures: [
        procedure('eos_ionising', [argument('rho', { type: 'number' }), argument('temp', { type: 'number' })], {
          kind: 'function',
          result: result === null ? null : argument('eos_ionising', result),
        }),
      ],
      types: [
        {
          name: 'GasState',
          kind: 'interface',
          parent: null,
          fields: [argument('pres', { type: 'number' }), argument('eint', { type: 'number' })],
          bindings: [],
          attributes: [],
          line: 1,
          column: 1,
        },
      ],
      claims: [
        {
          name: 'eint',
          parent: 'GasState',
          what: 'unit',
          value: 'J/kg',
          text: 'J/kg',
          from: 'comment',
          line: 3,
          column: 5,
        },
      ],
    });
  const eos = { [EOS]: ['language: fortran', 'language: typescript'] as const };

  it('gives what comes out as fields of its result, with the claims on them', () => {
    const { joints, findings } = fitted(eos, {
      'src/eos/ionising.f90': code({ type: 'GasState' }),
      'src/hydro.ts': quiet,
    });
    expect(joints[0]!.rows.map((one) => one.offering.carrier?.how)).toEqual([
      'argument',
      'argument',
      'result',
      'result',
    ]);
    expect(findings.map((one) => [one.kind, one.gravity])).toEqual([['claim-contradicts', 'caution']]);
  });

  it('may write the type of its result out in place, or leave it to be inferred', () => {
    for (const result of [{ type: '{ pres: number; eint?: number }' }, null]) {
      expect(fitted(eos, { 'src/eos/ionising.f90': code(result), 'src/hydro.ts': quiet }).findings).toEqual([]);
    }
    const lacks = fitted(eos, { 'src/eos/ionising.f90': code({ type: '{ pres: number }' }), 'src/hydro.ts': quiet });
    expect(lacks.findings.map((one) => one.kind)).toEqual(['argument-missing']);
  });
});

describe('tables', () => {
  const table = (axis: string) => ({
    [EOS]: [
      'select:',
      `tables:\n  - file: data/eos.json\n    axes: {temp: {quantity: temperature, unit: K, ${axis}}}\nselect:`,
    ] as const,
  });

  it('that end before what the module promises are a stop', () => {
    const result = fitted(table('range: [10, 1e7]'));
    expect(brief(result)).toEqual([
      'stop table-range eos-ionising.yaml:12:52 eos-ionising promises temperature [10, 1e8] K, and its table covers [10, 1e7] K.',
    ]);
  });

  it('that reach as far as what the module promises are no finding', () => {
    expect(fitted(table('range: [10, 1e8]')).findings).toEqual([]);
  });

  it('are taken at what they hold, also where an axis holds logarithms', () => {
    const dataset = {
      name: '/temp',
      type: 'real',
      bytes: 8,
      shape: [71],
      attributes: {},
      axis: { first: 1, last: 7, spacing: 'linear' as const, points: 61 },
    };
    const changed = table('spacing: log10');
    const [from, to] = changed[EOS]!;
    const result = fitted({ [EOS]: [from, to] }, {});
    expect(result.findings).toEqual([]);
    const { set } = load({
      [EOS]: SOUND[EOS]!.replace(from, to),
      [HYDRO]: SOUND[HYDRO]!.replace('typescript', 'fortran'),
    });
    const read = new Map([
      ['src/eos/ionising.f90', EOS_SOURCE],
      ['data/eos.json', file('table', { datasets: [dataset] })],
      ['src/hydro.ts', HYDRO_SOURCE],
    ]);
    expect(fitAssembly(set, read).findings.map((one) => one.says)).toEqual([
      'eos-ionising promises temperature [10, 1e8] K, and its table covers [10, 1e7] K.',
    ]);
  });
});

describe('a case with modules of its own', () => {
  it('has its joints checked too, and says only what is new', () => {
    const { set, findings } = load({
      'manifests/modules/eos-short.yaml': SOUND[EOS]!.replace('module: eos-ionising', 'module: eos-short').replace(
        '1e8',
        '1e5',
      ),
      'manifests/cases/cloud-shock.yaml': SOUND['manifests/cases/cloud-shock.yaml']!.replace(
        'outputs:',
        'with: {equation-of-state: eos-short}\noutputs:',
      ),
    });
    expect(findings).toEqual([]);
    const result = fitCases(
      set,
      new Map([
        ['src/hydro.ts', HYDRO_SOURCE],
        ['src/eos/ionising.f90', EOS_SOURCE],
      ]),
    );
    expect(result.joints.map((one) => one.offering?.module)).toEqual(['eos-ionising', 'eos-short']);
    expect(result.findings.map((one) => [one.kind, one.evidence.at(-1)?.says])).toEqual([
      ['joint-domain', 'with the modules of case cloud-shock'],
    ]);
  });
});

describe('laws', () => {
  it('a joint whose two halves are equal always fits', () => {
    const unit = fc.constantFrom('g/cm3', 'kg/m3', 'K', 'degC', 'erg/g', 'MeV', '1', 'cm2/g', 'dyn/cm2');
    const range = fc.tuple(
      fc.double({ min: -1e30, max: 0, noNaN: true }),
      fc.double({ min: 0, max: 1e30, noNaN: true }),
    );
    fc.assert(
      fc.property(
        fc.uniqueArray(
          fc.record({
            name: fc.constantFrom('a', 'b', 'c', 'constructor', 'x-y'),
            unit,
            range,
            zero: fc.constantFrom('one', 'two'),
          }),
          {
            minLength: 1,
            maxLength: 4,
            selector: (one) => one.name,
          },
        ),
        (quantities) => {
          const contract = quantities
            .map(
              (one) =>
                `  ${one.name}: {unit: "${one.unit}", intent: in, conventions: {zero-${one.name}: [one, two]}}\n`,
            )
            .join('');
          const side = [
            `    units: {${quantities.map((one) => `${one.name}: "${one.unit}"`).join(', ')}}`,
            `    conventions: {${quantities.map((one) => `zero-${one.name}: ${one.zero}`).join(', ')}}`,
            `    domain: {${quantities.map((one) => `${one.name}: [${one.range.join(', ')}]`).join(', ')}}`,
          ].join('\n');
          const module = (name: string, how: string) =>
            `module: ${name}\ncomponent: ${name}\nversion: 1.0.0\nsource: {language: fortran, files: [${name}.f90]}\n${how}:\n  - contract: state ^1\n${side}\n`;
          const { set, findings } = load({
            ...Object.fromEntries(Object.keys(SOUND).map((path) => [path, null])),
            'manifests/assembly.yaml': 'assembly: x\nplugged: {asks: asks, gives: gives}\n',
            'manifests/contracts/state.yaml': `contract: state\nversion: 1.0.0\ncomponent: gives\nquantities:\n${contract}`,
            'manifests/modules/asks.yaml': module('asks', 'expects'),
            'manifests/modules/gives.yaml': module('gives', 'offers'),
          });
          expect(findings).toEqual([]);
          const result = fitAssembly(
            set,
            new Map([
              ['asks.f90', file('fortran', {})],
              ['gives.f90', file('fortran', {})],
            ]),
          );
          expect(result.findings).toEqual([]);
          expect(result.joints.map((one) => one.state)).toEqual(['fits']);
        },
      ),
      { numRuns: 60 },
    );
  });

  it('plugging in nothing says nothing, and interfaces of other files change nothing', () => {
    const before = fitted();
    const { set } = load({ [HYDRO]: SOUND[HYDRO]!.replace('typescript', 'fortran') });
    const more = new Map([
      ['src/eos/ionising.f90', EOS_SOURCE],
      ['src/hydro.ts', HYDRO_SOURCE],
      ['src/other.f90', EOS_SOURCE],
    ]);
    expect(fitAssembly(set, more)).toEqual(before);
  });
});
