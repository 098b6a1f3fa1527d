import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import {
  eosIonising,
  HYDROGEN_MASS,
  ionisationFit,
  ionisedFraction,
  recombinationFit,
  sampleExact,
  starState,
  temperatureOf,
} from './code.ts';
import { densityError, GAMMA, lineOf, PROBLEMS, problemError, runTo } from './riemann.ts';

interface Check {
  readonly id: string;
  readonly inputs: { readonly left: Record<string, string>; readonly right: Record<string, string> };
  readonly expected: Record<string, number | string>;
  readonly source: string;
}
const published = JSON.parse(
  readFileSync(new URL('../checks/riemann-problems.json', import.meta.url), 'utf8'),
) as readonly Check[];

describe('the exact Riemann solver gives the star states that Toro prints (3rd ed., table 4.3)', () => {
  test.each(published)('$id', ({ inputs, expected }) => {
    const side = (from: Record<string, string>) => ({ rho: Number(from.rho), u: Number(from.u), p: Number(from.p) });
    const [left, right] = [side(inputs.left), side(inputs.right)];
    const star = starState(left, right, GAMMA);
    // Just beside the contact, on either side of it.
    const beside = 1e-9 * (1 + Math.abs(star.u));
    const found: Record<string, number> = {
      p_star: star.p,
      u_star: star.u,
      rho_star_L: sampleExact(left, right, GAMMA, star.u - beside).rho,
      rho_star_R: sampleExact(left, right, GAMMA, star.u + beside).rho,
    };
    const names = Object.keys(expected).filter((name) => name in found);
    expect(names).toHaveLength(1);
    for (const name of names) {
      const right = Number(expected[name]);
      expect(Math.abs(found[name]! - right)).toBeLessThanOrEqual(1e-9 + 1e-9 * Math.abs(right));
    }
  });

  test('mass, momentum and energy pass through the shock of the first problem unchanged (Rankine and Hugoniot)', () => {
    const { left, right } = PROBLEMS[0]!;
    const star = starState(left, right, GAMMA);
    const behind = sampleExact(left, right, GAMMA, star.u + 1e-9);
    const speed = (behind.rho * behind.u - right.rho * right.u) / (behind.rho - right.rho);
    const flux = (s: { rho: number; u: number; p: number }) => {
      const w = s.u - speed;
      return [s.rho * w * w + s.p, s.rho * w * (0.5 * w * w + (GAMMA / (GAMMA - 1)) * (s.p / s.rho))];
    };
    for (const [k, value] of flux(behind).entries()) expect(value / flux(right)[k]!).toBeCloseTo(1, 9);
  });
});

describe('the scheme', () => {
  test.each(PROBLEMS.map((problem, i) => ({ problem, name: i + 1 })))(
    "comes nearer to Toro's problem $name at the order that discontinuities allow",
    ({ problem }) => {
      const [coarse, fine, finest] = [100, 200, 400].map((zones) => problemError(problem, zones)) as [
        number,
        number,
        number,
      ];
      // A contact spreads over N^(-2/3) in a scheme of second order, a shock over N^(-1): common knowledge of the trade.
      expect(Math.log2(coarse / fine)).toBeGreaterThan(0.5);
      expect(Math.log2(fine / finest)).toBeGreaterThan(0.5);
      // In problems 3 and 4 a shell of 0.05 holds a quarter of the mass; at 400 zones both its edges still blur a few of its 20.
      expect(finest).toBeLessThan(0.06);
    },
  );

  test('is of second order where the flow is smooth', () => {
    const bump = (x: number) => 1 + 0.2 * Math.exp(-(((x - 0.35) / 0.08) ** 2));
    const errors = [100, 200, 400].map((zones) => {
      const gas = runTo(
        lineOf(zones, (x) => ({ rho: bump(x), u: 1, p: 1 })),
        0.25,
      );
      return densityError(gas, (x) => bump(x - 0.25));
    });
    // The limiter takes the order down at the crest, whence less than two.
    expect(Math.log2(errors[1]! / errors[2]!)).toBeGreaterThan(1.6);
    expect(Math.log2(errors[0]! / errors[1]!)).toBeGreaterThan(1.4);
  });
});

const STATES = [1e-24, 1e-18, 1e-12].flatMap((rho) => [3000, 4500, 8000, 15000, 1e5].map((temp) => ({ rho, temp })));
/** Centred difference along the logarithm of `at`. */
const slope = (f: (x: number) => number, at: number) => (f(at * (1 + 1e-5)) - f(at * (1 - 1e-5))) / (2e-5 * at);

describe('partly ionised hydrogen', () => {
  test.each(STATES)('obeys rho^2 (de/drho)_T = p - T (dp/dT)_rho at $rho g/cm3, $temp K (Maxwell)', ({ rho, temp }) => {
    const left = rho * rho * slope((r) => eosIonising(r, temp).internalEnergy, rho);
    const state = eosIonising(rho, temp);
    const right = state.pressure - temp * slope((t) => eosIonising(rho, t).pressure, temp);
    expect(Math.abs(left - right) / state.pressure).toBeLessThan(1e-5);
  });

  test.each(STATES)(
    'has the sound speed of a change that obeys the first law at $rho g/cm3, $temp K',
    ({ rho, temp }) => {
      // Along an adiabat de = p drho / rho^2; the pressure at both ends gives the speed.
      const { internalEnergy, pressure, soundSpeed } = eosIonising(rho, temp);
      const h = 1e-4;
      const along = (sign: number) => {
        const r = rho * (1 + sign * h);
        // The work to second order, with the pressure at the middle of the way.
        const half = rho * (1 + (sign * h) / 2);
        const halfTemp = temperatureOf(eosIonising, half, internalEnergy + (pressure * (half - rho)) / rho ** 2, temp);
        const work = (eosIonising(half, halfTemp).pressure * (r - rho)) / half ** 2;
        return eosIonising(r, temperatureOf(eosIonising, r, internalEnergy + work, temp)).pressure;
      };
      const squared = (along(1) - along(-1)) / (2 * h * rho);
      expect(Math.sqrt(squared) / soundSpeed).toBeCloseTo(1, 4);
    },
  );

  test.each(STATES)('is as much ionised as recombining at $rho g/cm3, $temp K (detailed balance)', ({ rho, temp }) => {
    const x = ionisedFraction(rho, temp);
    const nuclei = rho / HYDROGEN_MASS;
    // Neutral atoms from the complement, which the difference 1 - x would lose in hot gas.
    const saha = ionisationFit(temp) / recombinationFit(temp);
    const neutral = (nuclei * x * x * nuclei) / saha;
    expect((neutral + x * nuclei) / nuclei).toBeCloseTo(1, 9);
  });
});
