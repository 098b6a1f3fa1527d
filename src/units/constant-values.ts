/**
 * The constants that units and equivalences rest on.
 * @source c, h, e, k, N_A: SI Brochure, 9th edition (BIPM 2019), exact. G, m_u, masses: CODATA adjustments as listed by NIST.
 * The nominal GM of the Sun, Earth and Jupiter: IAU 2015 Resolution B3.
 */
import { multiply, parseRational, power, type Rational } from './rational.ts';
import type { Factor } from './unit.ts';

/** The editions that a measured constant can be taken from. */
export const EDITIONS = ['1986', '1998', '2002', '2006', '2010', '2014', '2018', '2022'] as const;
export type Edition = (typeof EDITIONS)[number];

/** Decimal values in SI; a constant that is exact since 2019 has the one value. */
const VALUES: Readonly<Record<string, string | Readonly<Record<Edition, string>>>> = {
  c: '299792458',
  h: '6.62607015e-34',
  e: '1.602176634e-19',
  k: '1.380649e-23',
  N_A: '6.02214076e23',
  GM_sun: '1.3271244e20',
  G: {
    '1986': '6.67259e-11',
    '1998': '6.673e-11',
    '2002': '6.6742e-11',
    '2006': '6.67428e-11',
    '2010': '6.67384e-11',
    '2014': '6.67408e-11',
    '2018': '6.67430e-11',
    '2022': '6.67430e-11',
  },
  m_u: {
    '1986': '1.6605402e-27',
    '1998': '1.66053873e-27',
    '2002': '1.66053886e-27',
    '2006': '1.660538782e-27',
    '2010': '1.660538921e-27',
    '2014': '1.660539040e-27',
    '2018': '1.66053906660e-27',
    '2022': '1.66053906892e-27',
  },
  m_p: {
    '1986': '1.6726231e-27',
    '1998': '1.67262158e-27',
    '2002': '1.67262171e-27',
    '2006': '1.672621637e-27',
    '2010': '1.672621777e-27',
    '2014': '1.672621898e-27',
    '2018': '1.67262192369e-27',
    '2022': '1.67262192595e-27',
  },
  m_n: {
    '1986': '1.6749286e-27',
    '1998': '1.67492716e-27',
    '2002': '1.67492728e-27',
    '2006': '1.674927211e-27',
    '2010': '1.674927351e-27',
    '2014': '1.674927471e-27',
    '2018': '1.67492749804e-27',
    '2022': '1.67492750056e-27',
  },
  m_e: {
    '1986': '9.1093897e-31',
    '1998': '9.10938188e-31',
    '2002': '9.1093826e-31',
    '2006': '9.10938215e-31',
    '2010': '9.10938291e-31',
    '2014': '9.10938356e-31',
    '2018': '9.1093837015e-31',
    '2022': '9.1093837139e-31',
  },
};

export const CONSTANT_NAMES: readonly string[] = Object.keys(VALUES);

/** The value of a constant as a factor that names it. Exact ones ignore the edition. */
export function constantFactor(name: string, edition: Edition = '2022'): Factor {
  const values = VALUES[name];
  if (values === undefined) throw new RangeError(`no constant ${name}`);
  const exact = typeof values === 'string';
  return {
    ratio: parseRational(exact ? values : values[edition]),
    pi: 0,
    approximate: 1,
    uses: [
      exact ? (name === 'GM_sun' ? 'GM_sun (IAU 2015 B3)' : `${name} (SI 2019, exact)`) : `${name} (CODATA ${edition})`,
    ],
  };
}

/** hbar c, h c and other products, for equivalences. */
export function constantProduct(parts: readonly (readonly [string, number])[], edition: Edition): Factor {
  let ratio: Rational = parseRational('1');
  const uses: string[] = [];
  for (const [name, exponent] of parts) {
    const factor = constantFactor(name, edition);
    ratio = multiply(ratio, power(factor.ratio, exponent));
    uses.push(...factor.uses);
  }
  return { ratio, pi: 0, approximate: 1, uses };
}
