/**
 * The block measures of measure-block.ts in vector registers; the same values to the last bit.
 * Written in AssemblyScript, built to measure-block.wasm. The memory is the caller's: see measure-kernel.edge.ts.
 *
 * One pass adds up the sums and asks, without dividing, whether any element could raise the largest relative, ULP or
 * weighed deviation so far; only then a second, plain pass over the block finds the exact values. On real data the maxima
 * settle after a few blocks, so that divisions hardly ever run.
 */

const INFINITY: f64 = Infinity;
/** A little below 1, so that rounding in a bound never hides an element that reaches the maximum. */
const GUARD: f64 = 1.0 - 1.0 / 281474976710656.0;

// Places in the totals, in numbers of 8 bytes. Counts are doubles, maxUlp an unsigned 64-bit integer.
const IDENTICAL = 0, NAN_REFERENCE = 1, NAN_RESULT = 2, INF_REFERENCE = 3, INF_RESULT = 4, UNLIKE = 5;
const MAX_ABSOLUTE = 6, MAX_RELATIVE = 7, MAX_ULP = 8, MAX_REFERENCE = 9;
const SUM_ABSOLUTE = 10, SUM_SQUARES = 11, SUM_REFERENCE = 12, SUM_REFERENCE_SQUARES = 13, WORST_RATIO = 14, WORST_INDEX = 15;

function get(totals: usize, place: i32): f64 { return load<f64>(totals + (<usize>place << 3)); }
function put(totals: usize, place: i32, value: f64): void { store<f64>(totals + (<usize>place << 3), value); }

export function measure(reference: usize, result: usize, count: i32, absolute: f64, relative: f64, totals: usize): void {
  const R = get(totals, MAX_RELATIVE);
  const T = get(totals, WORST_RATIO);
  const U = load<u64>(totals + (MAX_ULP << 3));
  // For numbers of one sign the distance is |r - s| of the encodings, below 2^63; |x| > U asks whether x + U, unsigned, is
  // above 2 U, and unsigned comparison is signed comparison with the top bits turned.
  const u = U > <u64>i64.MAX_VALUE ? <u64>i64.MAX_VALUE : U;
  const ulpShift = i64x2.splat(<i64>(u ^ 0x8000000000000000));
  const ulpBound = i64x2.splat(<i64>((u << 1) ^ 0x8000000000000000));
  const relativeBound = f64x2.splat(R * GUARD);
  const ratioAbsolute = f64x2.splat(T * GUARD * absolute);
  const ratioRelative = f64x2.splat(T * GUARD * relative);

  let sumAbsolute0 = f64x2.splat(0), sumAbsolute1 = f64x2.splat(0);
  let sumSquares0 = f64x2.splat(0), sumSquares1 = f64x2.splat(0);
  let sumReference0 = f64x2.splat(0), sumReference1 = f64x2.splat(0);
  let sumReferenceSquares0 = f64x2.splat(0), sumReferenceSquares1 = f64x2.splat(0);
  let maxAbsolute = f64x2.splat(get(totals, MAX_ABSOLUTE));
  let maxReference = f64x2.splat(get(totals, MAX_REFERENCE));
  let identical = i64x2.splat(0);
  let higher = i64x2.splat(0), signs = i64x2.splat(0);

  const whole = count & ~3;
  for (let i = 0; i < whole; i += 4) {
    const at = <usize>i << 3;
    {
      const r = v128.load(reference + at), s = v128.load(result + at);
      const size = f64x2.abs(r);
      const d = f64x2.abs(f64x2.sub(s, r));
      const same = i64x2.eq(r, s);
      identical = i64x2.sub(identical, same);
      sumAbsolute0 = f64x2.add(sumAbsolute0, d);
      sumSquares0 = f64x2.add(sumSquares0, f64x2.mul(d, d));
      sumReference0 = f64x2.add(sumReference0, size);
      sumReferenceSquares0 = f64x2.add(sumReferenceSquares0, f64x2.mul(r, r));
      maxAbsolute = f64x2.pmax(maxAbsolute, d);
      maxReference = f64x2.pmax(maxReference, size);
      const raised = v128.or(
        v128.or(f64x2.ge(d, f64x2.mul(relativeBound, size)), f64x2.ge(d, f64x2.add(ratioAbsolute, f64x2.mul(ratioRelative, size)))),
        i64x2.gt_s(i64x2.add(i64x2.sub(r, s), ulpShift), ulpBound),
      );
      higher = v128.or(higher, v128.andnot(raised, same));
      signs = v128.or(signs, v128.xor(r, s));
    }
    {
      const r = v128.load(reference + at, 16), s = v128.load(result + at, 16);
      const size = f64x2.abs(r);
      const d = f64x2.abs(f64x2.sub(s, r));
      const same = i64x2.eq(r, s);
      identical = i64x2.sub(identical, same);
      sumAbsolute1 = f64x2.add(sumAbsolute1, d);
      sumSquares1 = f64x2.add(sumSquares1, f64x2.mul(d, d));
      sumReference1 = f64x2.add(sumReference1, size);
      sumReferenceSquares1 = f64x2.add(sumReferenceSquares1, f64x2.mul(r, r));
      maxAbsolute = f64x2.pmax(maxAbsolute, d);
      maxReference = f64x2.pmax(maxReference, size);
      const raised = v128.or(
        v128.or(f64x2.ge(d, f64x2.mul(relativeBound, size)), f64x2.ge(d, f64x2.add(ratioAbsolute, f64x2.mul(ratioRelative, size)))),
        i64x2.gt_s(i64x2.add(i64x2.sub(r, s), ulpShift), ulpBound),
      );
      higher = v128.or(higher, v128.andnot(raised, same));
      signs = v128.or(signs, v128.xor(r, s));
    }
  }
  // The last block, when it is not a multiple of four, and any block with a NaN or an infinity go the plain way. A
  // difference that is not finite leaves a sum that is not.
  const sumAbsolute = sum(f64x2.add(sumAbsolute0, sumAbsolute1));
  if (whole != count || !(sumAbsolute < INFINITY)) return measurePlainly(reference, result, count, absolute, relative, totals);

  put(totals, IDENTICAL, <f64>(i64x2.extract_lane(identical, 0) + i64x2.extract_lane(identical, 1)));
  put(totals, NAN_REFERENCE, 0);
  put(totals, NAN_RESULT, 0);
  put(totals, INF_REFERENCE, 0);
  put(totals, INF_RESULT, 0);
  put(totals, UNLIKE, 0);
  put(totals, MAX_ABSOLUTE, larger(maxAbsolute));
  put(totals, MAX_REFERENCE, larger(maxReference));
  put(totals, SUM_ABSOLUTE, sumAbsolute);
  put(totals, SUM_SQUARES, sum(f64x2.add(sumSquares0, sumSquares1)));
  put(totals, SUM_REFERENCE, sum(f64x2.add(sumReference0, sumReference1)));
  put(totals, SUM_REFERENCE_SQUARES, sum(f64x2.add(sumReferenceSquares0, sumReferenceSquares1)));
  put(totals, WORST_INDEX, -1);
  const otherSign = (i64x2.extract_lane(signs, 0) | i64x2.extract_lane(signs, 1)) < 0;
  if (otherSign || v128.any_true(higher)) raiseMaxima(reference, result, count, absolute, relative, totals);
}

function sum(lanes: v128): f64 { return f64x2.extract_lane(lanes, 0) + f64x2.extract_lane(lanes, 1); }
function larger(lanes: v128): f64 { return Math.max(f64x2.extract_lane(lanes, 0), f64x2.extract_lane(lanes, 1)); }

function ulpDistance(r: f64, s: f64): u64 {
  const a = ordered(reinterpret<i64>(r)), b = ordered(reinterpret<i64>(s));
  return a > b ? <u64>a - <u64>b : <u64>b - <u64>a;
}

function ordered(bits: i64): i64 { return bits < 0 ? -(bits & i64.MAX_VALUE) : bits; }

/** Exact values of the largest relative, ULP and weighed deviation; all elements are finite. */
function raiseMaxima(reference: usize, result: usize, count: i32, absolute: f64, relative: f64, totals: usize): void {
  let maxRelative = get(totals, MAX_RELATIVE);
  let worstRatio = get(totals, WORST_RATIO);
  let maxUlp = load<u64>(totals + (MAX_ULP << 3));
  let worstIndex = -1;
  for (let i = 0; i < count; i++) {
    const at = <usize>i << 3;
    const r = load<f64>(reference + at), s = load<f64>(result + at);
    const d = Math.abs(s - r);
    if (d == 0) continue;
    const size = Math.abs(r);
    const ratio = d / size;
    if (ratio > maxRelative) maxRelative = ratio;
    const weighed = d / (absolute + relative * size);
    if (weighed > worstRatio) {
      worstRatio = weighed;
      worstIndex = i;
    }
    const ulp = ulpDistance(r, s);
    if (ulp > maxUlp) maxUlp = ulp;
  }
  put(totals, MAX_RELATIVE, maxRelative);
  put(totals, WORST_RATIO, worstRatio);
  store<u64>(totals + (MAX_ULP << 3), maxUlp);
  put(totals, WORST_INDEX, <f64>worstIndex);
}

/** Element by element, as measure-block.ts has it. */
function measurePlainly(reference: usize, result: usize, count: i32, absolute: f64, relative: f64, totals: usize): void {
  let identical = 0, nanReference = 0, nanResult = 0, infReference = 0, infResult = 0, unlike = 0;
  let maxAbsolute = get(totals, MAX_ABSOLUTE), maxRelative = get(totals, MAX_RELATIVE), maxReference = get(totals, MAX_REFERENCE);
  let maxUlp = load<u64>(totals + (MAX_ULP << 3));
  let worstRatio = get(totals, WORST_RATIO);
  let worstIndex = -1;
  // Four partial sums, element i into sum i modulo 4.
  let a0: f64 = 0, a1: f64 = 0, a2: f64 = 0, a3: f64 = 0;
  let q0: f64 = 0, q1: f64 = 0, q2: f64 = 0, q3: f64 = 0;
  let r0: f64 = 0, r1: f64 = 0, r2: f64 = 0, r3: f64 = 0;
  let p0: f64 = 0, p1: f64 = 0, p2: f64 = 0, p3: f64 = 0;
  for (let i = 0; i < count; i++) {
    const at = <usize>i << 3;
    const r = load<f64>(reference + at), s = load<f64>(result + at);
    const size = Math.abs(r);
    const same = reinterpret<i64>(r) == reinterpret<i64>(s);
    if (same) identical++;
    if (!(size < INFINITY && Math.abs(s) < INFINITY)) {
      const nanR = r != r, nanS = s != s;
      if (nanR) nanReference++;
      else if (size == INFINITY) infReference++;
      if (nanS) nanResult++;
      else if (Math.abs(s) == INFINITY) infResult++;
      if (r == s) continue;
      unlike++;
      if (!nanR && !nanS) maxAbsolute = INFINITY;
      if (worstRatio < INFINITY) {
        worstRatio = INFINITY;
        worstIndex = i;
      }
      continue;
    }
    const d = Math.abs(s - r);
    const lane = i & 3;
    if (lane == 0) { r0 += size; p0 += r * r; a0 += d; q0 += d * d; }
    else if (lane == 1) { r1 += size; p1 += r * r; a1 += d; q1 += d * d; }
    else if (lane == 2) { r2 += size; p2 += r * r; a2 += d; q2 += d * d; }
    else { r3 += size; p3 += r * r; a3 += d; q3 += d * d; }
    if (size > maxReference) maxReference = size;
    if (d > maxAbsolute) maxAbsolute = d;
    if (d > 0) {
      const ratio = d / size;
      if (ratio > maxRelative) maxRelative = ratio;
      const allowed = absolute + relative * size;
      if (d / allowed > worstRatio) {
        worstRatio = d / allowed;
        worstIndex = i;
      }
      const ulp = ulpDistance(r, s);
      if (ulp > maxUlp) maxUlp = ulp;
    }
  }
  put(totals, IDENTICAL, identical);
  put(totals, NAN_REFERENCE, nanReference);
  put(totals, NAN_RESULT, nanResult);
  put(totals, INF_REFERENCE, infReference);
  put(totals, INF_RESULT, infResult);
  put(totals, UNLIKE, unlike);
  put(totals, MAX_ABSOLUTE, maxAbsolute);
  put(totals, MAX_RELATIVE, maxRelative);
  store<u64>(totals + (MAX_ULP << 3), maxUlp);
  put(totals, MAX_REFERENCE, maxReference);
  put(totals, SUM_ABSOLUTE, a0 + a2 + (a1 + a3));
  put(totals, SUM_SQUARES, q0 + q2 + (q1 + q3));
  put(totals, SUM_REFERENCE, r0 + r2 + (r1 + r3));
  put(totals, SUM_REFERENCE_SQUARES, p0 + p2 + (p1 + p3));
  put(totals, WORST_RATIO, worstRatio);
  put(totals, WORST_INDEX, <f64>worstIndex);
}
