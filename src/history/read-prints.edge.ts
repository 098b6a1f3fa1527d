/** Reads blobs down to the fingerprints of their procedures. */
import { readSource } from '../readers/read-source.ts';
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import { streamObjects } from '../sources/stream-objects.edge.ts';
import type { ProcedureBody } from './fingerprint.ts';
import { bodiesOf } from './procedure-bodies.ts';

export interface NamedBlob {
  readonly id: string;
  readonly path: string;
}

export interface BlobPrints {
  readonly id: string;
  readonly bodies: readonly ProcedureBody[];
}

/** Procedures of fewer tokens (a getter, an empty stub) are alike everywhere and say nothing of descent. */
const FEWEST_TOKENS = 30;

export async function readPrints(
  place: RepositoryPlace,
  blobs: readonly NamedBlob[],
  give: (prints: BlobPrints) => void,
  signal?: AbortSignal,
): Promise<void> {
  let at = 0;
  for await (const { bytes } of streamObjects(
    place,
    blobs.map(({ id }) => id),
  )) {
    const { id, path } = blobs[at++]!;
    if (signal?.aborted === true) return;
    if (bytes === null) continue;
    const bodies = [...bodiesOf(await readSource(path, bytes), bytes).values()]
      .filter((body) => body.tokens >= FEWEST_TOKENS)
      // They cross threads: plain data only.
      .map(({ name, hash, form, prints, tokens }) => ({ name, hash, form, prints, tokens }));
    give({ id, bodies });
  }
}
