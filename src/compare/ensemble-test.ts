/** Whether new runs belong to an ensemble of accepted ones, told from many quantities at once by principal components. */
import { principalComponents } from './principal-components.ts';
import { summarise } from './statistics.ts';

export interface Ensemble {
  readonly quantities: readonly string[];
  /** Of every quantity, over the members. */
  readonly means: readonly number[];
  readonly deviations: readonly number[];
  /** Loadings of the components, a row each, by falling variance. */
  readonly components: readonly (readonly number[])[];
  /** Standard deviation of the members' scores on every component. */
  readonly spread: readonly number[];
  /** Quantities that are the same in every member: a new run must have the same value. */
  readonly constant: readonly number[];
}

export interface EnsembleOutcome {
  readonly passes: boolean;
  /** Components on which at least `runFailures` of the new runs fall outside. */
  readonly failing: readonly number[];
  /** Scores of every run on every component, in standard deviations of the ensemble. */
  readonly scores: readonly (readonly number[])[];
  /** What decided without statistics: a NaN, or a constant quantity that moved. */
  readonly why?: string;
}

/**
 * @param members  a row a run, a column a quantity (its mean over the domain, say); at least 3 runs, no NaN
 * @source A. H. Baker et al., A new ensemble-based consistency test for the Community Earth System Model, Geosci. Model
 *   Dev. 8 (2015) 2829, section 3
 */
export function buildEnsemble(quantities: readonly string[], members: readonly (readonly number[])[]): Ensemble {
  const columns = quantities.map((_, column) => members.map((member) => member[column]!));
  const summaries = columns.map(summarise);
  const constant = quantities
    .map((_, column) => column)
    .filter((column) => columns[column]!.every((x) => x === columns[column]![0]));
  const means = summaries.map((one) => one.mean);
  // A constant column has no scale of its own; its standardised value is 0 and it takes no part.
  const deviations = summaries.map((one, column) =>
    constant.includes(column) ? Number.POSITIVE_INFINITY : one.deviation,
  );
  const standard = members.map((member) =>
    member.map((value, column) => (value - means[column]!) / deviations[column]!),
  );
  const components = principalComponents(standard);
  const spread = components.map((loadings) => summarise(standard.map((row) => dot(row, loadings))).deviation);
  return { quantities, means, deviations, components, spread, constant };
}

export interface EnsembleCriteria {
  /** How many standard deviations a score may lie from 0. */
  readonly sigmas: number;
  /** How many components are looked at. */
  readonly components: number;
  /** Runs that must fall outside for a component to fail. */
  readonly runFailures: number;
  /** Components that must fail for the runs not to belong. */
  readonly componentFailures: number;
}

/** With three new runs these pass a faithful code about 99.5 times in 100. @source Baker et al. 2015, section 3.2 */
export const BAKER_CRITERIA: EnsembleCriteria = { sigmas: 2, components: 50, runFailures: 2, componentFailures: 3 };

/**
 * Criteria for an ensemble with so many components, made for three new runs, under which a faithful code fails about once in 200
 * times: the number of components that must fail is worked out from the binomial distribution, which gives those of the paper
 * for its 50. A handful of components cannot fail in numbers; there one is enough, but at three standard deviations.
 */
export function criteriaFor(components: number): EnsembleCriteria {
  const used = Math.min(components, BAKER_CRITERIA.components);
  if (used < 10) return { sigmas: 3, components: used, runFailures: 2, componentFailures: 1 };
  // Two or three of three normal scores beyond two standard deviations.
  const outside = 0.0455;
  const fails = 3 * outside ** 2 * (1 - outside) + outside ** 3;
  let term = (1 - fails) ** used;
  let atLeast = 1;
  for (let failures = 0; ; failures++) {
    if (atLeast <= 0.005) return { sigmas: 2, components: used, runFailures: 2, componentFailures: failures };
    atLeast -= term;
    term *= (((used - failures) / (failures + 1)) * fails) / (1 - fails);
  }
}

/** @param runs new runs, a row each, in the order of the ensemble's quantities; the criteria are made for three */
export function ensembleTest(
  ensemble: Ensemble,
  runs: readonly (readonly number[])[],
  criteria: EnsembleCriteria = BAKER_CRITERIA,
): EnsembleOutcome {
  const used = ensemble.components.slice(0, criteria.components);
  const scores = runs.map((run) => {
    const standard = run.map((value, column) => (value - ensemble.means[column]!) / ensemble.deviations[column]!);
    return used.map((loadings, component) => dot(standard, loadings) / ensemble.spread[component]!);
  });
  const failing = used
    .map((_, component) => component)
    .filter((component) => {
      const outside = scores.filter((row) => !(Math.abs(row[component]!) <= criteria.sigmas)).length;
      return outside >= criteria.runFailures;
    });
  const certain = certainFailure(ensemble, runs);
  if (certain !== null) return { passes: false, failing, scores, why: certain };
  return { passes: failing.length < criteria.componentFailures, failing, scores };
}

function certainFailure(ensemble: Ensemble, runs: readonly (readonly number[])[]): string | null {
  for (const run of runs) {
    const nan = run.findIndex(Number.isNaN);
    if (nan >= 0) return `${ensemble.quantities[nan]} is NaN`;
    const moved = ensemble.constant.find((column) => run[column] !== ensemble.means[column]);
    if (moved !== undefined) {
      return `${ensemble.quantities[moved]} is ${ensemble.means[moved]} in every member of the ensemble, and ${run[moved]} now`;
    }
  }
  return null;
}

function dot(a: readonly number[], b: readonly number[]): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}
