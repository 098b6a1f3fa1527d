/** Whole answers of earlier runs, kept by everything they depend on: the range, the tags, the readers. */
import { createHash } from 'node:crypto';
import { readdirSync, readFileSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { RepositoryPlace } from '../sources/find-repository.edge.ts';
import { historyFolder, readerVersion } from './step-cache.edge.ts';
import { hashText } from './tokens.ts';

/** Answers kept for one repository; the oldest goes first. */
const MOST_KEPT = 12;

/** @returns null when there is none, or when it is damaged */
export function keptReport(place: RepositoryPlace, key: string): string | null {
  try {
    const text = readFileSync(fileFor(place, key), 'utf8');
    const end = text.indexOf('\n');
    const body = text.slice(end + 1);
    // The length first: the sum of a long report costs as much as reading it, and a cut file is the likely damage.
    const [length, sum] = text.slice(0, end).split(' ');
    return String(body.length) === length && hashText(body.slice(-10_000)).toString(36) === sum ? body : null;
  } catch {
    return null;
  }
}

/** Written beside and moved into place, so that a reader never sees half of it. */
export function keepReport(place: RepositoryPlace, key: string, body: string): void {
  try {
    const file = fileFor(place, key);
    const beside = `${file}.${process.pid}`;
    writeFileSync(beside, `${body.length} ${hashText(body.slice(-10_000)).toString(36)}\n${body}`, { mode: 0o600 });
    renameSync(beside, file);
    const folder = historyFolder(place);
    const kept = readdirSync(folder)
      .filter((name) => name.startsWith('report-'))
      .map((name) => ({ path: join(folder, name), at: statSync(join(folder, name)).mtimeMs }))
      .sort((a, b) => b.at - a.at);
    for (const { path } of kept.slice(MOST_KEPT)) rmSync(path, { force: true });
  } catch {
    // A cache that cannot be written costs time, nothing else.
  }
}

function fileFor(place: RepositoryPlace, key: string): string {
  return join(
    historyFolder(place),
    `report-${readerVersion()}-${createHash('sha256').update(key).digest('hex').slice(0, 24)}.json`,
  );
}
