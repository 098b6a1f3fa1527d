/** Where something stands in a file. Comes from every reader; leaves with every finding. */

/** A position in a text: line and column both from 1, columns counted in characters. */
export interface Position {
  readonly line: number;
  readonly column: number;
}

/** A position in a named file, at a revision when the file was read from git and not from the work tree. */
export interface Place extends Position {
  /** Relative to the root of the repository, with `/` between folders. */
  readonly file: string;
  readonly revision?: string;
}

/** Orders places by file, then line, then column, then revision: the order in which findings are shown. */
export function comparePlaces(a: Place, b: Place): number {
  return (
    compareText(a.file, b.file) ||
    a.line - b.line ||
    a.column - b.column ||
    compareText(a.revision ?? '', b.revision ?? '')
  );
}

/** Code-unit order: the same on every machine and locale. */
export function compareText(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}

/** `file:line:column`, with `@revision` behind it where the place is not in the work tree. */
export function printPlace(place: Place): string {
  const at = place.revision === undefined ? '' : `@${place.revision.slice(0, 10)}`;
  return `${place.file}:${place.line}:${place.column}${at}`;
}
