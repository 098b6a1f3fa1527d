/** A curve in characters: braille dots, eight a cell, or one mark a cell where only ASCII is wanted. */
import type { Profile } from '../model/deviation.ts';
import type { Glyphs } from './glyphs.ts';

export interface Window {
  /** First and last point shown, as parts of the profile, 0 to 1. */
  readonly from: number;
  readonly to: number;
  readonly logValue: boolean;
}

export interface Plot {
  /** Top to bottom; `width` characters each. */
  readonly rows: readonly string[];
  readonly low: number;
  readonly high: number;
  readonly firstAlong: number;
  readonly lastAlong: number;
  /** A character a column: how much of the tolerance is used, the largest under that column; blank for none. */
  readonly used: string;
  /** Columns in which more than the tolerance is used. */
  readonly beyond: readonly boolean[];
  /** Column of the worst point shown. */
  readonly worstColumn: number;
}

const DOTS = [
  [0x01, 0x08],
  [0x02, 0x10],
  [0x04, 0x20],
  [0x40, 0x80],
] as const;

/** Reference as single dots every other step, result as a full line, so that the two are told apart without colour. */
export function plotProfile(profile: Profile, window: Window, width: number, height: number, glyphs: Glyphs): Plot {
  const count = profile.result.length;
  const first = Math.max(0, Math.min(count - 1, Math.floor(window.from * (count - 1))));
  const last = Math.max(first, Math.min(count - 1, Math.ceil(window.to * (count - 1))));
  const shown = Array.from({ length: last - first + 1 }, (_, index) => first + index);
  const scale = (value: number) => (window.logValue ? Math.log10(value) : value);
  const finite = shown
    .flatMap((index) => [profile.reference[index], profile.result[index]])
    .map((value) => scale(value ?? Number.NaN))
    .filter(Number.isFinite);
  const [low, high] = finite.length === 0 ? [0, 1] : [Math.min(...finite), Math.max(...finite)];
  const span = high > low ? high - low : 1;
  const [across, down] = glyphs.braille ? [2, 4] : [1, 1];
  const dots: Uint8Array = new Uint8Array(width * height);
  const marks: string[] = Array.from({ length: width * height }, () => ' ');
  const columns = width * across;
  const at = positions(profile.along.values, first, last);
  const place = (index: number) => Math.round(at(index) * (columns - 1));
  // Between two values a hair apart, rounding can lead past both.
  const rowOf = (value: number) =>
    Math.round((1 - Math.max(0, Math.min(1, (scale(value) - low) / span))) * (height * down - 1));
  const put = (x: number, y: number, mark: string) => {
    const cell = Math.floor(y / down) * width + Math.floor(x / across);
    dots[cell]! |= DOTS[y % 4]![x % 2]!;
    if (marks[cell] !== '*') marks[cell] = mark;
  };
  const draw = (values: readonly number[], every: number, mark: string) => {
    let previous: { x: number; value: number } | null = null;
    for (const index of shown) {
      const [x, value] = [place(index), values[index] ?? Number.NaN];
      if (!Number.isFinite(scale(value))) {
        previous = null;
        continue;
      }
      const start: { x: number; value: number } = previous ?? { x, value };
      let lastRow = rowOf(start.value);
      for (let column = start.x; column <= x; column++) {
        const part = x === start.x ? 1 : (column - start.x) / (x - start.x);
        const y = rowOf(mix(start.value, value, part, window.logValue));
        // A steep stretch is filled, so that the curve does not fall apart into dots.
        for (let row = Math.min(y, lastRow); row <= Math.max(y, lastRow); row++) {
          if ((column + row) % every === 0) put(column, row, mark);
        }
        lastRow = y;
      }
      previous = { x, value };
    }
  };
  draw(profile.reference, glyphs.braille ? 4 : 1, '.');
  draw(profile.result, 1, '*');

  const share = Array.from({ length: width }, () => 0);
  let [worstColumn, worst] = [0, -1];
  for (const index of shown) {
    const difference = Math.abs((profile.result[index] ?? Number.NaN) - (profile.reference[index] ?? Number.NaN));
    const allowed = profile.band[index] ?? 0;
    const used = Number.isNaN(difference)
      ? Number.POSITIVE_INFINITY
      : allowed > 0
        ? difference / allowed
        : difference > 0
          ? Number.POSITIVE_INFINITY
          : 0;
    const column = Math.min(width - 1, Math.floor(place(index) / across));
    share[column] = Math.max(share[column]!, used);
    if (used > worst) [worst, worstColumn] = [used, column];
  }
  return {
    rows: Array.from({ length: height }, (_, y) =>
      glyphs.braille
        ? Array.from(dots.subarray(y * width, (y + 1) * width), (bits) =>
            bits === 0 ? ' ' : String.fromCharCode(0x2800 + bits),
          ).join('')
        : marks.slice(y * width, (y + 1) * width).join(''),
    ),
    low: window.logValue ? 10 ** low : low,
    high: window.logValue ? 10 ** high : high,
    firstAlong: profile.along.values[first] ?? Number.NaN,
    lastAlong: profile.along.values[last] ?? Number.NaN,
    used: share.map((part) => (part === 0 ? ' ' : (glyphs.steps[Math.min(7, Math.floor(part * 8))] ?? ' '))).join(''),
    beyond: share.map((part) => part > 1),
    worstColumn,
  };
}

/** Where a point stands across the plot, 0 to 1: by its place on the axis where that only grows, else by its number. */
function positions(along: readonly number[], first: number, last: number): (index: number) => number {
  const [low, high] = [along[first] ?? Number.NaN, along[last] ?? Number.NaN];
  for (let index = first + 1; index <= last; index++) {
    if (!((along[index] ?? Number.NaN) > (along[index - 1] ?? Number.NaN)))
      return (point) => (last === first ? 0 : (point - first) / (last - first));
  }
  return (point) => (high > low ? ((along[point] ?? low) - low) / (high - low) : 0);
}

function mix(a: number, b: number, part: number, log: boolean): number {
  return log && a > 0 && b > 0 ? Math.exp(Math.log(a) * (1 - part) + Math.log(b) * part) : a * (1 - part) + b * part;
}
