import { describe, expect, it } from 'vitest';
import { census } from '../../src/constants/census.ts';
import { emptyInterface, type FileInterface, type LiteralUse, type NamedConstant } from '../../src/model/interface.ts';

const constant = (name: string, text: string, line = 1): NamedConstant => ({
  name,
  text,
  line,
  column: 9,
  parent: null,
  type: 'real',
  bytes: 8,
  value: Number(text.replace('d', 'e')),
});
const literal = (text: string, more: Partial<LiteralUse> = {}): LiteralUse => ({
  text,
  value: Number(text.replace('d', 'e')),
  line: 7,
  column: 5,
  bytes: 4,
  role: 'assigned',
  target: 'h',
  targetBytes: 8,
  procedure: 'step',
  ...more,
});
const file = (more: Partial<FileInterface>): FileInterface => ({ ...emptyInterface('fortran'), ...more });
const kinds = (files: Record<string, FileInterface>, options = {}) =>
  census(new Map(Object.entries(files)), options).findings.map(({ kind, gravity }) => `${gravity} ${kind}`);

describe('constants of one code', () => {
  it('are told with place, edition and digits lost', () => {
    const { constants } = census(new Map([['eos/eos.f', file({ constants: [constant('boltz', '1.3807d-16', 3)] })]]));
    expect(constants).toMatchObject([
      {
        symbol: 'k_B',
        system: 'cgs',
        editions: ['1986', '1998', '2002', '2006'],
        agreement: 'rounded',
        place: { file: 'eos/eos.f', line: 3 },
        module: 'eos',
      },
    ]);
    expect(constants[0]!.digitsLost).toBeGreaterThan(1);
  });
  it('disagree between modules when their editions differ', () => {
    const found = kinds({
      'eos/eos.f': file({ constants: [constant('boltz', '1.380658d-16')] }),
      'rates/rates.f': file({ constants: [constant('kb', '1.380649d-16')] }),
    });
    expect(found).toEqual(['caution constant-disagrees']);
  });
  it('as literals of an exponent macro are read too', () => {
    expect(
      census(new Map([['a/c.F', file({ constants: [constant('kb', '1.38065 _d -23')] })]])).constants[0],
    ).toMatchObject({ symbol: 'k_B' });
  });
  it('agree across unit systems', () => {
    const found = kinds({
      'eos/eos.f': file({ constants: [constant('boltz', '1.380649d-16')] }),
      'rates/rates.f': file({ constants: [constant('kb', '1.380649e-23')] }),
    });
    expect(found).toEqual([]);
  });
  it('are of mixed editions when none holds them all', () => {
    const found = kinds({
      'a/const.f': file({ constants: [constant('grav', '6.673d-8', 1), constant('boltz', '1.3806504d-16', 2)] }),
    });
    expect(found).toEqual(['note constant-edition-mixed']);
  });
  it('with two digits exchanged have the digits of no edition', () => {
    expect(kinds({ 'a/c.f': file({ constants: [constant('boltz', '1.380568d-16')] }) })).toEqual([
      'note constant-unlike-any-edition',
    ]);
  });
  it('with the uncertainty written behind the value still carry their edition', () => {
    const { constants, findings } = census(
      new Map([['a/c.f', file({ constants: [constant('hplanck', '6.6260689633d-27')] })]]),
    );
    expect(constants[0]).toMatchObject({ editions: ['2006'], agreement: 'extended' });
    expect(findings).toEqual([]);
  });
  it('of mathematics are short when written with few digits', () => {
    expect(kinds({ 'a/c.f': file({ constants: [constant('pi', '3.14159')] }) })).toEqual(['note constant-truncated']);
    expect(kinds({ 'a/c.f': file({ constants: [constant('pi', '3.14')] }) })).toEqual(['caution constant-truncated']);
    expect(kinds({ 'a/c.f': file({ constants: [constant('pi', '3.141592653589793d0')] }) })).toEqual([]);
  });
});

describe('literals of single precision', () => {
  it('given to a double are told once a procedure', () => {
    expect(kinds({ 'a/c.f': file({ literals: [literal('0.1'), literal('0.7')] }) })).toEqual([
      'caution literal-single',
    ]);
  });
  it('that binary holds exactly lose nothing', () => {
    expect(kinds({ 'a/c.f': file({ literals: [literal('0.5'), literal('1.0'), literal('3.0e2')] }) })).toEqual([]);
  });
  it('are double where the build promotes default reals', () => {
    expect(kinds({ 'a/c.f': file({ literals: [literal('0.1')] }) }, { promote: { real: 8 } })).toEqual([]);
  });
  it('are not those of a d exponent or a kind', () => {
    expect(
      kinds({ 'a/c.f': file({ literals: [literal('0.1d0', { bytes: 8 }), literal('0.1_dp', { bytes: 8 })] }) }),
    ).toEqual([]);
  });
});

describe('integer division', () => {
  it('that drops a fraction is a caution', () => {
    expect(
      kinds({ 'a/c.f': file({ literals: [literal('2/3', { role: 'integer-division', value: 0, bytes: null })] }) }),
    ).toEqual(['caution integer-division']);
  });
});
