/**
 * Cases that declare their noise come in; each is run once for every perturbation that changes no physics, and what those runs
 * lie from the reference goes out, and is kept beside it.
 */
import { compareCase, fieldMeans } from '../compare/compare-outputs.edge.ts';
import { floorOf, type NoiseFloor } from '../compare/noise-floor.ts';
import type { Deviation, Norm } from '../model/deviation.ts';
import type { Case } from '../model/manifest.ts';
import { casesNamed } from './configuration.ts';
import { type Exchange, readExchange } from './exchange.ts';
import { moveLastBits } from './last-bit.ts';
import { readListed } from './listed-tree.edge.ts';
import type { NoiseRecord } from './noise-record.ts';
import { referencePlace, referenceStands, writeNoise } from './reference-files.edge.ts';
import { type LaboratoryRequest, referenceDamage, type TreeRuns, withLaboratory } from './rerun.ts';

export interface MeasuredNoise {
  readonly case: string;
  /** null when nothing could be measured. */
  readonly noise: Omit<NoiseRecord, 'reference'> | null;
  /** Why nothing could be measured, or which runs are left out. */
  readonly why: readonly string[];
}

interface Perturbation {
  readonly says: string;
  readonly exchanges: readonly Exchange[];
  readonly replaced: ReadonlyMap<string, Uint8Array | null>;
}

export const USUAL_RUNS = 8;

/**
 * @throws {NotDeclared} for a case that no manifest declares
 * @throws {NoExchange} for a perturbation that is none
 */
export async function measureNoise(
  request: LaboratoryRequest & { readonly cases: readonly string[] },
): Promise<MeasuredNoise[]> {
  const named = casesNamed(request.manifests, request.cases);
  // Without names, those that have something to measure.
  const cases = request.cases.length > 0 ? named : named.filter((one) => one.noise !== undefined);
  return withLaboratory(request, async (laboratory) => {
    const tree = await laboratory.tree(null);
    const measured: MeasuredNoise[] = [];
    for (const one of cases) {
      const folder = await referencePlace(tree.listing, laboratory.manifestFolder, one.case, laboratory.store.scratch);
      const outcome = await measureCase(one, tree, folder);
      if (outcome.noise !== null && request.signal?.aborted !== true) writeNoise(folder, outcome.noise);
      measured.push(outcome);
    }
    return measured;
  });
}

async function measureCase(theCase: Case, tree: TreeRuns, folder: string): Promise<MeasuredNoise> {
  const nothing = (...why: string[]): MeasuredNoise => ({ case: theCase.case, noise: null, why });
  if (theCase.noise === undefined)
    return nothing('it declares no "noise": say what may change without changing physics');
  if (!referenceStands(folder)) {
    return nothing(`no reference was recorded; record one with "mortise rerun ${theCase.case} --record --reason TEXT"`);
  }
  const damage = await referenceDamage(folder, theCase.case);
  if (damage !== null) return nothing(damage);
  const perturbations = perturbationsOf(theCase, tree);
  if (typeof perturbations === 'string') return nothing(perturbations);
  const runs = await Promise.all(
    perturbations.map(async ({ says, exchanges, replaced }) => {
      const { result } = await tree.run(theCase, exchanges, { replaced });
      if (result.state !== 'ran') return { says, why: `${says}: ${result.why}`, deviations: null, means: null };
      const deviations = await compareCase(theCase, folder, result.out);
      return { says, why: null, deviations, means: await fieldMeans(theCase, result.out) };
    }),
  );
  const left = runs.flatMap((run) => (run.why === null ? [] : [run.why]));
  const used = runs.flatMap((run) => (run.deviations === null ? [] : [run.deviations]));
  if (used.length < 2) return nothing('fewer than two runs ended well, which tell no noise', ...left);
  const noise = {
    date: new Date().toISOString(),
    runs: runs.filter((run) => run.deviations !== null).map((run) => run.says),
    floors: floorsOf(used),
    means: rowsToColumns(runs.flatMap((run) => (run.means === null ? [] : [run.means]))),
  };
  return { case: theCase.case, noise, why: left };
}

function perturbationsOf(theCase: Case, tree: TreeRuns): Perturbation[] | string {
  const { exchanges = [], runs = USUAL_RUNS } = theCase.noise!;
  const perturbations: Perturbation[] = exchanges.map((word) => ({
    says: word,
    exchanges: [readExchange(word)],
    replaced: new Map(),
  }));
  const moved = lastBitRuns(theCase, tree, 1, runs);
  return typeof moved === 'string' ? moved : [...perturbations, ...moved];
}

/** Runs with the last bits of the inputs moved, from the seed `first`; none where no input is declared, or why it cannot be. */
export function lastBitRuns(theCase: Case, tree: TreeRuns, first: number, count: number): Perturbation[] | string {
  const inputs = theCase.noise?.['last-bit'] ?? [];
  if (inputs.length === 0) return [];
  const perturbations: Perturbation[] = [];
  const contents = new Map<string, Uint8Array>();
  for (const input of inputs) {
    const bytes = readListed(tree.listing, input);
    if (bytes === null) return `there is no ${input}, whose last bits are to be moved`;
    if (moveLastBits(bytes, 1).moved === 0)
      return `${input} holds no real number as text, whose last bit could be moved`;
    contents.set(input, bytes);
  }
  for (let run = first; run < first + count; run++) {
    const replaced = new Map([...contents].map(([path, bytes]) => [path, moveLastBits(bytes, run).bytes]));
    perturbations.push({ says: `last bit of ${inputs.join(', ')}, run ${run}`, exchanges: [], replaced });
  }
  return perturbations;
}

const rowsToColumns = (rows: readonly Readonly<Record<string, number>>[]) =>
  Object.fromEntries(Object.keys(rows[0]!).map((name) => [name, rows.map((row) => row[name]!)]));

/** A floor for every quantity and feature; conserved totals are held to their own first value. */
function floorsOf(runs: readonly (readonly Deviation[])[]): Record<string, NoiseFloor> {
  const floors: Record<string, NoiseFloor> = {};
  for (const { quantity, of, tolerance } of runs[0]!) {
    if (of === 'conserved') continue;
    const all = runs.map((run) => run.find((one) => one.quantity === quantity && one.of === of) ?? null);
    floors[quantity] = floorFor(all, tolerance?.norm ?? 'pointwise');
  }
  return floors;
}

function floorFor(all: readonly (Deviation | null)[], norm: Norm): NoiseFloor {
  const usable = all.flatMap((one) => {
    if (one === null || one.measures === null || one.class === 'not comparable') return [];
    const { nanInResult, infInResult, infInReference } = one.measures;
    return nanInResult > 0 || infInResult !== infInReference ? [] : [one.measures];
  });
  const key = { pointwise: 'maxRelative', L1: 'l1', L2: 'l2', Linf: 'linf' } as const;
  const deviations = usable.map((measures) => measures[key[norm]]);
  // Where the reference is zero no relative deviation exists; the norm over the whole field does.
  const told = deviations.every(Number.isFinite) || norm !== 'pointwise';
  if (!told) return floorFor(all, 'Linf');
  const finite = deviations.filter(Number.isFinite);
  return floorOf(norm, finite, all.length - finite.length);
}

export function noiseText(measured: readonly MeasuredNoise[]): string {
  if (measured.length === 0) return 'no case declares its "noise"\n';
  return measured
    .map(({ case: name, noise, why }) => {
      const head = noise === null ? `${name}: not measured\n` : `${name}: ${noise.runs.length} runs\n`;
      const floors = Object.entries(noise?.floors ?? {}).map(([quantity, { norm, deviations, floor, unusable }]) => {
        const median = deviations[Math.floor(deviations.length / 2)];
        const left = unusable === 0 ? '' : `, ${unusable} runs unusable`;
        return median === undefined
          ? `  ${quantity}: no run was usable\n`
          : `  ${quantity}: noise floor ${short(floor)} (${norm}); median ${short(median)}, largest ${short(deviations.at(-1)!)}${left}\n`;
      });
      return head + floors.join('') + why.map((one) => `  ${one}\n`).join('');
    })
    .join('\n');
}

const short = (value: number) => (value === 0 ? '0' : value.toExponential(1));
