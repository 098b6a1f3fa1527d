/** The discrete Fourier transform of any length, in place. */

/**
 * X[k] = sum over n of x[n] exp(-2 pi i k n / N).
 *
 * @param re  shape (N,), real parts; overwritten
 * @param im  shape (N,), imaginary parts; overwritten
 * @source J. W. Cooley and J. W. Tukey, Math. Comp. 19 (1965) 297, for powers of two; L. I. Bluestein, IEEE Trans. Audio
 *   Electroacoust. 18 (1970) 451, for any other length
 */
export function fourierTransform(re: Float64Array, im: Float64Array): void {
  const length = re.length;
  if (length < 2) return;
  if ((length & (length - 1)) === 0) powerOfTwo(re, im);
  else anyLength(re, im);
}

function powerOfTwo(re: Float64Array, im: Float64Array): void {
  const length = re.length;
  for (let i = 1, j = 0; i < length; i++) {
    let bit = length >> 1;
    for (; (j & bit) !== 0; bit >>= 1) j ^= bit;
    j ^= bit;
    if (i < j) {
      [re[i], re[j]] = [re[j]!, re[i]!];
      [im[i], im[j]] = [im[j]!, im[i]!];
    }
  }
  for (let size = 2; size <= length; size *= 2) {
    const half = size / 2;
    for (let k = 0; k < half; k++) {
      // Each factor afresh: repeated multiplication would lose digits.
      const angle = (-2 * Math.PI * k) / size;
      const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
      for (let start = k; start < length; start += size) {
        const other = start + half;
        const a = re[other]! * cos - im[other]! * sin;
        const b = re[other]! * sin + im[other]! * cos;
        re[other] = re[start]! - a;
        im[other] = im[start]! - b;
        re[start] = re[start]! + a;
        im[start] = im[start]! + b;
      }
    }
  }
}

/** A convolution with a chirp, done by transforms of a power of two. */
function anyLength(re: Float64Array, im: Float64Array): void {
  const length = re.length;
  let padded = 1;
  while (padded < 2 * length - 1) padded *= 2;
  const chirp = (n: number) => (Math.PI * ((n * n) % (2 * length))) / length;
  const [a, b, c, d] = [0, 1, 2, 3].map(() => new Float64Array(padded)) as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  for (let n = 0; n < length; n++) {
    const [cos, sin] = [Math.cos(chirp(n)), Math.sin(chirp(n))];
    a[n] = re[n]! * cos + im[n]! * sin;
    b[n] = im[n]! * cos - re[n]! * sin;
    c[n] = cos;
    d[n] = sin;
    if (n > 0) {
      c[padded - n] = cos;
      d[padded - n] = sin;
    }
  }
  powerOfTwo(a, b);
  powerOfTwo(c, d);
  for (let k = 0; k < padded; k++) {
    // Conjugated, so that the forward transform below is the inverse one.
    const real = a[k]! * c[k]! - b[k]! * d[k]!;
    b[k] = -(a[k]! * d[k]! + b[k]! * c[k]!);
    a[k] = real;
  }
  powerOfTwo(a, b);
  for (let k = 0; k < length; k++) {
    const [cos, sin] = [Math.cos(chirp(k)), Math.sin(chirp(k))];
    const [x, y] = [a[k]! / padded, -b[k]! / padded];
    re[k] = x * cos + y * sin;
    im[k] = y * cos - x * sin;
  }
}
