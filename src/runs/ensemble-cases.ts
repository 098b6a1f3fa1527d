/** Cases whose noise was measured come in; whether three new runs belong to the same ensemble goes out. */
import { fieldMeans } from '../compare/compare-outputs.edge.ts';
import { buildEnsemble, criteriaFor, type EnsembleOutcome, ensembleTest } from '../compare/ensemble-test.ts';
import type { Case } from '../model/manifest.ts';
import { casesNamed } from './configuration.ts';
import type { Exchange } from './exchange.ts';
import { lastBitRuns, USUAL_RUNS } from './measure-noise.ts';
import { readNoise, referencePlace } from './reference-files.edge.ts';
import { type LaboratoryRequest, type TreeRuns, withLaboratory } from './rerun.ts';

export interface EnsembleOfCase {
  readonly case: string;
  readonly quantities: readonly string[];
  /** Runs that the ensemble is made of. */
  readonly members: number;
  /** null when it could not be tested; `why` says so. */
  readonly outcome: EnsembleOutcome | null;
  readonly why: string;
}

/** Fewer members do not tell how far scores spread. Common practice. */
const FEWEST_MEMBERS = 10;
const NEW_RUNS = 3;

/**
 * @returns an outcome for each case asked for, or for each whose noise perturbs inputs
 * @throws {NotDeclared} for a case or module that no manifest declares
 * @source A. H. Baker et al., Geosci. Model Dev. 8 (2015) 2829: three new runs against an ensemble
 */
export async function ensembleCases(
  request: LaboratoryRequest & {
    readonly cases: readonly string[];
    readonly at?: string | null;
    readonly exchanges?: readonly Exchange[];
  },
): Promise<EnsembleOfCase[]> {
  const named = casesNamed(request.manifests, request.cases);
  const cases = request.cases.length > 0 ? named : named.filter((one) => one.noise?.['last-bit'] !== undefined);
  return withLaboratory(request, async (laboratory) => {
    const tree = await laboratory.tree(request.at ?? null);
    const tested: EnsembleOfCase[] = [];
    for (const one of cases) {
      const folder = await referencePlace(tree.listing, laboratory.manifestFolder, one.case, laboratory.store.scratch);
      tested.push(await testCase(one, tree, folder, request.exchanges ?? []));
    }
    return tested;
  });
}

async function testCase(
  theCase: Case,
  tree: TreeRuns,
  folder: string,
  exchanges: readonly Exchange[],
): Promise<EnsembleOfCase> {
  const noise = readNoise(folder);
  const quantities = Object.keys(noise?.means ?? {});
  const members = noise?.runs.length ?? 0;
  const untested = (why: string) => ({ case: theCase.case, quantities, members, outcome: null, why });
  if (noise === null) return untested(`its noise was not measured: call "mortise rerun ${theCase.case} --noise"`);
  const fewest = Math.max(FEWEST_MEMBERS, quantities.length + 2);
  if (members < fewest) {
    return untested(
      `an ensemble of ${quantities.length} quantities needs ${fewest} runs, it has ${members}: raise "runs"`,
    );
  }
  const rows = noise.runs.map((_, run) => quantities.map((name) => noise.means[name]![run]!));
  if (rows.some((row) => !row.every(Number.isFinite)))
    return untested('a run of the ensemble has a mean that is no number');
  // Other seeds than those of the ensemble: a member is no new run.
  const perturbed = lastBitRuns(theCase, tree, (theCase.noise?.runs ?? USUAL_RUNS) + 1, NEW_RUNS);
  if (typeof perturbed === 'string') return untested(perturbed);
  if (perturbed.length === 0)
    return untested('its "noise" names no input under "last-bit", so there are no new runs to make');
  const results = await Promise.all(
    perturbed.map(async ({ replaced }) => (await tree.run(theCase, exchanges, { replaced })).result),
  );
  const runs: number[][] = [];
  for (const result of results) {
    if (result.state !== 'ran') return untested(`a new run failed: ${result.why}`);
    const means = await fieldMeans(theCase, result.out);
    runs.push(quantities.map((name) => means[name] ?? Number.NaN));
  }
  const ensemble = buildEnsemble(quantities, rows);
  // Directions in which the members do not spread at all have no scale to tell a new run by.
  const largest = Math.max(0, ...ensemble.spread);
  const used = ensemble.spread.filter((spread) => spread > 1e-8 * largest).length;
  return { case: theCase.case, quantities, members, outcome: ensembleTest(ensemble, runs, criteriaFor(used)), why: '' };
}

export function ensembleText(tested: readonly EnsembleOfCase[]): string {
  if (tested.length === 0) return 'no case declares inputs under "noise: {last-bit: […]}"\n';
  const line = ({ case: name, members, outcome, why }: EnsembleOfCase): string => {
    if (outcome === null) return `${name}: not tested; ${why}\n`;
    if (outcome.passes) return `${name}: belongs to the ensemble of ${members} runs\n`;
    const failing = `${outcome.failing.length} of ${outcome.scores[0]?.length ?? 0} components lie outside`;
    return `${name}: does not belong to the ensemble of ${members} runs: ${outcome.why ?? failing}\n`;
  };
  return tested.map(line).join('');
}
