/** Ranges of states against one another. */
import type { Range } from '../model/manifest.ts';

/** Relative slack for ends that were converted from one unit to another and back. */
const ROUND_OFF = 1e-12;

/** The parts of `inner` that lie outside `outer`, in words of numbers; empty when none does. */
export function outside(inner: Range, outer: Range): { readonly below: boolean; readonly above: boolean } {
  return {
    below: outer[0] !== null && (inner[0] === null || inner[0] < outer[0] - slack(outer[0])),
    above: outer[1] !== null && (inner[1] === null || inner[1] > outer[1] + slack(outer[1])),
  };
}

/** A range in another unit: value * factor + offset. A negative factor turns the ends round. */
export function convertRange(range: Range, factor: number, offset: number): Range {
  const move = (end: number | null) => (end === null ? null : end * factor + offset);
  return factor < 0 ? [move(range[1]), move(range[0])] : [move(range[0]), move(range[1])];
}

/** `[1e-26, no bound]` */
export function rangeText(range: Range, unit = ''): string {
  const end = (value: number | null) => (value === null ? 'no bound' : numberText(value));
  return `[${end(range[0])}, ${end(range[1])}]${unit === '' || unit === '1' ? '' : ` ${unit}`}`;
}

/** Shortest text that gives the number back to twelve digits. */
export function numberText(value: number): string {
  const short = Number(value.toPrecision(12));
  const plain = String(short);
  const exponent = short.toExponential();
  return exponent.length < plain.length ? exponent.replace('e+', 'e') : plain.replace('e+', 'e');
}

/** Ends as they are written in a manifest carry fewer digits than those in a table. */
export function sameEnds(a: Range, b: Range): boolean {
  return a.every((end, index) => {
    const other = b[index]!;
    return end === null || other === null
      ? end === other
      : Math.abs(end - other) <= 1e-3 * Math.max(Math.abs(end), Math.abs(other));
  });
}

function slack(end: number): number {
  return Math.abs(end) * ROUND_OFF;
}
