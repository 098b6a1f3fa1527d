// NIST Statistical Reference Datasets, and values that SciPy and R print; each entry of the table names its own source.
import { describe, expect, it } from 'vitest';
import {
  kolmogorovSmirnov,
  kolmogorovTail,
  lagOneAutocorrelation,
  mannWhitney,
  pooledTTest,
  studentQuantile,
  summarise,
  type TTest,
  welchTTest,
} from '../../src/compare/statistics.ts';
import checks from '../checks/statistics.json' with { type: 'json' };

type Inputs = Readonly<Record<string, number | readonly number[] | readonly string[]>>;
interface Entry {
  readonly id: string;
  readonly what: string;
  readonly source: string;
  readonly inputs: Inputs;
  readonly expected: Readonly<Record<string, number | string>>;
  readonly tolerance: { readonly relative?: number; readonly absolute?: number };
}

/** Decimal digits of pi by Machin's formula: pi/4 = 4 arctan(1/5) - arctan(1/239). */
function piDigits(count: number): number[] {
  const one = 10n ** BigInt(count + 20);
  const arctan = (inverse: bigint) => {
    let [sum, term] = [0n, one / inverse];
    for (let k = 1n; term !== 0n; k += 2n, term /= -inverse * inverse) sum += term / k;
    return sum;
  };
  const pi = 4n * (4n * arctan(5n) - arctan(239n));
  return [...String(pi)].slice(0, count).map(Number);
}

function dataOf(entry: Entry): number[] {
  if (entry.inputs.data !== undefined) return (entry.inputs.data as readonly string[]).map(Number);
  if (entry.id === 'nist-pidigits') return piDigits(5000).map((digit, i) => (i === 956 ? 3 : digit));
  const base = entry.id === 'nist-numacc4' ? 10_000_000 : 1;
  const at = (tenths: number) => Number(`${base}.${tenths}`);
  return [at(2), ...Array.from({ length: 1000 }, (_, i) => at(i % 2 === 0 ? 1 : 3))];
}

const numbers = (inputs: Inputs, key: string) => inputs[key] as readonly number[];

function measure(entry: Entry): Readonly<Record<string, number>> {
  const { id, inputs } = entry;
  const t = ({ t, p, degrees }: TTest) => ({ t, p, df: degrees });
  if (id.startsWith('nist')) {
    const data = dataOf(entry);
    const { mean, deviation } = summarise(data);
    return { mean, standard_deviation: deviation, lag1_autocorrelation: lagOneAutocorrelation(data) };
  }
  if (id === 't-student-scipy') return t(pooledTTest(summarise(numbers(inputs, 'a')), summarise(numbers(inputs, 'b'))));
  if (id === 't-welch-plant') return t(welchTTest(summarise(numbers(inputs, 'a')), summarise(numbers(inputs, 'b'))));
  if (id === 't-from-stats') {
    const side = (n: number) => ({
      count: inputs[`n${n}`] as number,
      mean: inputs[`mean${n}`] as number,
      deviation: Math.sqrt(inputs[`var${n}`] as number),
    });
    return t(pooledTTest(side(1), side(2)));
  }
  if (id.startsWith('ks-')) {
    const { d, p } = kolmogorovSmirnov(numbers(inputs, 'a'), numbers(inputs, 'b'));
    return { D: d, p_asymptotic: p };
  }
  if (id.startsWith('kolmogorov')) return { Q: kolmogorovTail(inputs.z as number) };
  if (id === 'mann-whitney') {
    const { u1, u2, p } = mannWhitney(numbers(inputs, 'a'), numbers(inputs, 'b'));
    return { U1: u1, U2: u2, p_exact: p };
  }
  return { t: studentQuantile(inputs.p as number, inputs.df as number) };
}

describe('statistics', () => {
  for (const entry of checks as unknown as readonly Entry[]) {
    it(`${entry.what} (${entry.source})`, () => {
      const found = measure(entry);
      let compared = 0;
      for (const [key, value] of Object.entries(entry.expected)) {
        if (!(key in found)) continue;
        const want = Number(value);
        const allowed = entry.tolerance.absolute ?? entry.tolerance.relative! * Math.abs(want);
        expect(Math.abs(found[key]! - want), key).toBeLessThanOrEqual(allowed);
        compared++;
      }
      expect(compared).toBe(Object.keys(entry.expected).filter((key) => !/naive|printed/.test(key)).length);
    });
  }
});
