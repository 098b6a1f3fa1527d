/** Ranges drawn as bars on one axis that several quantities or several rows share. */

/** Where a value stands on an axis of `width` cells, 0 to width - 1; outside values land on the nearest edge. */
export interface Axis {
  readonly low: number;
  readonly high: number;
  readonly log: boolean;
}

/** The axis that holds every finite end given; logarithmic when all are positive and span more than a decade. Null without any end. */
export function axisOf(ranges: readonly (readonly [number | null, number | null] | null)[]): Axis | null {
  const ends = ranges
    .flatMap((range) => range ?? [])
    .filter((end): end is number => end !== null && Number.isFinite(end));
  if (ends.length === 0) return null;
  const [low, high] = [Math.min(...ends), Math.max(...ends)];
  const log = low > 0 && high / low > 10;
  if (low === high)
    return { low: low === 0 ? -1 : low - Math.abs(low) / 2, high: low === 0 ? 1 : low + Math.abs(low) / 2, log: false };
  return { low, high, log };
}

export function cellOf(axis: Axis, value: number, width: number): number {
  const scale = (x: number) => (axis.log ? Math.log10(Math.max(x, Number.MIN_VALUE)) : x);
  const part = (scale(value) - scale(axis.low)) / (scale(axis.high) - scale(axis.low));
  return Math.round(Math.min(1, Math.max(0, part)) * (width - 1));
}

/** `..====..` with an open end marked where a range is unbounded there. */
export function bar(
  axis: Axis,
  range: readonly [number | null, number | null],
  width: number,
  fill: string,
  unbounded: readonly [string, string],
): string {
  const from = range[0] === null ? 0 : cellOf(axis, range[0], width);
  const to = range[1] === null ? width - 1 : cellOf(axis, range[1], width);
  const cells = Array.from({ length: width }, (_, cell) => (cell >= from && cell <= to ? fill : ' '));
  if (range[0] === null) cells[0] = unbounded[0];
  if (range[1] === null) cells[width - 1] = unbounded[1];
  return cells.join('');
}
