/** A quantity as one run wrote it: its values in the declared unit, and the axis along which they stand. */

export interface Axis {
  readonly name: string;
  readonly unit: string;
  readonly values: Float64Array;
}

export interface Series {
  readonly name: string;
  readonly unit: string;
  readonly values: Float64Array;
  readonly shape: readonly number[];
  /** Type as stored: it decides how ULPs are counted. */
  readonly type: string;
  readonly along: Axis | null;
}

/** Doubles between two neighbours of the coarser of two stored types. */
export function grainOf(...types: readonly string[]): number {
  const bits = types.map((type) => (type === 'float32' || type === 'complex64' ? 29 : type === 'float16' ? 42 : 0));
  return 2 ** Math.max(...bits);
}

/** Position along the axis of element `index`, where the axis runs along one dimension of the values or all of them. */
export function positionOf(series: Pick<Series, 'values' | 'shape' | 'along'>, index: number): number | null {
  const { along, shape, values } = series;
  if (along === null) return null;
  if (along.values.length === values.length) return along.values[index] ?? null;
  const dimension = shape.lastIndexOf(along.values.length);
  if (dimension < 0) return null;
  const inner = shape.slice(dimension + 1).reduce((product, extent) => product * extent, 1);
  return along.values[Math.floor(index / inner) % along.values.length] ?? null;
}
