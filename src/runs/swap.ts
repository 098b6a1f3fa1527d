/**
 * Exchanges come in; cases are run with and without them, and what moved goes out: by how many tolerances, where along the
 * profile, which exchange did it, and what only several of them do together.
 */
import { compareCase } from '../compare/compare-outputs.edge.ts';
import type { Deviation, DeviationClass } from '../model/deviation.ts';
import type { Case } from '../model/manifest.ts';
import { type CaseState, worstClass } from './case-outcome.ts';
import { casesNamed, configurationOf, NotDeclared } from './configuration.ts';
import { type Stretch, signedTolerances, stretchesBeyond, tolerancesApart } from './distance.ts';
import { type Exchange, printExchange } from './exchange.ts';
import { dividends, membersOf, type Subset, sampledShares, shapleyShares, subsetsOf } from './factorial.ts';
import { readNoise, readReferenceIn, referencePlace, referenceStands } from './reference-files.edge.ts';
import { type Laboratory, type RerunRequest, type TreeRuns, withLaboratory } from './rerun.ts';
import { smallestSet } from './smallest-set.ts';

export interface SwapRequest extends Omit<RerunRequest, 'exchanges'> {
  readonly exchanges: readonly Exchange[];
  /** What the exchanged runs are compared with; `plugged`, a run without exchanges, when absent. */
  readonly against?: 'plugged' | 'reference';
  /** Most runs a case when there are too many exchanges for all their combinations. */
  readonly budget?: number;
}

export interface SwapRun {
  readonly exchanges: readonly string[];
  readonly state: CaseState | 'compared';
  readonly why: string;
  readonly class: DeviationClass | null;
  readonly deviations: readonly Deviation[];
  readonly seconds: number | null;
}

export interface Effect {
  readonly quantity: string;
  readonly of: Deviation['of'];
  /** By all exchanges together, in tolerances; below zero when a feature fell. Infinity where not comparable. */
  readonly together: number;
  /** Of each exchange alone, in the order asked for; null when that run has no result. */
  readonly alone: readonly (number | null)[];
  /** Shapley shares of `together`; null when a run they need has no result or is not comparable. */
  readonly shares: readonly number[] | null;
  /** Standard errors of the shares where they were sampled. */
  readonly shareErrors: readonly number[] | null;
  /** What combinations do beyond their parts, greatest first; empty where not all combinations were run. */
  readonly interactions: readonly { readonly exchanges: readonly string[]; readonly tolerances: number }[];
  /** Where along the profile it left its band with all exchanges. */
  readonly stretches: readonly Stretch[];
}

export interface CaseSwap {
  readonly case: string;
  readonly against: 'plugged' | 'reference';
  /** Why there is nothing to compare with; null when there is. */
  readonly baselineWhy: string | null;
  /** By combination: each alone, and all together last. */
  readonly runs: readonly SwapRun[];
  readonly effects: readonly Effect[];
  /** The smallest set of exchanges that moves any quantity beyond tolerance; null when nothing moves. */
  readonly smallest: readonly string[] | null;
  /** Worst class with all exchanges; null without a result. */
  readonly class: DeviationClass | null;
}

/** Up to this many exchanges, all combinations are run. */
const FULL_FACTORIAL = 4;

/**
 * Swaps modules, values of the build or variables, and says what moves.
 *
 * @throws {NotDeclared} for a module or case that no manifest declares, or an exchange that changes nothing
 */
export async function swapModules(request: SwapRequest): Promise<CaseSwap[]> {
  const cases = casesNamed(request.manifests, request.cases ?? []);
  checkExchanges(request, cases);
  return withLaboratory(request, async (laboratory) => {
    const tree = await laboratory.tree(request.at ?? null);
    const asked = (request.cases ?? []).length > 0;
    // Cases that do not use an exchanged component can't move; they are left out unless asked for by name.
    const concerned = asked ? cases : cases.filter((one) => concerns(request, one));
    return Promise.all(concerned.map((one) => new CaseSwapping(request, laboratory, tree, one).swap()));
  });
}

function checkExchanges(request: SwapRequest, cases: readonly Case[]): void {
  if (request.exchanges.length === 0) throw new NotDeclared('nothing to exchange: name COMPONENT=MODULE');
  const names = request.exchanges.map((one) => `${one.of} ${one.name}`);
  const twice = request.exchanges.find((_, i) => names.indexOf(names[i]!) !== i);
  if (twice !== undefined) throw new NotDeclared(`${twice.name} is exchanged twice`);
  for (const exchange of request.exchanges) {
    if (exchange.of !== 'module') continue;
    const changes = cases.some(
      (one) =>
        configurationOf(request.manifests, { ...one, uses: undefined } as unknown as Case).plugged[exchange.name] !==
        exchange.to,
    );
    // Reports a module that is not declared, or of another component, before anything is run.
    for (const one of cases.slice(0, 1)) configurationOf(request.manifests, one, [exchange]);
    if (!changes) throw new NotDeclared(`${exchange.to} is plugged into ${exchange.name} already`);
  }
}

function concerns(request: SwapRequest, theCase: Case): boolean {
  return request.exchanges.some(
    (exchange) => exchange.of !== 'module' || theCase.uses === undefined || theCase.uses.includes(exchange.name),
  );
}

class CaseSwapping {
  private readonly request: SwapRequest;
  private readonly laboratory: Laboratory;
  private readonly tree: TreeRuns;
  private readonly theCase: Case;
  private readonly runs = new Map<Subset, Promise<SwapRun>>();
  private baseline: { readonly folder: string } | { readonly why: string } = { why: 'it was not run' };
  private against: 'plugged' | 'reference';

  constructor(request: SwapRequest, laboratory: Laboratory, tree: TreeRuns, theCase: Case) {
    this.request = request;
    this.laboratory = laboratory;
    this.tree = tree;
    this.theCase = theCase;
    this.against = request.against ?? 'plugged';
  }

  async swap(): Promise<CaseSwap> {
    const { exchanges } = this.request;
    const count = exchanges.length;
    const all = 2 ** count - 1;
    this.baseline = await this.baselineFolder();
    const full = count <= FULL_FACTORIAL;
    const single = exchanges.map((_, i) => 1 << i);
    const wanted = full ? subsetsOf(count).filter((subset) => subset > 0) : [...new Set([...single, all])];
    const runs = await Promise.all(wanted.map((subset) => this.run(subset)));
    const together = await this.run(all);
    const effects = await this.effects(together, full);
    return {
      case: this.theCase.case,
      against: this.against,
      baselineWhy: 'why' in this.baseline ? this.baseline.why : null,
      runs,
      effects,
      smallest: await this.smallest(together),
      class: together.class,
    };
  }

  private async baselineFolder(): Promise<{ folder: string } | { why: string }> {
    if (this.against === 'plugged') {
      const { result } = await this.tree.run(this.theCase, []);
      if (result.state === 'ran') return { folder: result.out };
      if (result.state !== 'not runnable') return { why: `with the plugged modules, ${result.why}` };
      // A plugged module that can't run here still has its reference.
      this.against = 'reference';
    }
    const { manifestFolder, store } = this.laboratory;
    const folder = await referencePlace(this.tree.listing, manifestFolder, this.theCase.case, store.scratch);
    if (!referenceStands(folder)) return { why: `no reference of ${this.theCase.case} was recorded` };
    readReferenceIn(folder, this.theCase.case);
    return { folder };
  }

  private run(subset: Subset): Promise<SwapRun> {
    let run = this.runs.get(subset);
    if (run === undefined) {
      run = this.runNow(subset);
      this.runs.set(subset, run);
    }
    return run;
  }

  private async runNow(subset: Subset): Promise<SwapRun> {
    const exchanges = membersOf(subset).map((i) => this.request.exchanges[i]!);
    const base = { exchanges: exchanges.map(printExchange), class: null, deviations: [], seconds: null };
    if (subset === 0 && this.against === 'plugged')
      return { ...base, state: 'compared', why: '', class: 'bit-for-bit' };
    const { result } = await this.tree.run(this.theCase, exchanges);
    if (result.state !== 'ran') return { ...base, state: result.state, why: result.why };
    if ('why' in this.baseline)
      return { ...base, state: 'no reference', why: this.baseline.why, seconds: result.seconds };
    const noise = readNoise(this.baseline.folder)?.floors;
    const deviations = await compareCase(
      this.theCase,
      this.baseline.folder,
      result.out,
      noise === undefined ? {} : { noise },
    );
    return { ...base, state: 'compared', why: '', deviations, class: worstClass(deviations), seconds: result.seconds };
  }

  private async effects(together: SwapRun, full: boolean): Promise<Effect[]> {
    const { exchanges } = this.request;
    const count = exchanges.length;
    const effects: Effect[] = [];
    for (const [place, deviation] of together.deviations.entries()) {
      const value = async (subset: Subset): Promise<number | null> => {
        const run = await this.run(subset);
        if (run.state !== 'compared') return null;
        const own = run.deviations[place];
        return own === undefined ? 0 : signedTolerances(own);
      };
      const alone = await Promise.all(exchanges.map((_, i) => value(1 << i)));
      const effect = {
        quantity: deviation.quantity,
        of: deviation.of,
        together: signedTolerances(deviation),
        alone,
        stretches: stretchesBeyond(deviation),
      };
      const none = { ...effect, shares: null, shareErrors: null, interactions: [] };
      if (full) {
        const values = await Promise.all(subsetsOf(count).map(value));
        if (!values.every((one): one is number => one !== null && Number.isFinite(one))) effects.push(none);
        else effects.push({ ...none, shares: shapleyShares(values), interactions: this.interactions(values) });
        continue;
      }
      try {
        const budget = this.request.budget ?? 8 * count;
        const sampled = await sampledShares(count, async (subset) => finite(await value(subset)), budget, seeded(1));
        effects.push({ ...none, shares: sampled.shares, shareErrors: sampled.errors });
      } catch (error) {
        if (!(error instanceof NoValue)) throw error;
        effects.push(none);
      }
    }
    return effects;
  }

  private interactions(values: readonly number[]): Effect['interactions'] {
    return dividends(values)
      .map((tolerances, subset) => ({ members: membersOf(subset), tolerances }))
      .filter(({ members, tolerances }) => members.length > 1 && Math.abs(tolerances) > LEAST_INTERACTION)
      .map(({ members, tolerances }) => ({
        exchanges: members.map((i) => printExchange(this.request.exchanges[i]!)),
        tolerances,
      }))
      .sort((a, b) => Math.abs(b.tolerances) - Math.abs(a.tolerances));
  }

  private async smallest(together: SwapRun): Promise<readonly string[] | null> {
    if (!moves(together)) return null;
    const indices = this.request.exchanges.map((_, i) => i);
    const set = await smallestSet(indices, async (subset) =>
      moves(await this.run(subset.reduce((bits, i) => bits | (1 << i), 0))),
    );
    return set.map((i) => printExchange(this.request.exchanges[i]!));
  }
}

/** Below this many tolerances an interaction is roundoff of the arithmetic. */
const LEAST_INTERACTION = 1e-9;

class NoValue extends Error {}

function finite(value: number | null): number {
  if (value === null || !Number.isFinite(value)) throw new NoValue();
  return value;
}

function moves(run: SwapRun): boolean {
  return run.state === 'compared' && run.deviations.some((one) => tolerancesApart(one) > 1);
}

/** The same orders at every call, so that a second call finds all its runs kept. */
function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    // Park and Miller's minimal standard generator, Communications of the ACM 31 (1988) 1192.
    state = (state * 16807) % 2147483647;
    return state / 2147483647;
  };
}
