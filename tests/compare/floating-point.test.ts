// IEEE Std 754-2019, NumPy's documentation of isclose and spacing, and the Fortran standard; each entry names its source.
import { describe, expect, it } from 'vitest';
import { compareArrays } from '../../src/compare/compare-arrays.ts';
import { CompensatedSum } from '../../src/compare/compensated-sum.ts';
import { sameBits, spacing, ulpDistance } from '../../src/compare/ulp.ts';
import { readDecimal } from '../../src/outputs/decimal.ts';
import checks from '../checks/floating-point.json' with { type: 'json' };

interface Entry {
  readonly id: string;
  readonly topic: string;
  readonly what: string;
  readonly source: string;
  readonly inputs: Readonly<Record<string, string | number>>;
  readonly expected: Readonly<Record<string, string | number | boolean>>;
}
const bits = (value: number) =>
  `0x${new BigUint64Array(Float64Array.of(value).buffer)[0]!.toString(16).padStart(16, '0')}`;
const decimal = (value: string | number | undefined) => readDecimal(String(value))!;

const CHECKS: readonly [RegExp, (entry: Entry) => void][] = [
  [
    /^ulp/,
    ({ inputs, expected }) => {
      const [a, b] = [decimal(inputs.a), decimal(inputs.b)];
      expect([bits(a), bits(b)]).toEqual([inputs.a_bits, inputs.b_bits]);
      expect(ulpDistance(a, b)).toBe(BigInt(expected.ulp_distance as number));
      expect(a === b).toBe(expected.equal);
      const { measures } = compareArrays(Float64Array.of(a), Float64Array.of(b));
      expect(measures.maxUlp).toBe(expected.ulp_distance);
    },
  ],
  [/^spacing/, ({ inputs, expected }) => expect(bits(spacing(decimal(inputs.x)))).toBe(expected.spacing_bits)],
  [
    /^isclose/,
    ({ inputs, expected }) => expect(within(decimal(inputs.b), decimal(inputs.a), inputs)).toBe(expected.close),
  ],
  [/^sum-69/, ({ expected }) => expect(String(added(Array(10).fill(0.1)))).toBe(String(Number(expected.neumaier)))],
  [/^sum-71/, ({ expected }) => expect(added([1e16, ...Array(10_000).fill(1)])).toBe(Number(expected.neumaier))],
  [
    /^single/,
    ({ inputs, expected }) => {
      const single = Float32Array.of(decimal(inputs.decimal));
      expect(single[0]).toBe(decimal(expected.float32_as_float64 as string));
      expect(`0x${new Uint32Array(single.buffer)[0]!.toString(16).padStart(8, '0')}`).toBe(expected.bits);
      const wide = Float64Array.of(decimal(inputs.decimal));
      const { measures } = compareArrays(wide, Float64Array.from(single));
      expect(measures.maxRelative).toBeCloseTo(expected.relative_error_vs_double as number, 12);
    },
  ],
  [
    /^literal/,
    ({ inputs, expected }) => expect(readDecimal(inputs.literal as string)).toBe(decimal(expected.value as string)),
  ],
  [
    /^fortran-single-trap/,
    ({ inputs, expected }) => {
      const stored = Math.fround(decimal(inputs.literal));
      expect(stored).toBe(decimal(expected.value as string));
      const { measures, class: found } = compareArrays(
        Float64Array.of(decimal(inputs.literal)),
        Float64Array.of(stored),
      );
      expect(measures.maxRelative).toBeCloseTo(expected.relative_error as number, 15);
      expect(found).toBe('beyond tolerance');
    },
  ],
  [
    /^special/,
    ({ inputs, expected }) => {
      const one = (value: number) =>
        compareArrays(Float64Array.of(value), Float64Array.of(value), { absolute: 1e9 }).class;
      const found: Readonly<Record<string, () => boolean>> = {
        'NaN == NaN': () => one(Number.NaN) !== 'not comparable',
        'Infinity == Infinity': () => one(Number.POSITIVE_INFINITY) === 'bit-for-bit',
        '0 == -0': () => ulpDistance(0, -0) === 0n && !sameBits(0, -0),
        '5e-324/2 == 0': () => decimal('5e-324') / 2 === 0,
        '0.1+0.2 == 0.3': () => ulpDistance(0.1 + 0.2, 0.3) === 0n,
        'signbit(sqrt(-0))': () => sameBits(Math.sqrt(-0), -0),
      };
      expect(found[inputs.expression as string]!()).toBe(expected.value);
    },
  ],
];

function within(reference: number, result: number, inputs: Entry['inputs']): boolean {
  const tolerance = { absolute: inputs.atol as number, relative: inputs.rtol as number };
  const { class: found } = compareArrays(Float64Array.of(reference), Float64Array.of(result), tolerance);
  return found !== 'beyond tolerance' && found !== 'not comparable';
}

function added(terms: readonly number[]): number {
  const sum = new CompensatedSum();
  for (const term of terms) sum.add(term);
  return sum.value;
}

describe('floating-point rules', () => {
  for (const entry of checks as unknown as readonly Entry[]) {
    it(`${entry.topic}: ${entry.what}, ${entry.id} (${entry.source})`, () => {
      const found = CHECKS.find(([pattern]) => pattern.test(entry.id));
      expect(found, `no check for ${entry.id}`).toBeDefined();
      found![1](entry);
    });
  }
});
