/** Which data sets of a table are its axes, and how their points are spaced: values come in, axes go out. */
import type { TableAxisRead } from '../../model/interface.ts';

export type AxisFound = Omit<TableAxisRead, 'logBase'>;

/** Points may be off their even places by this share of a step: tables are written with few digits. */
const UNEVEN = 0.02;

/**
 * The axis that values in ascending or descending order make.
 *
 * @param values  shape (n,)
 * @param single  true for single precision, whose rounding may be a large share of a small step
 * @returns null for fewer than two values, for values that repeat or turn back, and where one is NaN
 */
export function axisOf(values: Float64Array, single = false): AxisFound | null {
  const points = values.length;
  if (points < 2) return null;
  const [first, last] = [values[0]!, values[points - 1]!];
  const rising = last > first;
  for (let i = 1; i < points; i++) {
    const step = values[i]! - values[i - 1]!;
    if (!(rising ? step > 0 : step < 0)) return null;
  }
  if (!Number.isFinite(first) || !Number.isFinite(last)) return null;
  return { first, last, spacing: spacingOf(values, single), points };
}

function spacingOf(values: Float64Array, single: boolean): AxisFound['spacing'] {
  const last = values.length - 1;
  // Two points lie at every kind of distance.
  if (last < 2) return 'uneven';
  const largest = Math.max(Math.abs(values[0]!), Math.abs(values[last]!));
  const linear = unevenness(values, (value) => value, single ? largest * 2 ** -23 : 0);
  const positive = values[0]! > 0 && values[last]! > 0;
  const log = positive ? unevenness(values, Math.log, single ? 2 ** -23 : 0) : Number.POSITIVE_INFINITY;
  if (Math.min(linear, log) > UNEVEN) return 'uneven';
  return linear <= log ? 'linear' : 'log';
}

/** The largest distance of a point from its even place, as a share of the step. */
function unevenness(values: Float64Array, scale: (value: number) => number, rounding: number): number {
  const last = values.length - 1;
  const start = scale(values[0]!);
  const step = (scale(values[last]!) - start) / last;
  let worst = 0;
  for (let i = 1; i < last; i++) {
    const off = Math.abs(scale(values[i]!) - (start + i * step)) - rounding;
    if (off > worst) worst = off;
  }
  return worst / Math.abs(step);
}

/**
 * The axes of a table of columns, a place a column. A table over several variables is written row by row, so that each axis repeats
 * in a pattern: every point for so many rows, all points over and over. Where no column does, the first is the axis if it rises
 * or falls all the way, and with it every other column that does so in even steps (a second scale of the same points).
 *
 * @param columns  each of shape (rows,)
 */
export function axesOfColumns(columns: readonly Float64Array[]): (AxisFound | null)[] {
  const repeated = columns.map(repeatedAxis);
  if (repeated.some((one) => one !== null)) return repeated;
  return columns.map((values, index) => {
    const axis = axisOf(values);
    return axis !== null && (index === 0 || axis.spacing !== 'uneven') ? axis : null;
  });
}

function repeatedAxis(values: Float64Array): AxisFound | null {
  const rows = values.length;
  let inner = 1;
  while (inner < rows && values[inner] === values[0]) inner++;
  if (inner === rows) return null;
  const points: number[] = [values[0]!];
  const rising = values[inner]! > values[0]!;
  for (let at = inner; at < rows && values[at] !== values[0]; at += inner) {
    const step = values[at]! - points[points.length - 1]!;
    if (!(rising ? step > 0 : step < 0)) return null;
    points.push(values[at]!);
  }
  if (inner === 1 && points.length === rows) return null;
  if (rows % (inner * points.length) !== 0) return null;
  for (let at = 0; at < rows; at++) if (values[at] !== points[Math.floor(at / inner) % points.length]) return null;
  return axisOf(Float64Array.from(points));
}

/** A data set as far as it matters for which of them are axes. */
export interface AxisCandidate {
  readonly shape: readonly number[];
  readonly axis: AxisFound | null;
  /** True when the format says that it is one. */
  readonly coordinate: boolean;
}

/**
 * Which data sets of one dimension serve as axes in a file that keeps arrays apart: those that the format marks; then those as long as
 * a dimension of an array of two or more; then, in a file of lists of one length, those in even steps; else all that rise or fall.
 */
export function servesAsAxis(candidates: readonly AxisCandidate[]): boolean[] {
  const extents = new Set(candidates.flatMap(({ shape }) => (shape.length > 1 ? shape : [])));
  const can = candidates.map(({ axis }) => axis !== null);
  const tests: ((one: AxisCandidate) => boolean)[] = [
    (one) => one.coordinate,
    (one) => extents.has(one.shape[0]!),
    (one) => one.axis?.spacing !== 'uneven',
    () => true,
  ];
  const told = can.map(() => false);
  // Marked ones and those that fit a dimension go together; the weaker signs count only where there is neither.
  for (const group of [tests.slice(0, 2), tests.slice(2, 3), tests.slice(3)]) {
    candidates.forEach((one, index) => {
      if (can[index] && group.some((test) => test(one))) told[index] = true;
    });
    if (told.includes(true)) break;
  }
  return told;
}
