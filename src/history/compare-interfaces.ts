/** What changed between two states of source files, as changes that the bump policy knows. Pure. */
import type { Change } from '../model/change.ts';
import type { FileInterface } from '../model/interface.ts';
import { compareText } from '../model/place.ts';
import { compareClaims, compareDatasets } from './compare-claims.ts';
import { compareExpressions } from './compare-expressions.ts';
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
    ...withoutTold(compareLiterals(before, after), compareExpressions(before, after, sameUnit)),
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

/** A literal that the comparison of literals tells is not told again as a number in a statement. */
function withoutTold(literals: readonly Change[], expressions: readonly Change[]): Change[] {
  const told = new Set(literals.map(({ subject, after }) => `${subject}\0${after?.place?.line}`));
  return [
    ...literals,
    ...expressions.filter(
      ({ kind, subject, after }) =>
        (kind !== 'literal-value' && kind !== 'expression-factor') || !told.has(`${subject}\0${after?.place?.line}`),
    ),
  ];
}

/**
 * A body that changed because of a literal or claim in it is said once, by the more telling change; terms that came with a
 * new argument, or names that changed places as the arguments did, are said by the argument.
 */
function withoutExplained(changes: readonly Change[]): Change[] {
  const telling = new Set(changes.filter(({ kind }) => kind !== 'implementation').map(({ subject }) => subject));
  const passed = new Set(changes.filter(({ kind }) => /argument/.test(kind)).map(({ subject }) => subject));
  return changes.filter(
    ({ kind, subject }) =>
      (kind !== 'implementation' || !telling.has(subject)) &&
      (!/^expression-(?:changed|order)$/.test(kind) || !passed.has(subject)),
  );
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
