/** Power spectra of fields: two turbulent runs never agree point by point, but their spectra must. */
import { fourierTransform } from './fourier.ts';
import type { Series } from './series.ts';

/**
 * The power in every shell of wave numbers: element k sums |F|^2 / N^2 over the modes whose wave number, in periods over the
 * box, rounds to k. The sum of all shells is the mean square of the field (Parseval's theorem).
 *
 * @param values  shape `shape`, the last extent running fastest; at equal spacing in a periodic box
 * @returns shape (K,), in the unit of the field squared
 */
export function powerSpectrum(values: Float64Array, shape: readonly number[]): Float64Array {
  const total = values.length;
  const extents = shape.filter((extent) => extent > 1);
  const [re, im] = [values.slice(), new Float64Array(total)];
  let stride = 1;
  for (const extent of extents.toReversed()) {
    transformAlong(re, im, extent, stride);
    stride *= extent;
  }
  const largest = Math.round(Math.hypot(...extents.map((extent) => Math.floor(extent / 2))));
  const shells = new Float64Array(largest + 1);
  for (let i = 0; i < total; i++) {
    let [rest, square] = [i, 0];
    for (let axis = extents.length - 1; axis >= 0; axis--) {
      const extent = extents[axis]!;
      const index = rest % extent;
      rest = (rest - index) / extent;
      const wave = index <= extent / 2 ? index : extent - index;
      square += wave * wave;
    }
    shells[Math.round(Math.sqrt(square))]! += (re[i]! ** 2 + im[i]! ** 2) / total ** 2;
  }
  return shells;
}

function transformAlong(re: Float64Array, im: Float64Array, extent: number, stride: number): void {
  const [a, b] = [new Float64Array(extent), new Float64Array(extent)];
  for (let block = 0; block < re.length; block += extent * stride) {
    for (let offset = block; offset < block + stride; offset++) {
      for (let i = 0; i < extent; i++) {
        a[i] = re[offset + i * stride]!;
        b[i] = im[offset + i * stride]!;
      }
      fourierTransform(a, b);
      for (let i = 0; i < extent; i++) {
        re[offset + i * stride] = a[i]!;
        im[offset + i * stride] = b[i]!;
      }
    }
  }
}

/** Both sides as spectra over the wave numbers that both resolve; finer grids have more, which the coarser cannot answer. */
export function spectra(
  reference: Series,
  result: Series,
): { readonly reference: Series; readonly result: Series } | { readonly why: string } {
  for (const side of [reference, result]) {
    if (side.type.startsWith('complex')) return { why: `${side.name} is complex: its spectrum is not made` };
    const along = side.along?.values;
    if (along !== undefined && along.length === side.values.length && !isEven(along)) {
      return { why: `the spectrum of ${side.name} needs equal spacing along ${side.along!.name}` };
    }
  }
  const [a, b] = [reference, result].map((side) => powerSpectrum(side.values, side.shape)) as [
    Float64Array,
    Float64Array,
  ];
  const count = Math.min(a.length, b.length);
  const along = { name: 'wave number', unit: '1', values: Float64Array.from({ length: count }, (_, k) => k) };
  const made = (side: Series, values: Float64Array): Series => ({
    ...side,
    unit: side.unit === '' ? '' : `(${side.unit})^2`,
    // Sums over all points are no roundings of the stored type.
    type: 'float64',
    values: values.slice(0, count),
    shape: [count],
    along,
  });
  return { reference: made(reference, a), result: made(result, b) };
}

function isEven(axis: Float64Array): boolean {
  const step = (axis.at(-1)! - axis[0]!) / (axis.length - 1);
  return axis.every((at, i) => Math.abs(at - (axis[0]! + i * step)) <= 1e-6 * Math.abs(step));
}
