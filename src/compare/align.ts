/** Two series of one quantity brought onto the same elements: paired by id or coordinate, moved by a shift, put on one grid. */
import type { Axis, Series } from './series.ts';

export type Aligned =
  | { readonly reference: Series; readonly result: Series; readonly note?: string }
  | { readonly why: string };

/** Positions closer than this share of the axis' span are the same position. */
const SAME_POSITION = 1e-9;

/**
 * Puts the result's elements in the reference's order, by what identifies them.
 *
 * @param referenceKeys ids or coordinates, one an element, each once
 * @param resultKeys    the same set in any order
 */
export function pairByKey(
  reference: Series,
  result: Series,
  referenceKeys: Float64Array,
  resultKeys: Float64Array,
): Aligned {
  const each = (series: Series, keys: Float64Array) => series.values.length / keys.length;
  const width = each(reference, referenceKeys);
  if (!Number.isInteger(width) || width !== each(result, resultKeys)) {
    return {
      why: `${reference.name} has ${reference.values.length} values for ${referenceKeys.length} keys in the reference, ${result.values.length} for ${resultKeys.length} in the result`,
    };
  }
  const places = new Map<number, number>();
  resultKeys.forEach((key, index) => {
    places.set(key, index);
  });
  if (places.size !== resultKeys.length || new Set(referenceKeys).size !== referenceKeys.length) {
    return { why: 'elements cannot be paired: some keys stand more than once' };
  }
  const lost = referenceKeys.filter((key) => !places.has(key));
  if (lost.length > 0) {
    return {
      why: `${lost.length} of ${referenceKeys.length} elements of the reference are not in the result, the first with the key ${lost[0]}`,
    };
  }
  const values = new Float64Array(reference.values.length);
  const along = result.along === null ? null : { ...result.along, values: new Float64Array(referenceKeys.length) };
  let moved = 0;
  referenceKeys.forEach((key, index) => {
    const from = places.get(key)!;
    if (from !== index) moved++;
    values.set(result.values.subarray(from * width, (from + 1) * width), index * width);
    if (along !== null && result.along!.values.length === resultKeys.length)
      along.values[index] = result.along!.values[from]!;
  });
  const keepsAxis = along !== null && result.along!.values.length === resultKeys.length;
  const note = moved === 0 ? {} : { note: `${moved} elements stood in another order and were paired by key` };
  return { reference, result: { ...result, values, along: keepsAxis ? along : result.along }, ...note };
}

/** True when both axes have the same positions. */
export function sameAxis(a: Axis, b: Axis): boolean {
  if (a.values.length !== b.values.length) return false;
  const span = Math.abs(a.values.at(-1)! - a.values[0]!) || Math.abs(a.values[0]!);
  return a.values.every(
    (position, i) => Math.abs(position - b.values[i]!) <= SAME_POSITION * span || position === b.values[i],
  );
}

/**
 * Puts both onto the coarser of their grids, within the stretch that both cover. Values at points are interpolated linearly;
 * amounts in cells (`extensive`) are shared out by overlap, so that their total is kept.
 */
export function ontoCoarser(reference: Series, result: Series, extensive: boolean): Aligned {
  const [a, b] = [ascending(reference), ascending(result)];
  if (a === null || b === null) {
    return {
      why: `the axes differ, and ${a === null ? "the reference's" : "the result's"} is no rising or falling line of one position an element`,
    };
  }
  const [x, y] = [a.along!.values, b.along!.values];
  const low = Math.max(x[0]!, y[0]!);
  const high = Math.min(x.at(-1)!, y.at(-1)!);
  if (!(low < high)) return { why: 'the axes differ and do not overlap' };
  const referenceIsCoarser = x.length <= y.length;
  const coarse = referenceIsCoarser ? a : b;
  const fine = referenceIsCoarser ? b : a;
  const [from, to] = extensive ? within(coarse.along!.values, fine.along!.values) : [low, high];
  const kept = Array.from(coarse.along!.values.keys()).filter((i) => {
    const position = coarse.along!.values[i]!;
    return position >= from && position <= to;
  });
  if (kept.length === 0) return { why: 'the axes differ and share no element' };
  const positions = Float64Array.from(kept, (i) => coarse.along!.values[i]!);
  const along = { ...coarse.along!, values: positions };
  const pick = { ...coarse, along, values: Float64Array.from(kept, (i) => coarse.values[i]!), shape: [kept.length] };
  const cells = edges(coarse.along!.values);
  const values = extensive
    ? Float64Array.from(kept, (i) => amountIn(fine, cells[i]!, cells[i + 1]!))
    : Float64Array.from(positions, (position) => interpolate(fine.along!.values, fine.values, position));
  const moved = { ...fine, along, values, shape: [kept.length] };
  const how = extensive ? 'shared out over' : 'interpolated onto';
  const whose = referenceIsCoarser ? 'reference' : 'result';
  const outside = coarse.values.length - kept.length;
  const left = outside === 0 ? '' : `; ${outside} elements lie outside of the other's`;
  const note = `the grids differ: ${how} the ${kept.length} elements of the ${whose}'s${left}`;
  return referenceIsCoarser ? { reference: pick, result: moved, note } : { reference: moved, result: pick, note };
}

/** Coarse cells that lie wholly inside what the fine cells cover. */
function within(coarse: Float64Array, fine: Float64Array): [number, number] {
  const [cells, cover] = [edges(coarse), edges(fine)];
  const slack = SAME_POSITION * (cover.at(-1)! - cover[0]!);
  const inside = Array.from(coarse.keys()).filter(
    (i) => cells[i]! >= cover[0]! - slack && cells[i + 1]! <= cover.at(-1)! + slack,
  );
  return inside.length === 0 ? [1, 0] : [coarse[inside[0]!]!, coarse[inside.at(-1)!]!];
}

/** The series with a rising axis; null when the axis is not monotonic or has no position for every element. */
function ascending(series: Series): Series | null {
  const { along, values } = series;
  if (along === null || along.values.length !== values.length || values.length < 2) return null;
  const rises = along.values.every((x, i) => i === 0 || x > along.values[i - 1]!);
  if (rises) return series;
  if (!along.values.every((x, i) => i === 0 || x < along.values[i - 1]!)) return null;
  return { ...series, values: series.values.toReversed(), along: { ...along, values: along.values.toReversed() } };
}

/** Linear between neighbours; the position lies within the axis. */
export function interpolate(x: Float64Array, y: Float64Array, position: number): number {
  let [low, high] = [0, x.length - 1];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle]! <= position) low = middle;
    else high = middle;
  }
  if (position === x[low]) return y[low]!;
  if (position === x[high]) return y[high]!;
  const share = (position - x[low]!) / (x[high]! - x[low]!);
  return y[low]! * (1 - share) + y[high]! * share;
}

/** Cell edges half way between centres; the outermost cells reach as far out as in. */
function edges(centres: Float64Array): Float64Array {
  const count = centres.length;
  return Float64Array.from({ length: count + 1 }, (_, i) => {
    if (i === 0) return centres[0]! - (centres[1]! - centres[0]!) / 2;
    if (i === count) return centres[count - 1]! + (centres[count - 1]! - centres[count - 2]!) / 2;
    return (centres[i - 1]! + centres[i]!) / 2;
  });
}

/** What lies between two positions, every cell's amount spread evenly over it. */
function amountIn(series: Series, from: number, to: number): number {
  const cells = edges(series.along!.values);
  let sum = 0;
  for (let i = 0; i < series.values.length; i++) {
    const overlap = Math.min(to, cells[i + 1]!) - Math.max(from, cells[i]!);
    if (overlap > 0) sum += series.values[i]! * (overlap / (cells[i + 1]! - cells[i]!));
  }
  return sum;
}

/**
 * By how much the result lies further along the axis than the reference: the shift, up to `most` either way, with which
 * the mean squared difference is least. Searched on a grid half an element fine, then by golden section.
 */
export function shiftOf(reference: Series, result: Series, most: number): number | null {
  const [a, b] = [ascending(reference), ascending(result)];
  if (a === null || b === null || !(most > 0)) return null;
  const [x, y] = [a.along!.values, b.along!.values];
  const spacing = (y.at(-1)! - y[0]!) / (y.length - 1);
  const cost = (shift: number) => {
    let [sum, count] = [0, 0];
    for (let i = 0; i < x.length; i++) {
      const position = x[i]! + shift;
      if (position < y[0]! || position > y.at(-1)!) continue;
      sum += (interpolate(y, b.values, position) - a.values[i]!) ** 2;
      count++;
    }
    // A shift that leaves little overlap would win by comparing next to nothing.
    return count < x.length / 2 ? Number.POSITIVE_INFINITY : sum / count;
  };
  const steps = Math.min(2000, Math.max(1, Math.ceil((2 * most) / (spacing / 2))));
  let best = 0;
  for (let i = 0; i <= steps; i++) {
    const shift = -most + (2 * most * i) / steps;
    if (cost(shift) < cost(best)) best = shift;
  }
  return goldenSection(cost, Math.max(-most, best - spacing), Math.min(most, best + spacing), best);
}

function goldenSection(cost: (x: number) => number, from: number, to: number, start: number): number {
  const ratio = (Math.sqrt(5) - 1) / 2;
  let [low, high] = [from, to];
  for (let step = 0; step < 60; step++) {
    const [p, q] = [high - ratio * (high - low), low + ratio * (high - low)];
    if (cost(p) < cost(q)) high = q;
    else low = p;
  }
  const found = (low + high) / 2;
  // Where nothing is gained (a shift of exactly 0, say), the plain position stays.
  return cost(found) < cost(start) ? found : start;
}

/** The series moved along its axis. */
export function moved(series: Series, by: number): Series {
  if (series.along === null) return series;
  return { ...series, along: { ...series.along, values: series.along.values.map((position) => position + by) } };
}
