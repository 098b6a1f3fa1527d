/** What everything told of a range depends on. */
import type { CommitRange, Ref, Repository } from '../sources/repository.edge.ts';

/** A commit never changes: the ends of the range and the tags are enough, but for the readers, whose version the cache adds. */
export function driftKeyOf(range: CommitRange, folder: string, tags: readonly Ref[]): string {
  return JSON.stringify([range, folder, tags.map(({ name, commit }) => [name, commit])]);
}

/** Answers made from a report can be kept by it. */
export async function driftKey(repository: Repository, range: CommitRange, folder: string): Promise<string> {
  return driftKeyOf(range, folder, await repository.tags());
}
