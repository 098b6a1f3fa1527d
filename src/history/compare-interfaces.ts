/** What changed between two states of source files, as changes that the bump policy knows. Pure. */
import type { Change } from '../model/change.ts';
import type { FileInterface } from '../model/interface.ts';
import { compareText } from '../model/place.ts';
import { compareClaims, compareDatasets } from './compare-claims.ts';
import { compareProcedures } from './compare-procedures.ts';
import { compareCommons, compareTypes, compareVariables } from './compare-storage.ts';
import { compareConstants, compareLiterals } from './compare-values.ts';
import { callable, pair, type SourceSide } from './source-side.ts';

export interface CompareOptions {
  /** Path of the file before; its place in what is said. */
  readonly beforeFile?: string;
  readonly afterFile?: string;
  readonly beforeRevision?: string;
  readonly afterRevision?: string;
  /** Whether two spellings mean the same unit; only equal text does when absent. */
  readonly sameUnit?: (a: string, b: string) => boolean;
}

/**
 * Two states of one file. Comments wrapped anew, keywords in another order, new indentation, another source form, and `1`
 * written `1._r8` are no change.
 *
 * @returns changes in an order that does not depend on the order of the parts
 */
export function compareInterfaces(before: FileInterface, after: FileInterface, options: CompareOptions = {}): Change[] {
  const side = (code: FileInterface, path: string | undefined, revision: string | undefined): SourceSide => ({
    path: path ?? '',
    code,
    ...(revision === undefined ? {} : { revision }),
  });
  return compareSides(
    [side(before, options.beforeFile, options.beforeRevision)],
    [side(after, options.afterFile ?? options.beforeFile, options.afterRevision)],
    options.sameUnit,
  );
}

/** The same over several files at once, so that what moved between them is found in its new place. */
export function compareSides(
  before: readonly SourceSide[],
  after: readonly SourceSide[],
  sameUnit: (a: string, b: string) => boolean = () => false,
): Change[] {
  const procedures = pair(before.flatMap(callable), after.flatMap(callable));
  const changes = [
    ...compareProcedures(procedures),
    ...compareCommons(before, after),
    ...compareTypes(before, after),
    ...compareVariables(before, after),
    ...compareConstants(before, after),
    ...compareLiterals(before, after),
    ...compareClaims(before, after, sameUnit),
    ...compareDatasets(before, after, sameUnit),
  ];
  return withoutExplained(changes).sort(
    (a, b) => compareText(fileOf(a), fileOf(b)) || compareText(a.subject, b.subject) || compareText(a.says, b.says),
  );
}

export function fileOf(change: Change): string {
  return change.after?.place?.file ?? change.before?.place?.file ?? '';
}

/** A body that changed because of a literal or claim in it is said once, by the more telling change. */
function withoutExplained(changes: readonly Change[]): Change[] {
  const telling = new Set(changes.filter(({ kind }) => kind !== 'implementation').map(({ subject }) => subject));
  return changes.filter(({ kind, subject }) => kind !== 'implementation' || !telling.has(subject));
}

/** Places get their commit: the state after lies in it, the state before in its parent. */
export function stamped(change: Change, commit: string): Change {
  const after =
    change.after?.place === undefined
      ? change.after
      : { ...change.after, place: { ...change.after.place, revision: commit } };
  const before =
    change.before?.place === undefined
      ? change.before
      : { ...change.before, place: { ...change.before.place, revision: `${commit}^` } };
  return {
    ...change,
    ...(before === undefined ? {} : { before }),
    ...(after === undefined ? {} : { after }),
  };
}
