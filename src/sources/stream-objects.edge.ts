/** Many objects in one stream of their own, in the order asked for: what a whole history is read through. */
import type { RepositoryPlace } from './find-repository.edge.ts';
import { startGit } from './git.edge.ts';
import { ObjectStream, type StreamedObject } from './object-stream.ts';

/** Longer files are generated tables or data, not source that anyone maintains. */
const LONGEST_SOURCE_BYTES = 20_000_000;

/** One answer an id; reading only goes on as fast as answers are taken. Ending early ends git. */
export async function* streamObjects(
  place: RepositoryPlace,
  ids: readonly string[],
): AsyncGenerator<StreamedObject, void> {
  if (ids.length === 0) return;
  const child = startGit(place, 'objects', ['cat-file', '--batch', '--buffer']);
  child.on('error', () => {});
  child.stdin.on('error', () => {});
  child.stderr.resume();
  child.stdin.end(`${ids.join('\n')}\n`);
  const ready: StreamedObject[] = [];
  const stream = new ObjectStream(LONGEST_SOURCE_BYTES, (object) => ready.push(object));
  try {
    for await (const chunk of child.stdout) {
      stream.push(chunk as Buffer);
      yield* ready.splice(0);
    }
  } finally {
    child.kill();
  }
}
