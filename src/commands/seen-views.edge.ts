/** What the screens showed last, kept so that the next look begins with it at once. Lost or damaged, it costs a moment, never truth. */
import { createHash } from 'node:crypto';
import { mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { deserialize, serialize } from 'node:v8';
import type { AssemblyPlace } from '../manifests/manifest-files.edge.ts';
import type { Views } from '../screens/views.ts';
import { cacheFolder } from '../sources/cache-folder.edge.ts';
import { version } from './version.ts';

export type ShownViews = Omit<Views, 'register'>;

/** Enough for the first screens; the rest comes with the first reading. */
const FINDINGS_KEPT = 200;

interface Seen {
  readonly program: string;
  /** ISO 8601 in UTC. */
  readonly when: string;
  readonly views: ShownViews;
}

/** @returns null when nothing was kept, or not by this version of the program */
export function readSeen(place: AssemblyPlace, env: Readonly<Record<string, string | undefined>>): Seen | null {
  try {
    const seen = deserialize(readFileSync(fileFor(place, env))) as Seen;
    return seen.program === version() && Array.isArray(seen.views.findings) ? seen : null;
  } catch {
    return null;
  }
}

/** Where it can't be kept, the next look begins empty. */
export function keepSeen(
  place: AssemblyPlace,
  env: Readonly<Record<string, string | undefined>>,
  views: ShownViews,
): void {
  const seen: Seen = {
    program: version(),
    when: new Date().toISOString(),
    views: {
      ...views,
      findings: views.findings.slice(0, FINDINGS_KEPT),
      deviations: views.deviations.map((one) => ({ ...one, profile: null })),
      swap: null,
    },
  };
  try {
    const file = fileFor(place, env);
    mkdirSync(dirname(file), { recursive: true });
    const beside = `${file}.${process.pid}`;
    writeFileSync(beside, serialize(seen));
    renameSync(beside, file);
  } catch {
    // A full or read-only disk: the screens work without.
  }
}

function fileFor(place: AssemblyPlace, env: Readonly<Record<string, string | undefined>>): string {
  const key = createHash('sha256').update(`${place.root}\0${place.file}`).digest('hex').slice(0, 24);
  return join(cacheFolder(env), 'seen', key);
}
