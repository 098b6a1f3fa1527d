/** A set of changes that together do something comes in; a smallest set that still does it goes out. */

/**
 * Delta debugging: reduces `items` to a subset that still passes `holds` and from which no single item can be taken away.
 * A subset that cannot be tried counts as not passing.
 *
 * @param holds  true when the subset does what all of them do; asked at most once a subset. `holds(items)` is taken to be
 *   true and `holds([])` false, neither is asked.
 * @source A. Zeller and R. Hildebrandt, Simplifying and isolating failure-inducing input, IEEE Transactions on Software
 *   Engineering 28 (2002) 183, algorithm ddmin
 */
export async function smallestSet<T>(
  items: readonly T[],
  holds: (subset: readonly T[]) => Promise<boolean>,
): Promise<T[]> {
  const asked = new Map<string, Promise<boolean>>();
  const test = (indices: readonly number[]): Promise<boolean> => {
    if (indices.length === 0) return Promise.resolve(false);
    if (indices.length === items.length) return Promise.resolve(true);
    const key = indices.join();
    let answer = asked.get(key);
    if (answer === undefined) {
      answer = holds(indices.map((index) => items[index]!));
      asked.set(key, answer);
    }
    return answer;
  };
  let current = items.map((_, index) => index);
  let parts = 2;
  while (current.length >= 2) {
    const chunks = chunked(current, parts);
    const subset = await firstThat(chunks, test);
    if (subset !== null) {
      current = subset;
      parts = 2;
      continue;
    }
    const complement =
      parts === 2
        ? null
        : await firstThat(
            chunks.map((chunk) => current.filter((index) => !chunk.includes(index))),
            test,
          );
    if (complement !== null) {
      current = complement;
      parts = Math.max(parts - 1, 2);
    } else if (parts < current.length) {
      parts = Math.min(current.length, 2 * parts);
    } else {
      break;
    }
  }
  return current.map((index) => items[index]!);
}

function chunked(indices: readonly number[], parts: number): number[][] {
  const count = Math.min(parts, indices.length);
  return Array.from({ length: count }, (_, part) =>
    indices.slice(Math.floor((part * indices.length) / count), Math.floor(((part + 1) * indices.length) / count)),
  );
}

async function firstThat<T>(candidates: readonly T[], test: (one: T) => Promise<boolean>): Promise<T | null> {
  for (const candidate of candidates) if (await test(candidate)) return candidate;
  return null;
}
