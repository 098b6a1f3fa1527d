/** Commits and their parents: the chain between two of them that a trace follows, and what a merge brought in. Pure. */

export interface CommitGraph {
  /** Commit to its parents, first parent first, for every commit between the two ends and for those that merges brought in. */
  readonly parents: ReadonlyMap<string, readonly string[]>;
}

/** Two commits of which neither comes from the other. */
export class NoPath extends Error {
  override readonly name = 'NoPath';
}

/**
 * From `good` to `bad`, both included, each the child of the one before. Follows first parents wherever they still come from
 * `good`: merges count as one step, to be looked into when they turn out to be one.
 *
 * @throws {NoPath} when `bad` does not come from `good`
 */
export function chainBetween(graph: CommitGraph, good: string, bad: string): string[] {
  const from = descendants(graph, good);
  if (!from.has(bad)) throw new NoPath(`${bad} does not come from ${good}`);
  const chain = [bad];
  for (let at = bad; at !== good; ) {
    const next: string = graph.parents.get(at)!.find((parent) => from.has(parent))!;
    chain.push(next);
    at = next;
  }
  return chain.reverse();
}

/** `good` and all commits that come from it, as far as the graph goes. */
function descendants(graph: CommitGraph, good: string): Set<string> {
  const children = new Map<string, string[]>();
  for (const [commit, parents] of graph.parents) {
    for (const parent of parents) {
      const list = children.get(parent);
      if (list === undefined) children.set(parent, [commit]);
      else list.push(commit);
    }
  }
  const found = new Set([good]);
  const open = [good];
  while (open.length > 0) {
    for (const child of children.get(open.pop()!) ?? []) {
      if (found.has(child)) continue;
      found.add(child);
      open.push(child);
    }
  }
  return found;
}

/** Reads `git rev-list --parents`: a line a commit, its id and those of its parents. */
export function readGraph(text: string): CommitGraph {
  const parents = new Map<string, readonly string[]>();
  for (const line of text.split('\n')) {
    const [commit, ...rest] = line.split(' ');
    if (commit !== undefined && commit !== '') parents.set(commit, rest);
  }
  return { parents };
}
