/** Principal components of a table: directions in which its rows spread most. */

/**
 * Components by falling variance, as many as there are directions with variance; each of unit length, its largest entry
 * positive so that the sign does not depend on the algorithm.
 *
 * @param rows centred and standardised, shape (runs, quantities)
 * @returns shape (components, quantities)
 */
export function principalComponents(rows: readonly (readonly number[])[]): number[][] {
  const width = rows[0]?.length ?? 0;
  const covariance = Array.from({ length: width }, (_, i) =>
    Array.from(
      { length: width },
      (_, j) => rows.reduce((sum, row) => sum + row[i]! * row[j]!, 0) / Math.max(1, rows.length - 1),
    ),
  );
  const { values, vectors } = symmetricEigen(covariance);
  const order = values.map((_, index) => index).sort((a, b) => values[b]! - values[a]!);
  const largest = Math.max(0, ...values);
  return order
    .filter((index) => values[index]! > 1e-12 * largest)
    .slice(0, Math.max(0, rows.length - 1))
    .map((index) => {
      const vector = vectors.map((row) => row[index]!);
      const peak = vector.reduce((best, value) => (Math.abs(value) > Math.abs(best) ? value : best), 0);
      return peak < 0 ? vector.map((value) => -value) : vector;
    });
}

/**
 * Eigenvalues and eigenvectors (columns) of a symmetric matrix, by cyclic Jacobi rotations: slower than others for large
 * matrices, accurate for small ones, and a few lines.
 * @source C. G. J. Jacobi, J. reine angew. Math. 30 (1846) 51; rotation formulas of Rutishauser, Numer. Math. 9 (1966) 1
 */
export function symmetricEigen(matrix: readonly (readonly number[])[]): { values: number[]; vectors: number[][] } {
  const size = matrix.length;
  const a = matrix.map((row) => [...row]);
  const v = Array.from({ length: size }, (_, i) => Array.from({ length: size }, (_, j) => (i === j ? 1 : 0)));
  for (let sweep = 0; sweep < 60; sweep++) {
    let off = 0;
    for (let p = 0; p < size; p++) for (let q = p + 1; q < size; q++) off += Math.abs(a[p]![q]!);
    if (off === 0) break;
    for (let p = 0; p < size; p++) {
      for (let q = p + 1; q < size; q++) rotate(a, v, p, q);
    }
  }
  return { values: a.map((row, i) => row[i]!), vectors: v };
}

function rotate(a: number[][], v: number[][], p: number, q: number): void {
  const apq = a[p]![q]!;
  const [app, aqq] = [a[p]![p]!, a[q]![q]!];
  if (Math.abs(apq) <= 1e-18 * Math.sqrt(Math.abs(app * aqq)) || apq === 0) {
    a[p]![q] = 0;
    a[q]![p] = 0;
    return;
  }
  const theta = (aqq - app) / (2 * apq);
  const t = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.hypot(theta, 1));
  const c = 1 / Math.hypot(t, 1);
  const s = t * c;
  for (let k = 0; k < a.length; k++) {
    const [akp, akq] = [a[k]![p]!, a[k]![q]!];
    a[k]![p] = c * akp - s * akq;
    a[k]![q] = s * akp + c * akq;
  }
  for (let k = 0; k < a.length; k++) {
    const [apk, aqk] = [a[p]![k]!, a[q]![k]!];
    a[p]![k] = c * apk - s * aqk;
    a[q]![k] = s * apk + c * aqk;
    const [vkp, vkq] = [v[k]![p]!, v[k]![q]!];
    v[k]![p] = c * vkp - s * vkq;
    v[k]![q] = s * vkp + c * vkq;
  }
}
