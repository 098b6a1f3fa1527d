/** One number made from a field: what a physicist would quote. */
import type { Feature } from '../model/manifest.ts';
import { CompensatedSum } from './compensated-sum.ts';
import type { Series } from './series.ts';

export type Taken = { readonly value: number } | { readonly why: string };

/**
 * The feature of a series, in the unit that featureUnit() names.
 *
 * - `maximum`, `minimum`, `final`: a value of the field; `mean`: the arithmetic mean of its elements
 * - `where-maximum`: the position of the (first) largest element
 * - `integral`: by the trapezoid rule along the axis
 * - `crossing`: the first position where the field passes `level`, linear between elements
 * - `half-width`: full width at half of the maximum, linear between elements
 * - `slope`: of the least-squares line along the axis
 * - `period`: mean distance between successive upward passages of the mean
 *
 * @returns why there is none, when the field has a NaN, no axis, or never does what is asked for
 */
export function takeFeature(feature: Pick<Feature, 'take' | 'level'>, series: Series): Taken {
  const { values } = series;
  if (values.length === 0) return { why: `${series.name} has no elements` };
  if (values.some(Number.isNaN)) return { why: `${series.name} holds a NaN` };
  switch (feature.take) {
    case 'maximum':
      return { value: values[indexOfMaximum(values)]! };
    case 'minimum':
      return { value: values.reduce((least, value) => Math.min(least, value)) };
    case 'final':
      return { value: values.at(-1)! };
    case 'mean':
      return { value: mean(values) };
    default:
      return alongAxis(feature, series);
  }
}

/** The unit a feature comes in: of the field, of the axis, or of both. */
export function featureUnit(take: Feature['take'], unit: string, alongUnit: string): string {
  switch (take) {
    case 'where-maximum':
    case 'crossing':
    case 'half-width':
    case 'period':
      return alongUnit;
    case 'integral':
      return productUnit(unit, alongUnit, '.');
    case 'slope':
      return productUnit(unit, alongUnit, '/');
    default:
      return unit;
  }
}

function productUnit(a: string, b: string, operator: '.' | '/'): string {
  if (b === '' || b === '1') return a;
  const left = a === '' ? '1' : a;
  return operator === '.' && left === '1' ? b : `${left}${operator}${/[./]/.test(b) ? `(${b})` : b}`;
}

function alongAxis(feature: Pick<Feature, 'take' | 'level'>, series: Series): Taken {
  const { values, along, name } = series;
  if (along === null) return { why: `${feature.take} needs an axis: declare "along" for the output of ${name}` };
  const x = along.values;
  if (x.length !== values.length) {
    return {
      why: `${feature.take} needs one axis value an element; ${name} has ${values.length}, ${along.name} ${x.length}`,
    };
  }
  switch (feature.take) {
    case 'where-maximum':
      return { value: x[indexOfMaximum(values)]! };
    case 'integral':
      return { value: trapezoid(x, values) };
    case 'crossing': {
      if (feature.level === undefined) return { why: 'crossing needs a level' };
      const at = firstCrossing(x, values, feature.level);
      return at === null ? { why: `${name} never crosses ${feature.level}` } : { value: at };
    }
    case 'half-width':
      return halfWidth(x, values, name);
    case 'slope':
      return x.length < 2 ? { why: 'a slope needs two elements' } : { value: slope(x, values) };
    case 'period':
      return period(x, values, name);
    default:
      return { why: `${feature.take} is not known` };
  }
}

function indexOfMaximum(values: Float64Array): number {
  let best = 0;
  for (let i = 1; i < values.length; i++) if (values[i]! > values[best]!) best = i;
  return best;
}

export function mean(values: Float64Array): number {
  const sum = new CompensatedSum();
  for (const value of values) sum.add(value);
  return sum.value / values.length;
}

function trapezoid(x: Float64Array, y: Float64Array): number {
  const sum = new CompensatedSum();
  for (let i = 1; i < x.length; i++) sum.add(0.5 * (x[i]! - x[i - 1]!) * (y[i]! + y[i - 1]!));
  return sum.value;
}

/** Position where the line between elements i-1 and i reaches the level. */
function between(x: Float64Array, y: Float64Array, i: number, level: number): number {
  const [x0, x1, y0, y1] = [x[i - 1]!, x[i]!, y[i - 1]!, y[i]!];
  return y1 === level ? x1 : x0 + ((level - y0) / (y1 - y0)) * (x1 - x0);
}

function firstCrossing(x: Float64Array, y: Float64Array, level: number): number | null {
  if (y[0] === level) return x[0]!;
  for (let i = 1; i < y.length; i++) {
    if (y[i - 1]! < level !== y[i]! < level || y[i] === level) return between(x, y, i, level);
  }
  return null;
}

function halfWidth(x: Float64Array, y: Float64Array, name: string): Taken {
  const peak = indexOfMaximum(y);
  const half = y[peak]! / 2;
  let [left, right] = [peak, peak];
  while (left > 0 && y[left]! > half) left--;
  while (right < y.length - 1 && y[right]! > half) right++;
  if (y[left]! > half || y[right]! > half || left === right) {
    return { why: `${name} does not fall to half of its maximum on both sides` };
  }
  return { value: Math.abs(between(x, y, right, half) - between(x, y, left + 1, half)) };
}

function slope(x: Float64Array, y: Float64Array): number {
  const [meanX, meanY] = [mean(x), mean(y)];
  const [products, squares] = [new CompensatedSum(), new CompensatedSum()];
  for (let i = 0; i < x.length; i++) {
    products.add((x[i]! - meanX) * (y[i]! - meanY));
    squares.add((x[i]! - meanX) ** 2);
  }
  return products.value / squares.value;
}

function period(x: Float64Array, y: Float64Array, name: string): Taken {
  const level = mean(y);
  const passages: number[] = [];
  for (let i = 1; i < y.length; i++) {
    if (y[i - 1]! < level && y[i]! >= level) passages.push(between(x, y, i, level));
  }
  if (passages.length < 2) return { why: `${name} does not pass its mean upward twice` };
  return { value: (passages.at(-1)! - passages[0]!) / (passages.length - 1) };
}
