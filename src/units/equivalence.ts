/** Relations of physics that carry a quantity from one dimension to another. A conversion uses one only when it is named. */
import { constantFactor, constantProduct, type Edition } from './constant-values.ts';
import { multiply, parseRational, power } from './rational.ts';
import type { Dimension, Factor } from './unit.ts';

export interface Equivalence {
  /** E = m c^2 in a few words. */
  readonly says: string;
  /** Dimension of the constant that a value is multiplied by; powers of it are taken as the dimensions ask. */
  readonly dimension: Dimension;
  readonly factor: (edition: Edition) => Factor;
}

export const EQUIVALENCES: Readonly<Record<string, Equivalence>> = {
  thermal: {
    says: 'E = k T',
    dimension: { kg: 1, m: 2, s: -2, K: -1 },
    factor: (edition) => constantFactor('k', edition),
  },
  'mass-energy': { says: 'E = m c^2', dimension: { m: 1, s: -1 }, factor: (edition) => constantFactor('c', edition) },
  'photon-energy': {
    says: 'E = h nu',
    dimension: { kg: 1, m: 2, s: -1 },
    factor: (edition) => constantFactor('h', edition),
  },
  'photon-wavenumber': {
    says: 'E = h c / lambda',
    dimension: { kg: 1, m: 3, s: -2 },
    factor: (edition) =>
      constantProduct(
        [
          ['h', 1],
          ['c', 1],
        ],
        edition,
      ),
  },
  'natural-length': {
    says: 'hbar c = 1',
    dimension: { kg: 1, m: 3, s: -2 },
    factor: (edition) =>
      overTwoPi(
        constantProduct(
          [
            ['h', 1],
            ['c', 1],
          ],
          edition,
        ),
      ),
  },
  'natural-time': {
    says: 'hbar = 1',
    dimension: { kg: 1, m: 2, s: -1 },
    factor: (edition) => overTwoPi(constantFactor('h', edition)),
  },
  'geometric-mass': {
    says: 'G / c^2 = 1: a mass as a length',
    dimension: { m: 1, kg: -1 },
    factor: (edition) =>
      constantProduct(
        [
          ['G', 1],
          ['c', -2],
        ],
        edition,
      ),
  },
  'per-mole': {
    says: 'N_A particles are a mole',
    dimension: { mol: -1 },
    factor: (edition) => constantFactor('N_A', edition),
  },
};

/** Mass of one counted thing: what turns "per baryon" into "per gram", and a number density into a mass density. */
export const MASS_BASES: Readonly<
  Record<string, { readonly says: string; readonly factor: (edition: Edition) => Factor }>
> = {
  m_u: { says: 'the atomic mass constant', factor: (edition) => constantFactor('m_u', edition) },
  m_p: { says: 'the mass of the proton', factor: (edition) => constantFactor('m_p', edition) },
  m_n: { says: 'the mass of the neutron', factor: (edition) => constantFactor('m_n', edition) },
  m_e: { says: 'the mass of the electron', factor: (edition) => constantFactor('m_e', edition) },
  N_A: {
    says: 'one gram per mole: 1 g / N_A',
    factor: (edition) => {
      const avogadro = constantFactor('N_A', edition);
      return { ...avogadro, ratio: multiply(parseRational('1e-3'), power(avogadro.ratio, -1)) };
    },
  },
};

function overTwoPi(factor: Factor): Factor {
  return { ...factor, ratio: multiply(factor.ratio, parseRational('1/2')), pi: factor.pi - 1 };
}
