/** The five Riemann problems of E. F. Toro, Riemann Solvers and Numerical Methods for Fluid Dynamics, 3rd ed. (2009), chapter 4, solved by the demo's scheme. */
import {
  advance,
  BOLTZMANN,
  type EquationOfState,
  eosPerfect,
  HYDROGEN_MASS,
  type Line,
  type PrimitiveState,
  sampleExact,
  stableStep,
} from './code.ts';

export const GAMMA = 1.4;
export const diatomic: EquationOfState = (rho, temp) => eosPerfect(rho, temp, GAMMA);

export interface Problem {
  readonly left: PrimitiveState;
  readonly right: PrimitiveState;
  /** Place of the membrane on [0, 1] and time of output, as the book's section 10.8 sets them. */
  readonly membrane: number;
  readonly time: number;
}

const state = (rho: number, u: number, p: number): PrimitiveState => ({ rho, u, p });
export const PROBLEMS: readonly Problem[] = [
  { left: state(1, 0, 1), right: state(0.125, 0, 0.1), membrane: 0.5, time: 0.2 },
  { left: state(1, -2, 0.4), right: state(1, 2, 0.4), membrane: 0.5, time: 0.15 },
  { left: state(1, 0, 1000), right: state(1, 0, 0.01), membrane: 0.5, time: 0.012 },
  { left: state(1, 0, 0.01), right: state(1, 0, 100), membrane: 0.5, time: 0.035 },
  { left: state(5.99924, 19.5975, 460.894), right: state(5.99242, -6.19633, 46.095), membrane: 0.4, time: 0.035 },
];

/** A line of zones on [0, 1] that holds `at(x)` at the middle of each. */
export function lineOf(zones: number, at: (x: number) => PrimitiveState): Line {
  const all = Array.from({ length: zones }, (_, i) => at((i + 0.5) / zones));
  return {
    width: 1 / zones,
    rho: Float64Array.from(all, (s) => s.rho),
    momentum: Float64Array.from(all, (s) => s.rho * s.u),
    energy: Float64Array.from(all, (s) => s.p / (GAMMA - 1) + 0.5 * s.rho * s.u * s.u),
    temp: Float64Array.from(all, (s) => (s.p * HYDROGEN_MASS) / (s.rho * BOLTZMANN)),
  };
}

export function runTo(gas: Line, end: number, courant = 0.4): Line {
  for (let time = 0, dt = 0; time < end; time += dt) {
    dt = Math.min(stableStep(gas, diatomic, courant), end - time);
    advance(gas, dt, diatomic);
  }
  return gas;
}

/** Mean absolute error of the density over the mean density. */
export function densityError(gas: Line, exact: (x: number) => number): number {
  let [off, sum] = [0, 0];
  for (let i = 0; i < gas.rho.length; i++) {
    const right = exact((i + 0.5) * gas.width);
    off += Math.abs(gas.rho[i]! - right);
    sum += right;
  }
  return off / sum;
}

export function problemError(problem: Problem, zones: number): number {
  const { left, right, membrane, time } = problem;
  const gas = runTo(
    lineOf(zones, (x) => (x < membrane ? left : right)),
    time,
  );
  return densityError(gas, (x) => sampleExact(left, right, GAMMA, (x - membrane) / time).rho);
}
