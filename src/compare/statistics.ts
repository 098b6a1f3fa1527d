/** Distributions and tests for results that differ from run to run. */
import { compensatedSum } from './compensated-sum.ts';

export interface Summary {
  readonly count: number;
  readonly mean: number;
  /** With n - 1. */
  readonly deviation: number;
}

/** Two passes, so that a small spread about a large mean keeps its digits. */
export function summarise(values: readonly number[]): Summary {
  const mean = compensatedSum(values) / values.length;
  const centred = values.map((value) => value - mean);
  // The mean is rounded; what is left of the sum of the centred values takes that out again (Chan, Golub & LeVeque 1983).
  const left = compensatedSum(centred);
  const squares = compensatedSum(centred.map((value) => value * value)) - (left * left) / values.length;
  return { count: values.length, mean, deviation: Math.sqrt(squares / (values.length - 1)) };
}

/** Correlation of each value with the next: near 0 for independent runs. */
export function lagOneAutocorrelation(values: readonly number[]): number {
  const { mean } = summarise(values);
  const products = values.slice(1).map((value, i) => (value - mean) * (values[i]! - mean));
  return compensatedSum(products) / compensatedSum(values.map((value) => (value - mean) ** 2));
}

export interface TTest {
  readonly t: number;
  readonly degrees: number;
  /** Two-sided. */
  readonly p: number;
}

/** Student's test of two means, with pooled variance. */
export function pooledTTest(a: Summary, b: Summary): TTest {
  const degrees = a.count + b.count - 2;
  const variance = ((a.count - 1) * a.deviation ** 2 + (b.count - 1) * b.deviation ** 2) / degrees;
  const t = (a.mean - b.mean) / Math.sqrt(variance * (1 / a.count + 1 / b.count));
  return { t, degrees, p: twoSided(t, degrees) };
}

/** Welch's test of two means, for unequal variances. @source B. L. Welch, Biometrika 34 (1947) 28 */
export function welchTTest(a: Summary, b: Summary): TTest {
  const [va, vb] = [a.deviation ** 2 / a.count, b.deviation ** 2 / b.count];
  const degrees = (va + vb) ** 2 / (va ** 2 / (a.count - 1) + vb ** 2 / (b.count - 1));
  const t = (a.mean - b.mean) / Math.sqrt(va + vb);
  return { t, degrees, p: twoSided(t, degrees) };
}

function twoSided(t: number, degrees: number): number {
  return incompleteBeta(degrees / 2, 0.5, degrees / (degrees + t * t));
}

/** Student's t that a value exceeds with probability 1 - p; 0.5 <= p < 1. */
export function studentQuantile(p: number, degrees: number): number {
  let [low, high] = [0, 2];
  while (1 - twoSided(high, degrees) / 2 < p) high *= 2;
  for (let step = 0; step < 200 && low < high; step++) {
    const middle = (low + high) / 2;
    if (middle === low || middle === high) break;
    if (1 - twoSided(middle, degrees) / 2 < p) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/**
 * The regularised incomplete beta function I_x(a, b), by its continued fraction.
 * @source NIST Digital Library of Mathematical Functions, 8.17.22 (modified Lentz evaluation)
 */
export function incompleteBeta(a: number, b: number, x: number): number {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  if (x > (a + 1) / (a + b + 2)) return 1 - incompleteBeta(b, a, 1 - x);
  const front = Math.exp(a * Math.log(x) + b * Math.log1p(-x) - logBeta(a, b)) / a;
  const tiny = 1e-300;
  const away = (value: number) => (Math.abs(value) < tiny ? tiny : value);
  let [c, d] = [1, 1 / away(1 - ((a + b) * x) / (a + 1))];
  let fraction = d;
  for (let m = 1; m < 500; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / away(1 + even * d);
    c = away(1 + even / c);
    fraction *= d * c;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / away(1 + odd * d);
    c = away(1 + odd / c);
    const step = d * c;
    fraction *= step;
    if (Math.abs(step - 1) < 1e-16) break;
  }
  return front * fraction;
}

function logBeta(a: number, b: number): number {
  return logGamma(a) + logGamma(b) - logGamma(a + b);
}

/** Stirling's series after shifting the argument above 10. @source NIST DLMF 5.11.1 */
export function logGamma(x: number): number {
  let shift = 0;
  let y = x;
  for (; y < 12; y++) shift += Math.log(y);
  const inverse = 1 / (y * y);
  const series = [1 / 12, -1 / 360, 1 / 1260, -1 / 1680, 1 / 1188, -691 / 360360, 1 / 156];
  const tail = series.reduceRight((sum, coefficient) => sum * inverse + coefficient, 0) / y;
  return (y - 0.5) * Math.log(y) - y + 0.5 * Math.log(2 * Math.PI) + tail - shift;
}

/** Largest distance of two empirical distributions, and how likely a larger one is by chance (asymptotically). */
export function kolmogorovSmirnov(a: readonly number[], b: readonly number[]): { d: number; p: number } {
  const [x, y] = [[...a].sort((p, q) => p - q), [...b].sort((p, q) => p - q)];
  let [i, j, d] = [0, 0, 0];
  while (i < x.length && j < y.length) {
    const at = Math.min(x[i]!, y[j]!);
    while (i < x.length && x[i] === at) i++;
    while (j < y.length && y[j] === at) j++;
    d = Math.max(d, Math.abs(i / x.length - j / y.length));
  }
  return { d, p: kolmogorovTail(d * Math.sqrt((x.length * y.length) / (x.length + y.length))) };
}

/**
 * Probability that the limiting Kolmogorov statistic exceeds z.
 * @source A. Kolmogorov, Giornale dell'Istituto Italiano degli Attuari 4 (1933) 83; the second form, by the theta function
 *   identity, converges for small z
 */
export function kolmogorovTail(z: number): number {
  if (z <= 0) return 1;
  const terms = Array.from({ length: 100 }, (_, k) => k + 1);
  if (z > 1) return 2 * compensatedSum(terms.map((k) => (k % 2 === 1 ? 1 : -1) * Math.exp(-2 * k * k * z * z)));
  const inner = terms.map((k) => Math.exp((-((2 * k - 1) ** 2) * Math.PI ** 2) / (8 * z * z)));
  return 1 - (Math.sqrt(2 * Math.PI) / z) * compensatedSum(inner);
}

/**
 * Mann and Whitney's rank test, exact for samples without ties.
 * @source H. B. Mann and D. R. Whitney, Ann. Math. Statist. 18 (1947) 50
 */
export function mannWhitney(a: readonly number[], b: readonly number[]): { u1: number; u2: number; p: number } {
  let u1 = 0;
  for (const x of a) for (const y of b) u1 += x > y ? 1 : x === y ? 0.5 : 0;
  const u2 = a.length * b.length - u1;
  const counts = arrangements(a.length, b.length);
  const all = counts.reduce((sum, count) => sum + count, 0);
  const tail = counts.slice(0, Math.floor(Math.min(u1, u2)) + 1).reduce((sum, count) => sum + count, 0);
  return { u1, u2, p: Math.min(1, (2 * tail) / all) };
}

/** How many orders of m and n distinct values have each U from 0 to m n: coefficients of the Gaussian binomial. */
function arrangements(m: number, n: number): number[] {
  let counts = [1];
  for (let i = 1; i <= n; i++) {
    // Multiply by 1 - q^(m+i), divide by 1 - q^i; only exponents up to m n matter.
    const length = m * n + 1;
    const wide = Array.from({ length }, (_, k) => (counts[k] ?? 0) - (k >= m + i ? (counts[k - m - i] ?? 0) : 0));
    for (let k = i; k < length; k++) wide[k]! += wide[k - i]!;
    counts = wide;
  }
  return counts;
}
