/** Reads the blobs of a run of commits in one stream, in the order in which they are first needed, and compares as they come. */
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import type { StreamedObject } from '../sources/object-stream.ts';
import { streamObjects } from '../sources/stream-objects.edge.ts';
import { compareStep, type Reading } from './compare-step.ts';
import { contentOf } from './file-content.ts';
import { sameUnit } from './same-unit.ts';
import type { ScanAnswer, ScanStep } from './scan-step.ts';

/**
 * Every blob is read once in a piece and forgotten after its last use, so memory follows the size of the tree, not of history.
 *
 * @param give  takes each answer in the order of the steps
 */
export async function scanPiece(
  place: RepositoryPlace,
  steps: readonly ScanStep[],
  give: (answer: ScanAnswer) => void,
  signal?: AbortSignal,
): Promise<void> {
  const needs = steps.map(needsOf);
  const lastUse = new Map<string, number>();
  const order = new Map<string, { id: string; path: string }>();
  for (const [index, step] of needs.entries()) {
    for (const need of step) {
      lastUse.set(need.key, index);
      if (!order.has(need.key)) order.set(need.key, need);
    }
  }
  const wanted = [...order.keys()];
  const readings = new Map<string, Reading>();
  const objects = streamObjects(
    place,
    [...order.values()].map(({ id }) => id),
  );
  try {
    let arrived = 0;
    for (const [index, step] of steps.entries()) {
      for (const need of needs[index]!) {
        while (!readings.has(need.key) && arrived < wanted.length) {
          const { value } = await objects.next();
          const key = wanted[arrived++]!;
          const { path } = order.get(key)!;
          readings.set(key, await read(path, value ?? null));
          if (signal?.aborted === true) return;
        }
      }
      const answer = compareStep(step, (id, path) => readings.get(keyOf(id, path)) ?? { why: NOT_HERE }, sameUnit);
      for (const { key } of needs[index]!) if (lastUse.get(key) === index) readings.delete(key);
      give(answer);
    }
  } finally {
    await objects.return(undefined);
  }
}

const NOT_HERE = 'its content is not in this clone';

async function read(path: string, object: StreamedObject | null): Promise<Reading> {
  if (object === null || object.type === '') return { why: NOT_HERE };
  if (object.bytes === null) return { why: 'it is too long to be source' };
  return { content: await contentOf(path, object.bytes) };
}

function needsOf(step: ScanStep): { key: string; id: string; path: string }[] {
  return step.files.flatMap(({ path, before, after }) =>
    [...new Set([...before, after])].flatMap((id) => (id === null ? [] : [{ key: keyOf(id, path), id, path }])),
  );
}

/** The extension decides the reader, so one blob under two of them is two readings. */
function keyOf(id: string, path: string): string {
  const name = path.slice(path.lastIndexOf('/') + 1);
  return `${id}${name.slice(name.lastIndexOf('.'))}`;
}
