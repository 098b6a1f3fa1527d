/**
 * The physics of the demo code as tests call it. Imported by computed paths: the demo is a code of its own, whose arrays are
 * indexed under laxer compiler rules than this program's, and its files must stay as its history edits them.
 */
const load = (name: string): Promise<Record<string, unknown>> =>
  import(new URL(`../../fixtures/demo/first/src/${name}.ts`, import.meta.url).href);

export interface PrimitiveState {
  rho: number;
  u: number;
  p: number;
}
export interface GasState {
  pressure: number;
  internalEnergy: number;
  soundSpeed: number;
}
export type EquationOfState = (rho: number, temp: number) => GasState;
export interface Line {
  width: number;
  rho: Float64Array;
  momentum: Float64Array;
  energy: Float64Array;
  temp: Float64Array;
}

export const { BOLTZMANN, HYDROGEN_MASS } = (await load('constants')) as Record<'BOLTZMANN' | 'HYDROGEN_MASS', number>;
export const { temperatureOf } = (await load('eos/gas-state')) as {
  temperatureOf: (eos: EquationOfState, rho: number, eint: number, guess: number) => number;
};
export const { eosPerfect } = (await load('eos/perfect')) as {
  eosPerfect: (rho: number, temp: number, gamma: number) => GasState;
};
export const { eosIonising, ionisedFraction } = (await load('eos/ionising')) as {
  eosIonising: EquationOfState;
  ionisedFraction: (rho: number, temp: number) => number;
};
export const { starState, sampleExact } = (await load('hydro/riemann')) as {
  starState: (left: PrimitiveState, right: PrimitiveState, gamma: number) => { p: number; u: number };
  sampleExact: (left: PrimitiveState, right: PrimitiveState, gamma: number, speed: number) => PrimitiveState;
};
export const { advance, stableStep } = (await load('hydro/solver')) as {
  advance: (gas: Line, dt: number, eos: EquationOfState) => void;
  stableStep: (gas: Line, eos: EquationOfState, courant: number) => number;
};
export const { ionisationFit, recombinationFit } = (await load('ionisation/fit')) as Record<
  'ionisationFit' | 'recombinationFit',
  (temp: number) => number
>;
