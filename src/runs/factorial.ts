/** What each of several exchanges does alone, with the others, and what its fair share of the whole is. Pure arithmetic over subsets. */

/** A subset of n things as the bits of a number: bit i is set when thing i is in it. */
export type Subset = number;

export function subsetsOf(count: number): Subset[] {
  return Array.from({ length: 2 ** count }, (_, subset) => subset);
}

export function membersOf(subset: Subset): number[] {
  const members: number[] = [];
  for (let i = 0; subset >> i !== 0; i++) if ((subset >> i) & 1) members.push(i);
  return members;
}

/**
 * What each subset adds beyond all its parts: for one thing its effect alone, for two their interaction, and so on.
 * The dividends of all parts of a subset sum to its value less that of nothing.
 *
 * @param value  of every subset, 2^n numbers by subset
 * @returns dividends by subset; that of the empty one is 0
 * @source J. C. Harsanyi, A simplified bargaining model for the n-person cooperative game, International Economic Review 4
 *   (1963) 194; the Möbius transform over subsets
 */
export function dividends(value: readonly number[]): number[] {
  const base = value[0] ?? 0;
  const result = value.map((one) => one - base);
  for (let bit = 1; bit < result.length; bit <<= 1) {
    for (let subset = 0; subset < result.length; subset++) {
      if (subset & bit) result[subset] = result[subset]! - result[subset ^ bit]!;
    }
  }
  return result;
}

/**
 * Shares of the whole effect: each thing's marginal effect averaged over all orders in which the things could be exchanged.
 * They sum to the value of all less that of nothing.
 *
 * @param value  of every subset, 2^n numbers by subset
 * @source L. S. Shapley, A value for n-person games, Contributions to the Theory of Games II (1953) 307
 */
export function shapleyShares(value: readonly number[]): number[] {
  const count = Math.round(Math.log2(value.length));
  // A dividend is shared equally among those who make it.
  const shares = new Array<number>(count).fill(0);
  for (const [subset, dividend] of dividends(value).entries()) {
    const members = membersOf(subset);
    for (const member of members) shares[member] = shares[member]! + dividend / members.length;
  }
  return shares;
}

export interface SampledShares {
  readonly shares: readonly number[];
  /** Standard error of each share. */
  readonly errors: readonly number[];
  /** Orders that were gone through. */
  readonly orders: number;
}

/**
 * Shapley shares from some orders instead of all, each order gone through forwards and backwards. Ends when the next order
 * could ask for more subsets than `budget` allows.
 *
 * @param value   of one subset; asked at most once a subset
 * @param random  uniform in [0, 1)
 * @source J. Castro, D. Gómez and J. Tejada, Polynomial calculation of the Shapley value based on sampling, Computers &
 *   Operations Research 36 (2009) 1726
 */
export async function sampledShares(
  count: number,
  value: (subset: Subset) => Promise<number>,
  budget: number,
  random: () => number,
): Promise<SampledShares> {
  const known = new Map<Subset, Promise<number>>();
  const ask = (subset: Subset): Promise<number> => {
    let answer = known.get(subset);
    if (answer === undefined) {
      answer = value(subset);
      known.set(subset, answer);
    }
    return answer;
  };
  const sums = new Array<number>(count).fill(0);
  const squares = new Array<number>(count).fill(0);
  let orders = 0;
  await Promise.all([ask(0), ask(2 ** count - 1)]);
  // Orders may ask for nothing new, so they are counted as well as the subsets.
  while (orders === 0 || (orders < budget && known.size + 2 * (count - 1) <= budget)) {
    const order = shuffled(count, random);
    const marginals = new Array<number>(count).fill(0);
    for (const way of [order, [...order].reverse()]) {
      let subset = 0;
      const chain = [ask(0)];
      for (const thing of way) {
        subset |= 1 << thing;
        chain.push(ask(subset));
      }
      const values = await Promise.all(chain);
      for (const [place, thing] of way.entries()) {
        marginals[thing] = marginals[thing]! + (values[place + 1]! - values[place]!) / 2;
      }
    }
    for (const [thing, marginal] of marginals.entries()) {
      sums[thing] = sums[thing]! + marginal;
      squares[thing] = squares[thing]! + marginal * marginal;
    }
    orders++;
    if (known.size >= 2 ** count) break;
  }
  return {
    shares: sums.map((sum) => sum / orders),
    errors: sums.map((sum, i) =>
      orders < 2
        ? Number.POSITIVE_INFINITY
        : Math.sqrt(Math.max(0, squares[i]! / orders - (sum / orders) ** 2) / (orders - 1)),
    ),
    orders,
  };
}

function shuffled(count: number, random: () => number): number[] {
  const order = Array.from({ length: count }, (_, i) => i);
  for (let i = count - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    [order[i], order[j]] = [order[j]!, order[i]!];
  }
  return order;
}
