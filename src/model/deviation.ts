/** How far a result is from its reference. Compare makes it; runs, trace, audit, review, report and screens use it. */

export const DEVIATION_CLASSES = [
  'bit-for-bit',
  'roundoff',
  'within tolerance',
  'beyond tolerance',
  'not comparable',
] as const;
/** From best to worst; *not comparable* is never good news. */
export type DeviationClass = (typeof DEVIATION_CLASSES)[number];

export function worseClass(a: DeviationClass, b: DeviationClass): DeviationClass {
  return DEVIATION_CLASSES.indexOf(a) >= DEVIATION_CLASSES.indexOf(b) ? a : b;
}

/** One place in an array where a deviation is worst. */
export interface WorstElement {
  /** Index from 0 in storage order. */
  readonly index: number;
  readonly reference: number;
  readonly result: number;
  /** Position along the profile's axis, in the axis' unit, where one is declared. */
  readonly along?: { readonly value: number; readonly unit: string };
}

export interface Measures {
  readonly count: number;
  /** Elements equal to the last bit (signed zeros told apart). */
  readonly identical: number;
  readonly maxAbsolute: number;
  readonly maxRelative: number;
  /** Largest distance in units in the last place; Infinity across NaN. */
  readonly maxUlp: number;
  /** Norms of the difference over the norm of the reference. */
  readonly l1: number;
  readonly l2: number;
  readonly linf: number;
  readonly nanInReference: number;
  readonly nanInResult: number;
  readonly infInReference: number;
  readonly infInResult: number;
  readonly worst: WorstElement | null;
}

export interface Deviation {
  readonly case: string;
  readonly quantity: string;
  /** A field along the output, one number made from it, or a conserved total. */
  readonly of: 'field' | 'feature' | 'conserved';
  readonly class: DeviationClass;
  readonly unit: string;
  readonly measures: Measures | null;
  /** The measured deviation over the allowed one: 1 is just allowed; null when not comparable. */
  readonly tolerances: number | null;
  readonly tolerance: Tolerance | null;
  /** Why not comparable, or what else a reader should know. */
  readonly why?: string;
  /** The profile for plots: at most a few thousand points, thinned so that extremes are kept. */
  readonly profile?: Profile;
}

export interface Profile {
  readonly along: { readonly name: string; readonly unit: string; readonly values: readonly number[] };
  readonly reference: readonly number[];
  readonly result: readonly number[];
  /** Half width of the tolerance band at each point. */
  readonly band: readonly number[];
}

export type Norm = 'pointwise' | 'L1' | 'L2' | 'Linf';

/** Element i is allowed |result - reference| <= absolute + relative * |reference|; a norm is allowed `relative` of the reference's. */
export interface Tolerance {
  readonly absolute?: number;
  readonly relative?: number;
  readonly ulp?: number;
  readonly norm: Norm;
  readonly reason?: string;
}
