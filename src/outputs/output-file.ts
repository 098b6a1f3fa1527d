/** What every reader of a result file gives: named data sets, read in order and in pieces. Formats make it; compare uses it. */

export const OUTPUT_FORMATS = [
  'hdf5',
  'netcdf-classic',
  'npy',
  'npz',
  'fits',
  'columns',
  'csv',
  'json',
  'fortran-records',
  'raw',
  'log',
] as const;
export type OutputFormat = (typeof OUTPUT_FORMATS)[number];

export interface DatasetInfo {
  /** As the format spells it: `/temperature`, `x`, `profile.density`. */
  readonly name: string;
  /** null for an extent that only reading to the end can tell (rows of a text table). */
  readonly shape: readonly (number | null)[];
  /** Of one element as stored: `float64`, `float32`, `int32`, `complex128`, `decimal` (numbers written as text). */
  readonly type: string;
  /** As written in the file; absent when the file says nothing. */
  readonly unit?: string;
  /** The value that stands for no value, as the cursor gives it (`_FillValue`, `BLANK`). */
  readonly fill?: number;
  /** True when nothing in the file declares the type and it was judged from the bytes. */
  readonly guessed?: boolean;
  /** What the file says of the data set, several values as one text; what a library keeps for its own use is left out. */
  readonly attributes?: Readonly<Record<string, string | number>>;
  /** True when the format marks it as the coordinate of a dimension. */
  readonly coordinate?: boolean;
}

/** What a file says of a group of data sets; `/` is the file itself. */
export interface GroupInfo {
  readonly name: string;
  readonly attributes: Readonly<Record<string, string | number>>;
}

/** Reads one data set from its start to its end. Complex numbers come as real part, imaginary part, one pair an element. */
export interface ArrayCursor {
  /**
   * Fills `into` with the next values, converted to double precision.
   *
   * @returns how many were written; less than asked for only at the end, 0 after it
   * @throws {OutputProblem} when the file ends early or cannot be decoded
   */
  fill(into: Float64Array): number;
  /** Passes over the next values; absent where that would cost as much as reading them. */
  skip?(count: number): void;
  close(): void;
}

/** Reads several columns of one table in step. */
export interface TableCursor {
  /** Fills each of `into` (all of one length) with the next rows; returns how many rows. */
  fill(into: readonly Float64Array[]): number;
  close(): void;
}

export interface OutputFile {
  readonly path: string;
  readonly format: OutputFormat;
  datasets(): readonly DatasetInfo[];
  /** Data sets that hold no plain numbers: text, references, records. They have no cursor. */
  others(): readonly DatasetInfo[];
  /** Groups that have attributes, the file itself among them. */
  groups(): readonly GroupInfo[];
  /** The data set of that name, or one that is meant by it (`/x` for `x`, `temperature` for a column headed `temperature [K]`). */
  find(name: string): DatasetInfo | null;
  /** The error that says which data sets there are in place of this one. */
  absent(name: string): OutputProblem;
  /** @throws {OutputProblem} `no-such-dataset` */
  cursor(name: string): ArrayCursor;
  /** Several data sets of one table, decoded in one pass; null when the format keeps data sets apart. */
  table(names: readonly string[]): TableCursor | null;
  /** Pieces in storage order; each is a fresh array. */
  read(name: string): AsyncIterable<Float64Array>;
  /** The whole data set in memory. */
  readAll(name: string): Promise<Float64Array>;
  close(): void;
}

export type OutputProblemKind =
  | 'missing'
  | 'empty'
  | 'truncated'
  | 'damaged'
  | 'unsupported'
  | 'no-such-dataset'
  | 'not-numbers';

/**
 * Why a result file, or a data set in it, cannot be read; compare turns it into a deviation that is *not comparable*.
 * The message is a predicate of the file: `is empty`, `ends at byte 80`, `has no data set "T"`.
 */
export class OutputProblem extends Error {
  override readonly name = 'OutputProblem';
  readonly kind: OutputProblemKind;
  readonly path: string;

  constructor(kind: OutputProblemKind, path: string, says: string, options?: ErrorOptions) {
    super(says, options);
    this.kind = kind;
    this.path = path;
  }
}

/** What a format has to supply; the rest of OutputFile follows from it. */
export interface OutputParts {
  readonly path: string;
  readonly format: OutputFormat;
  readonly datasets: readonly DatasetInfo[];
  readonly others?: readonly DatasetInfo[];
  readonly groups?: readonly GroupInfo[];
  open(info: DatasetInfo): ArrayCursor;
  table?(infos: readonly DatasetInfo[]): TableCursor;
  close(): void;
}

const PIECE = 65_536;

export function outputFile(parts: OutputParts): OutputFile {
  const find = (name: string) => findDataset(parts.datasets, name);
  const absent = (name: string) => {
    const known = parts.datasets.map((one) => one.name);
    const list = known.length === 0 ? 'it holds none' : `it holds ${known.slice(0, 12).join(', ')}`;
    const more = known.length > 12 ? `, and ${known.length - 12} more` : '';
    return new OutputProblem('no-such-dataset', parts.path, `has no data set "${name}"; ${list}${more}`);
  };
  const must = (name: string) => {
    const info = find(name);
    if (info === null) throw absent(name);
    return info;
  };
  const cursor = (name: string) => parts.open(must(name));
  return {
    path: parts.path,
    format: parts.format,
    datasets: () => parts.datasets,
    others: () => parts.others ?? [],
    groups: () => parts.groups ?? [],
    find,
    absent,
    cursor,
    table: (names) => (parts.table === undefined ? null : parts.table(names.map(must))),
    async *read(name) {
      const from = cursor(name);
      try {
        for (;;) {
          const piece = new Float64Array(PIECE);
          const count = from.fill(piece);
          if (count > 0) yield count === PIECE ? piece : piece.slice(0, count);
          if (count < PIECE) return;
        }
      } finally {
        from.close();
      }
    },
    async readAll(name) {
      const info = must(name);
      const from = parts.open(info);
      try {
        return drain(from, elementsOf(info));
      } finally {
        from.close();
      }
    },
    close: () => parts.close(),
  };
}

/** Values of a data set (two for a complex element); null when only reading can tell. */
export function elementsOf(info: DatasetInfo): number | null {
  let elements = info.type.startsWith('complex') ? 2 : 1;
  for (const extent of info.shape) {
    if (extent === null) return null;
    elements *= extent;
  }
  return elements;
}

function drain(from: ArrayCursor, elements: number | null): Float64Array {
  let values = new Float64Array(elements ?? PIECE);
  let length = 0;
  for (;;) {
    if (length === values.length) {
      if (elements !== null) return values;
      const larger = new Float64Array(values.length * 2);
      larger.set(values);
      values = larger;
    }
    const count = from.fill(values.subarray(length));
    length += count;
    if (length < values.length) return values.slice(0, length);
  }
}

/** Exact names first, then names without a leading `/`, then letters only in another case. */
function findDataset(datasets: readonly DatasetInfo[], name: string): DatasetInfo | null {
  const bare = (text: string) => text.replace(/^\/+/, '');
  return (
    datasets.find((one) => one.name === name) ??
    datasets.find((one) => bare(one.name) === bare(name)) ??
    only(datasets.filter((one) => bare(one.name).toLowerCase() === bare(name).toLowerCase()))
  );
}

function only<T>(items: readonly T[]): T | null {
  return items.length === 1 ? items[0]! : null;
}
