/**
 * Fortran unformatted sequential files: each record between two length markers, of 4 or 8 bytes and either byte order.
 * Nothing in the file declares what a record holds: a layout does, or the type is judged from the bytes.
 * @source common practice; the markers are not in the Fortran standard. GNU Fortran manual, "File format of unformatted
 *   sequential files": records beyond 2 GiB are split, and a negative marker says that the record goes on.
 */
import type { RawArray } from '../model/manifest.ts';
import { type ByteSource, readExactly } from './byte-source.ts';
import { guessType } from './guess-type.ts';
import { type DatasetInfo, type OutputFile, OutputProblem, outputFile } from './output-file.ts';
import { declaredType } from './raw-binary.ts';
import { BYTES_OF, partType, type StoredRun, type StoredType, storedCursor } from './stored-numbers.ts';

interface Part {
  readonly offset: number;
  readonly bytes: number;
}
/** One record: more than one part when it was split. */
type FortranRecord = readonly Part[];

interface Entry {
  readonly info: DatasetInfo;
  readonly type: StoredType;
  readonly parts: readonly Part[];
  readonly littleEndian: boolean;
}

export function openFortranRecords(source: ByteSource, layout?: readonly RawArray[]): OutputFile {
  const { records, littleEndian } = readRecords(source);
  const entries =
    layout === undefined ? judged(source, records, littleEndian) : declared(source, records, littleEndian, layout);
  return outputFile({
    path: source.path,
    format: 'fortran-records',
    datasets: entries.map((one) => one.info),
    open: (info) => {
      const entry = entries.find((one) => one.info.name === info.name)!;
      const size = BYTES_OF[partType(entry.type)];
      const runs = entry.parts.map((part): StoredRun => ({ offset: part.offset, count: part.bytes / size }));
      return storedCursor(source, { type: entry.type, littleEndian: entry.littleEndian, runs });
    },
    close: () => source.close(),
  });
}

function readRecords(source: ByteSource): { records: FortranRecord[]; littleEndian: boolean } {
  let best: { at: number; why: string } = { at: -1, why: '' };
  for (const marker of [4, 8] as const) {
    for (const littleEndian of [true, false]) {
      const tried = walk(source, marker, littleEndian);
      if (Array.isArray(tried)) return { records: tried, littleEndian };
      if (tried.at > best.at) best = tried;
    }
  }
  throw new OutputProblem('truncated', source.path, best.why);
}

/** All records under one reading of the markers, or how far that reading came. */
function walk(source: ByteSource, marker: 4 | 8, littleEndian: boolean): FortranRecord[] | { at: number; why: string } {
  const records: FortranRecord[] = [];
  let parts: Part[] = [];
  const view = new DataView(new ArrayBuffer(16));
  const bytes = new Uint8Array(view.buffer);
  const length = (at: number) =>
    marker === 4 ? view.getInt32(at, littleEndian) : Number(view.getBigInt64(at, littleEndian));
  let at = 0;
  // The marker behind a record and the one before the next lie side by side: one read for both.
  let lead = source.readAt(0, bytes.subarray(0, marker)) === marker ? length(0) : 0;
  while (at < source.size) {
    const size = Math.abs(lead);
    const tail = at + marker + size;
    const ends = `ends at byte ${source.size}, inside record ${records.length + 1}, which starts at byte ${at} and holds ${size} bytes`;
    if (tail + marker > source.size) return { at, why: ends };
    const got = source.readAt(tail, bytes.subarray(0, 2 * marker));
    if (Math.abs(length(0)) !== size) {
      return { at, why: `has a record ${records.length + 1} at byte ${at} whose two length markers differ` };
    }
    parts.push({ offset: at + marker, bytes: size });
    if (lead >= 0) {
      records.push(parts);
      parts = [];
    }
    at = tail + marker;
    if (at < source.size && got < 2 * marker) return { at, why: `ends at byte ${source.size}, inside a length marker` };
    lead = at < source.size ? length(marker) : 0;
  }
  return records;
}

const bytesOf = (record: FortranRecord) => record.reduce((sum, part) => sum + part.bytes, 0);

/** Successive records of one length are one data set: `record 1`, `records 2 to 501`. */
function judged(source: ByteSource, records: readonly FortranRecord[], littleEndian: boolean): Entry[] {
  const entries: Entry[] = [];
  for (let first = 0; first < records.length; ) {
    const bytes = bytesOf(records[first]!);
    let last = first;
    while (last + 1 < records.length && bytesOf(records[last + 1]!) === bytes) last++;
    const sample = readExactly(
      source,
      records[first]![0]!.offset,
      Math.min(4096, records[first]![0]!.bytes),
      'a record',
    );
    const { type } = guessType(sample, [littleEndian]);
    const each = bytes / BYTES_OF[type];
    const count = last - first + 1;
    const name = count === 1 ? `record ${first + 1}` : `records ${first + 1} to ${last + 1}`;
    if (bytes > 0) {
      entries.push({
        info: { name, shape: count === 1 ? [each] : [count, each], type, guessed: true },
        type,
        littleEndian,
        parts: records.slice(first, last + 1).flat(),
      });
    }
    first = last + 1;
  }
  return entries;
}

/** Arrays in the order in which they were written, over record boundaries. */
function declared(
  source: ByteSource,
  records: readonly FortranRecord[],
  littleEndian: boolean,
  layout: readonly RawArray[],
): Entry[] {
  const left = records.flat().map((part) => ({ ...part }));
  return layout.map((array) => {
    const type = declaredType(source.path, array);
    let wanted = array.shape.reduce((product, extent) => product * extent, BYTES_OF[type]);
    const parts: Part[] = [];
    while (wanted > 0) {
      const next = left[0];
      if (next === undefined) {
        throw new OutputProblem(
          'truncated',
          source.path,
          `has records for ${wanted} bytes less than "${array.name}" is declared with`,
        );
      }
      const bytes = Math.min(wanted, next.bytes);
      parts.push({ offset: next.offset, bytes });
      if (bytes === next.bytes) left.shift();
      else Object.assign(next, { offset: next.offset + bytes, bytes: next.bytes - bytes });
      wanted -= bytes;
    }
    const { name, shape, unit } = array;
    return { info: { name, shape, type, ...(unit === undefined ? {} : { unit }) }, type, parts, littleEndian };
  });
}
