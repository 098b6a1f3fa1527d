/** Puts the versions of a module's procedures in two repositories side by side and finds where they parted. Pure. */
import { type PrintedProcedure, type PrintIndex, type PrintMatch, searchIndex } from './print-index.ts';

export interface ProcedureDescent {
  /** Its name here, and there. */
  readonly here: string;
  readonly there: string;
  /** The last version that both share, as it was first seen on each side. */
  readonly sharedHere: PrintedProcedure;
  readonly sharedThere: PrintedProcedure;
  /** 1 when they share every token. */
  readonly likeness: number;
  readonly exact: boolean;
  /** Later versions there that are not here, and here that are not there, oldest first. */
  readonly missingHere: readonly PrintedProcedure[];
  readonly missingThere: readonly PrintedProcedure[];
  /** Versions before the shared one, on each side. */
  readonly olderHere: number;
  readonly olderThere: number;
}

export type Direction = 'from there to here' | 'from here to there' | 'unknown';

export interface Descent {
  readonly procedures: readonly ProcedureDescent[];
  readonly direction: Direction;
  readonly evidence: readonly string[];
  /** The version at the split, on the side that the copy was taken from; on the other repository's side when unknown. */
  readonly split: PrintedProcedure;
}

/** @returns null when nothing there shares its origin with the module */
export function findDescent(here: PrintIndex, module: readonly PrintedProcedure[], there: PrintIndex): Descent | null {
  const matches = searchIndex(here, module, there);
  if (matches.length === 0) return null;
  const byName = new Map<string, PrintMatch[]>();
  for (const match of matches) byName.set(match.query.name, [...(byName.get(match.query.name) ?? []), match]);
  const procedures: ProcedureDescent[] = [];
  for (const list of byName.values()) procedures.push(descentOf(list, module, there));
  procedures.sort((a, b) => (a.here < b.here ? -1 : 1));
  return { procedures, ...directionOf(procedures) };
}

function descentOf(
  matches: readonly PrintMatch[],
  module: readonly PrintedProcedure[],
  there: PrintIndex,
): ProcedureDescent {
  // The name there that matches best stands for the procedure; another with the same idioms does not.
  const best = [...matches].sort(
    (a, b) =>
      Number(b.exact) - Number(a.exact) ||
      b.containment - a.containment ||
      sameName(b) - sameName(a) ||
      b.query.order - a.query.order,
  )[0]!;
  const versionsHere = module.filter((one) => one.name === best.query.name).sort((a, b) => a.order - b.order);
  const versionsThere = there.procedures
    .filter((one) => one.name === best.match.name && related(one, matches))
    .sort((a, b) => a.order - b.order);
  // The last shared version: the latest one that is the same on both sides, or the two most alike.
  const formsThere = new Map(versionsThere.map((one) => [one.form, one]));
  const formsHere = new Map(versionsHere.map((one) => [one.form, one]));
  const lastHere = [...versionsHere].reverse().find((one) => formsThere.has(one.form));
  // A version may come back (a revert); the first time it was seen is where it parted.
  const sharedHere = lastHere === undefined ? best.query : versionsHere.find((one) => one.form === lastHere.form)!;
  const sharedThere = lastHere === undefined ? best.match : versionsThere.find((one) => one.form === lastHere.form)!;
  return {
    here: best.query.name,
    there: best.match.name,
    sharedHere,
    sharedThere,
    likeness: lastHere === undefined ? best.containment : 1,
    exact: lastHere !== undefined,
    missingHere: versionsAfter(versionsThere, sharedThere, formsHere),
    missingThere: versionsAfter(versionsHere, sharedHere, formsThere),
    olderHere: versionsHere.filter((one) => one.order < sharedHere.order).length,
    olderThere: versionsThere.filter((one) => one.order < sharedThere.order).length,
  };
}

/** Later versions that the other side does not have, each once. */
function versionsAfter(
  versions: readonly PrintedProcedure[],
  shared: PrintedProcedure,
  other: ReadonlyMap<string, PrintedProcedure>,
): PrintedProcedure[] {
  const later = versions.filter((one) => one.order > shared.order && !other.has(one.form));
  return later.filter((one, index) => later.findIndex((same) => same.form === one.form) === index);
}

/** Versions of a procedure that share nothing with the module any more are another procedure of that name. */
function related(one: PrintedProcedure, matches: readonly PrintMatch[]): boolean {
  return matches.some(
    (match) => match.match === one || (match.match.name === one.name && match.match.path === one.path),
  );
}

/**
 * A copy is born with a version that the original grew into: versions before the shared one, on one side only, are evidence.
 * Dates alone are not, where they are equal or the histories begin with the shared version on both sides.
 */
function directionOf(procedures: readonly ProcedureDescent[]): Pick<Descent, 'direction' | 'evidence' | 'split'> {
  const grownThere = procedures.filter((one) => one.olderThere > 0 && one.olderHere === 0);
  const grownHere = procedures.filter((one) => one.olderHere > 0 && one.olderThere === 0);
  const earlierThere = procedures.filter((one) => one.sharedThere.seconds < one.sharedHere.seconds);
  const earlierHere = procedures.filter((one) => one.sharedHere.seconds < one.sharedThere.seconds);
  const evidence: string[] = [];
  if (grownThere.length > 0) evidence.push(`${names(grownThere)} had earlier versions there and none here`);
  if (grownHere.length > 0) evidence.push(`${names(grownHere)} had earlier versions here and none there`);
  if (earlierThere.length > 0)
    evidence.push(
      `${count(earlierThere)} of the shared versions ${earlierThere.length === 1 ? 'is' : 'are'} dated earlier there`,
    );
  if (earlierHere.length > 0)
    evidence.push(
      `${count(earlierHere)} of the shared versions ${earlierHere.length === 1 ? 'is' : 'are'} dated earlier here`,
    );
  const toHere = grownThere.length > 0 && grownHere.length === 0 && earlierThere.length >= earlierHere.length;
  const toThere = grownHere.length > 0 && grownThere.length === 0 && earlierHere.length >= earlierThere.length;
  const direction: Direction = toHere ? 'from there to here' : toThere ? 'from here to there' : 'unknown';
  if (direction === 'unknown') evidence.push('neither side alone shows versions that led up to the shared one');
  const side = (one: ProcedureDescent) => (toThere ? one.sharedHere : one.sharedThere);
  const split = procedures.map(side).reduce((latest, one) => (one.order > latest.order ? one : latest));
  return { direction, evidence, split };
}

function names(list: readonly ProcedureDescent[]): string {
  const shown = list.slice(0, 4).map((one) => one.here);
  return list.length > 4 ? `${shown.join(', ')} and ${list.length - 4} more` : shown.join(', ');
}

function count(list: readonly unknown[]): string {
  return String(list.length);
}

function sameName({ query, match }: PrintMatch): number {
  return query.name === match.name ? 1 : 0;
}
