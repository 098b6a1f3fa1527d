import { describe, expect, it } from 'vitest';
import { readTypescript } from '../../../src/readers/typescript/read-typescript.ts';

const source = `import { kB as boltzmann } from './constants.js';
/** Atomic mass unit [g] */
export const AMU = 1.66053906660e-24;
const TWO = AMU * 2;
/**
 * Pressure of a perfect gas.
 * @param rho density [g/cm3]
 * @param temp_K temperature
 * @returns pressure in dyn/cm2
 */
export function pressure(rho: number, temp_K: number, mu = 1.0, ...rest: number[]): number {
  return (rho * boltzmann * temp_K) / (mu * AMU);
}
export class Star extends Body {
  /** mass [g] */
  readonly mass: number = 2e33;
  constructor(mass: number) { super(); this.mass = mass; }
  get radius(): number { return 1; }
  evolve(dt: number, to?: Float64Array): [rho: number, temp: number] {
    const [p, e] = eos(rho, this.mass, 1.5e7);
    return [p, e];
  }
}
const luminosity = (r: number) => 4 * Math.PI * r ** 2;
`;

describe('the TypeScript reader', () => {
  const read = readTypescript('src/eos.ts', source);

  it('gives procedures with arguments, types, defaults and what is optional', () => {
    const pressure = read.procedures.find((one) => one.name === 'pressure')!;
    expect(pressure.args.map((one) => [one.name, one.type, one.optional, one.default, one.passing])).toEqual([
      ['rho', 'number', false, undefined, 'positional'],
      ['temp_K', 'number', false, undefined, 'positional'],
      ['mu', 'number', true, '1.0', 'positional'],
      ['rest', 'number[]', true, undefined, 'variadic'],
    ]);
    expect([pressure.line, pressure.visibility, pressure.result?.type]).toEqual([11, 'public', 'number']);
    expect(read.procedures.map((one) => `${one.parent ?? ''}.${one.name} ${one.kind}`)).toEqual([
      '.pressure function',
      'Star.constructor constructor',
      'Star.evolve method',
      'Star.radius property',
      '.luminosity function',
    ]);
    expect(read.procedures.find((one) => one.name === 'evolve')!.returns).toEqual(['rho', 'temp']);
  });

  it('evaluates constants of the file', () => {
    expect(read.constants.map((one) => [one.name, one.value])).toEqual([
      ['AMU', 1.6605390666e-24],
      ['TWO', 2 * 1.6605390666e-24],
    ]);
  });

  it('reads units from documentation and names', () => {
    const claims = read.claims.map((one) => `${one.parent ?? ''}.${one.name} ${one.what} ${one.value} ${one.from}`);
    expect(claims).toContain('pressure.rho unit g/cm3 docstring');
    expect(claims).toContain('pressure.temp_K unit K name');
    expect(claims).toContain('.pressure unit dyn/cm2 docstring');
    expect(claims).toContain('.AMU unit g docstring');
    expect(claims).toContain('Star.mass unit g docstring');
  });

  it('gives calls with their arguments and the names a tuple is unpacked into', () => {
    const eos = read.calls.find((one) => one.callee === 'eos')!;
    expect([eos.caller, eos.unpacked, eos.args.map((one) => one.form)]).toEqual([
      'Star::evolve',
      ['p', 'e'],
      ['name', 'element', 'literal'],
    ]);
  });

  it('records imports with their renames', () => {
    expect(read.uses).toEqual([
      { module: './constants.js', parent: null, line: 1, column: 1, only: [{ local: 'boltzmann', name: 'kB' }] },
    ]);
  });

  it('says where a file is broken and still gives the rest', () => {
    const broken = readTypescript('a.ts', 'export function f(a: number) { return a }\nconst x = ;\nfunction g(b) {}');
    expect(broken.procedures.map((one) => one.name)).toEqual(['f', 'g']);
    expect(broken.incomplete).toEqual([{ line: 2, why: 'not read: Expression expected.' }]);
  });
});
