/**
 * A chain of commits comes in, and a way to measure one; every step at which a quantity moved goes out, with as few
 * measurements as possible. Pure: how a commit is built and run is not its concern.
 *
 * A stretch whose ends agree is left alone, one whose ends differ is halved. With k steps among n commits this measures the
 * inner nodes of a binary tree with k leaves at its ground: at most about k·log2(n/k) + k, and the two ends.
 * What moved and moved back between two measured commits can't be seen; a measurement made for one quantity is looked at
 * for all of them, so that some of it is.
 */

export interface TraceQuestion<M> {
  /** From the good end to the bad one, each the child of the one before; at least two. */
  readonly commits: readonly string[];
  readonly quantities: readonly string[];
  /** null for a commit that can't be built or run. Called at most once a commit, several calls at the same time. */
  measure(commit: string): Promise<M | null>;
  /** How far apart two measurements are, in tolerances: above the threshold the quantity moved. Not comparable is Infinity. */
  distance(a: M, b: M, quantity: string): number | Promise<number>;
  /** 1 when absent; above it where repeated runs of one commit differ by nearly as much. */
  threshold?(quantity: string): number;
}

export interface Step {
  readonly quantity: string;
  /** Last commit before the step that could be measured. */
  readonly before: string;
  /** First commit after it. */
  readonly after: string;
  /** The commits of which one made the step, in order: `after` alone unless those between can't be measured. */
  readonly suspects: readonly string[];
  /** How far the quantity moved, in tolerances. */
  readonly tolerances: number;
  /** True for one of several steps that are each below the threshold and above it together. */
  readonly creeping: boolean;
}

export interface ChainTrace<M> {
  /** In the order of commits, then of quantities. */
  readonly steps: readonly Step[];
  /** Commits that were tried and can't be measured. */
  readonly unmeasurable: readonly string[];
  /** Commits not tried because they stand between two that can't be measured. */
  readonly assumedUnmeasurable: readonly string[];
  /** How many commits were measured or tried. */
  readonly runs: number;
  readonly measured: ReadonlyMap<string, M>;
}

/** An end of the range can't be measured; the message says which. */
export class EndUnmeasurable extends Error {
  override readonly name = 'EndUnmeasurable';
  readonly commit: string;

  constructor(commit: string, which: 'good' | 'bad') {
    super(`the ${which} end ${commit} can't be built or run`);
    this.commit = commit;
  }
}

/** Creeping is followed down to this share of the threshold; below it lies what no one asked about. */
const LEAST_SHARE = 1 / 64;

/**
 * Finds every step.
 *
 * @throws {EndUnmeasurable} when an end can't be measured
 */
export async function traceChain<M>(question: TraceQuestion<M>): Promise<ChainTrace<M>> {
  const { commits, quantities } = question;
  const state: (M | null | undefined)[] = commits.map(() => undefined);
  const pending = new Map<number, Promise<M | null>>();
  const steps: (Step & { readonly at: number })[] = [];
  let runs = 0;

  const measure = (index: number): Promise<M | null> => {
    let promise = pending.get(index);
    if (promise === undefined) {
      runs++;
      promise = question.measure(commits[index]!).then((measured) => {
        state[index] = measured;
        return measured;
      });
      pending.set(index, promise);
    }
    return promise;
  };

  const last = commits.length - 1;
  const [good, bad] = await Promise.all([measure(0), measure(last)]);
  if (good === null) throw new EndUnmeasurable(commits[0]!, 'good');
  if (bad === null) throw new EndUnmeasurable(commits[last]!, 'bad');

  /** `shares`: by quantity, the share of the threshold at which it is followed here; 1 unless it creeps. */
  const split = async (low: number, high: number, shares: ReadonlyMap<string, number>): Promise<void> => {
    const [a, b] = [state[low] as M, state[high] as M];
    if (low >= high) return;
    const whole = await distances(a, b);
    const moved = quantities.filter((one) => whole.get(one)! > limit(one, shares));
    if (moved.length === 0) return;
    const middle = high - low > 1 ? await measurableBetween(low, high, state, measure) : null;
    if (middle === null) {
      for (const quantity of moved) {
        steps.push({
          quantity,
          before: commits[low]!,
          after: commits[high]!,
          suspects: commits.slice(low + 1, high + 1),
          tolerances: whole.get(quantity)!,
          creeping: shares.has(quantity),
          at: high,
        });
      }
      return;
    }
    const c = state[middle] as M;
    const [first, second] = await Promise.all([distances(a, c), distances(c, b)]);
    const lower = new Map(shares);
    for (const quantity of moved) {
      const most = Math.max(first.get(quantity)!, second.get(quantity)!);
      let share = shares.get(quantity) ?? 1;
      // Neither half moved enough by itself: the quantity creeps. Follow it down to a quarter of the greater part, so that
      // steps of about the same size are all found, without asking about what is far below them.
      if (most <= share * threshold(quantity)) share = Math.max(LEAST_SHARE, most / threshold(quantity) / 4);
      if (share < 1) lower.set(quantity, share);
    }
    await Promise.all([split(low, middle, lower), split(middle, high, lower)]);
  };
  const distances = async (a: M, b: M): Promise<Map<string, number>> =>
    new Map(
      await Promise.all(quantities.map(async (one) => [one, await question.distance(a, b, one)] as [string, number])),
    );
  const threshold = (quantity: string) => question.threshold?.(quantity) ?? 1;
  const limit = (quantity: string, shares: ReadonlyMap<string, number>) =>
    threshold(quantity) * (shares.get(quantity) ?? 1);

  await split(0, last, new Map());
  steps.sort((a, b) => a.at - b.at || quantities.indexOf(a.quantity) - quantities.indexOf(b.quantity));
  const measured = new Map<string, M>();
  for (const [index, one] of state.entries()) if (one !== undefined && one !== null) measured.set(commits[index]!, one);
  return {
    steps: steps.map(({ at, ...step }) => step),
    unmeasurable: commits.filter((_, index) => state[index] === null),
    assumedUnmeasurable: commits.filter((_, index) => state[index] === undefined && betweenFailures(state, index)),
    runs,
    measured,
  };
}

/**
 * A commit strictly between two that can be measured, as near to the middle as is had: the middle, then at distances that double
 * to either side, since commits that can't be built come in stretches. Those between two failures are not tried.
 */
async function measurableBetween<M>(
  low: number,
  high: number,
  state: readonly (M | null | undefined)[],
  measure: (index: number) => Promise<M | null>,
): Promise<number | null> {
  const middle = Math.floor((low + high) / 2);
  const candidates = [middle];
  for (let offset = 1; offset < high - low; offset *= 2) candidates.push(middle - offset, middle + offset);
  candidates.push(low + 1, high - 1);
  for (const index of candidates) {
    if (index <= low || index >= high || state[index] === null) continue;
    if (state[index] === undefined && betweenFailures(state, index, low, high)) continue;
    if ((await measure(index)) !== null) return index;
  }
  // What is left stands next to a failure on one side at least; halve towards the failure from both ends.
  for (let index = low + 1; index < high; index++) {
    if (state[index] !== undefined || betweenFailures(state, index, low, high)) continue;
    if ((await measure(index)) !== null) return index;
  }
  return null;
}

/** True when the nearest tried commits on both sides, within the stretch, can't be measured. */
function betweenFailures<M>(
  state: readonly (M | null | undefined)[],
  index: number,
  low = 0,
  high = state.length - 1,
): boolean {
  let below = index - 1;
  while (below > low && state[below] === undefined) below--;
  let above = index + 1;
  while (above < high && state[above] === undefined) above++;
  return below > low && above < high && state[below] === null && state[above] === null;
}
