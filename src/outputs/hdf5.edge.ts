/** HDF5 and NetCDF-4: data sets read lazily from disk, a slab at a time, or from bytes in memory. */
import { openSync } from 'node:fs';
import { devNull } from 'node:os';
import type { Dataset, Group, Metadata } from 'h5wasm/node';
import { type ArrayCursor, type DatasetInfo, type OutputFile, OutputProblem, outputFile } from './output-file.ts';

/** Values in one slab: large enough for the library, small against the memory. */
const SLAB = 1 << 19;
/** A layer of chunks is read whole up to this many values, so that no chunk is inflated twice. */
const LAYER = 1 << 23;

type Library = typeof import('h5wasm/node');

/** @throws {OutputProblem} `truncated` or `damaged` when the library cannot open it */
export async function openHdf5(path: string, size: number): Promise<OutputFile> {
  const library = await import('h5wasm/node');
  const module = await library.ready;
  quieten(module, (errors) => {
    if (errors.nfd === 2) errors.nfd = openSync(devNull, 'w');
  });
  return openWith(library, path, path, size, () => {});
}

let copies = 0;

/**
 * The same for bytes that lie in no file, as a blob of git does. Links to other files lead nowhere.
 *
 * @param path  what messages call it
 */
export async function openHdf5Bytes(bytes: Uint8Array, path: string): Promise<OutputFile> {
  const library: Library = await import('h5wasm');
  const module = await library.ready;
  quieten(module, (errors) => {
    errors.stream_ops = { ...errors.stream_ops, write: (_stream, _bytes, _at, length) => length };
  });
  const files = module.FS as { writeFile(name: string, bytes: Uint8Array): void; unlink(name: string): void };
  const name = `/bytes-${++copies}.h5`;
  files.writeFile(name, bytes);
  return openWith(library, name, path, bytes.length, () => files.unlink(name));
}

function openWith(library: Library, name: string, path: string, size: number, after: () => void): OutputFile {
  const found = new Map<string, Entry>();
  const others: DatasetInfo[] = [];
  const about: { name: string; attributes: Attributes }[] = [];
  let opened: InstanceType<Library['File']> | null = null;
  try {
    const file = new library.File(name, 'r');
    opened = file;
    if (file.file_id < 0n) throw new Error('the library refuses it');
    gather(file, '', { library, found, others, about, seen: new Set() });
  } catch (error) {
    // A file left open would be taken for the next one of that name.
    if (opened !== null && opened.file_id >= 0n) opened.close();
    after();
    throw new OutputProblem(
      'damaged',
      path,
      `starts as an HDF5 file but cannot be opened (${size} bytes): it was cut short, altered, or never closed by the program that wrote it`,
      { cause: error },
    );
  }
  return outputFile({
    path,
    format: 'hdf5',
    datasets: [...found.values()].map((one) => one.info),
    others,
    groups: about,
    open: (info) => slabCursor(found.get(info.name)!, path),
    close: () => {
      opened?.close();
      after();
    },
  });
}

interface Stream {
  nfd?: number;
  stream_ops?: { write(stream: unknown, bytes: unknown, at: number, length: number): number };
}
const quiet = new WeakSet<object>();

/** The library prints its own account of every failure to standard error; ours is the message that follows it. */
function quieten(module: { readonly FS: unknown }, silence: (errors: Stream) => void): void {
  if (quiet.has(module)) return;
  quiet.add(module);
  const errors = (module.FS as { readonly streams?: readonly (Stream | null)[] }).streams?.[2];
  if (errors !== null && errors !== undefined) silence(errors);
}

interface Entry {
  readonly info: DatasetInfo;
  readonly dataset: Dataset;
  readonly shape: readonly number[];
  readonly chunks: readonly number[] | null;
  readonly complex: boolean;
  readonly member: string | null;
  readonly scale: number;
  readonly zero: number;
}

interface Gathered {
  readonly library: Library;
  readonly found: Map<string, Entry>;
  readonly others: DatasetInfo[];
  readonly about: { name: string; attributes: Attributes }[];
  readonly seen: Set<string>;
}

/** Links that run in circles give any number of names; no table has more than this. */
const MOST_NAMES = 100_000;

function gather(group: Group, path: string, into: Gathered): void {
  const said = attributesOf(group);
  if (Object.keys(said).length > 0) into.about.push({ name: path === '' ? '/' : path, attributes: said });
  for (const key of group.keys()) {
    const name = `${path}/${key}`;
    // Links may run in circles; deeper than this nobody nests.
    if (into.seen.has(name) || into.seen.size > MOST_NAMES || name.split('/').length > 64) continue;
    into.seen.add(name);
    const entity = group.get(key);
    if (entity instanceof into.library.Group) {
      gather(entity, name, into);
    } else if (entity instanceof into.library.Dataset) {
      // A dimension of NetCDF-4 without a variable is kept as a data set that holds nothing.
      if (isBareDimension(entity)) continue;
      const entries = entriesOf(entity, name);
      for (const entry of entries) into.found.set(entry.info.name, entry);
      if (entries.length === 0) into.others.push(otherInfo(entity, name));
    }
  }
}

function isBareDimension(dataset: Dataset): boolean {
  const value = textAttribute(dataset, 'NAME');
  return value?.startsWith('This is a netCDF dimension but not a netCDF variable') === true;
}

function otherInfo(dataset: Dataset, name: string): DatasetInfo {
  const { metadata } = dataset;
  const type = metadata.type === 3 || metadata.vlen_type?.type === 3 ? 'text' : (CLASSES[metadata.type] ?? 'opaque');
  return { name, shape: metadata.shape ?? [], type, attributes: attributesOf(dataset) };
}

/** @source HDF5 File Format Specification, IV.A.2.d: classes of data types */
const CLASSES: Readonly<Record<number, string>> = {
  3: 'text',
  5: 'opaque',
  6: 'record',
  7: 'reference',
  8: 'enumeration',
  9: 'sequence',
  10: 'array',
};

type Attributes = Record<string, string | number>;

/** What libraries write for their own use, about dimensions. */
const BOOKKEEPING =
  /^(?:REFERENCE_LIST|DIMENSION_LIST|CLASS|NAME|DIMENSION_LABELS|_Netcdf4\w+|_NCProperties|_nc3_strict)$/;
/** An attribute longer than this is data, not a remark. */
const LONGEST_ATTRIBUTE = 2000;

function attributesOf(holder: Pick<Dataset, 'attrs'>): Attributes {
  const found: Attributes = {};
  for (const [name, attribute] of Object.entries(holder.attrs)) {
    if (BOOKKEEPING.test(name)) continue;
    const value = attributeValue(attribute);
    if (value !== null) found[name] = value;
  }
  return found;
}

/** A number, or text; several values stand side by side in text. null where the library cannot say. */
function attributeValue(attribute: { readonly value: unknown }): string | number | null {
  let value: unknown;
  try {
    value = attribute.value;
  } catch {
    return null;
  }
  if (typeof value === 'string') return value.slice(0, LONGEST_ATTRIBUTE);
  if (typeof value === 'number') return value;
  if (typeof value === 'bigint' || typeof value === 'boolean') return Number(value);
  if (ArrayBuffer.isView(value) || Array.isArray(value)) {
    const items = [...(value as unknown as Iterable<unknown>)];
    if (items.length === 1) return attributeValue({ value: items[0] });
    if (items.every((one) => /^(?:string|number|bigint|boolean)$/.test(typeof one)))
      return items.join(', ').slice(0, LONGEST_ATTRIBUTE);
  }
  return null;
}

function textAttribute(dataset: Dataset, name: string): string | null {
  const value = dataset.attrs[name]?.value;
  return typeof value === 'string' ? value : null;
}

function entriesOf(dataset: Dataset, name: string): Entry[] {
  const { metadata } = dataset;
  const shape = metadata.shape ?? [];
  const attributes = dataset.attrs;
  const numberOf = (key: string) => {
    const value = attributes[key]?.value;
    const one =
      typeof value === 'object' && value !== null && 'length' in value ? (value as ArrayLike<number>)[0] : value;
    return typeof one === 'number' || typeof one === 'bigint' ? Number(one) : undefined;
  };
  const written = attributes.units?.value ?? attributes.unit?.value;
  const unit = typeof written === 'string' && written !== '' ? { unit: written } : {};
  const [scale, zero] = [numberOf('scale_factor') ?? 1, numberOf('add_offset') ?? 0];
  const stored = numberOf('_FillValue') ?? numberOf('missing_value');
  const fill = stored === undefined ? {} : { fill: stored * scale + zero };
  const chunks = metadata.chunks === null || metadata.chunks === undefined ? null : [...metadata.chunks];
  const base = { dataset, shape, chunks, scale, zero };
  const said = attributesOf(dataset);
  const about = {
    ...(Object.keys(said).length > 0 ? { attributes: said } : {}),
    ...(textAttribute(dataset, 'CLASS') === 'DIMENSION_SCALE' ? { coordinate: true } : {}),
  };
  const members = metadata.compound_type?.members;
  if (members !== undefined) {
    if (members.length === 2 && members.every((one) => plainType(one) !== null)) {
      const [a, b] = members.map((one) => one.name.toLowerCase());
      if ((a === 'r' && b === 'i') || (a?.startsWith('re') && b?.startsWith('im'))) {
        const type = members[0]!.size === 4 ? 'complex64' : 'complex128';
        return [{ ...base, complex: true, member: null, info: { name, shape, type, ...unit, ...about } }];
      }
    }
    return members
      .filter((one) => plainType(one) !== null)
      .map((one) => ({
        ...base,
        complex: false,
        member: one.name,
        info: { name: `${name}.${one.name}`, shape, type: plainType(one)!, ...unit, ...about },
      }));
  }
  const type = plainType(metadata);
  if (type === null) return [];
  return [{ ...base, complex: false, member: null, info: { name, shape, type, ...unit, ...fill, ...about } }];
}

/** Type class 0 is an integer, 1 a floating-point number. */
function plainType(metadata: Pick<Metadata, 'type' | 'size' | 'signed' | 'vlen'>): string | null {
  if (metadata.vlen === true) return null;
  if (metadata.type === 1 && [2, 4, 8].includes(metadata.size)) return `float${metadata.size * 8}`;
  if (metadata.type === 0 && [1, 2, 4, 8].includes(metadata.size))
    return `${metadata.signed ? '' : 'u'}int${metadata.size * 8}`;
  return null;
}

function slabCursor(entry: Entry, path: string): ArrayCursor {
  const slabs = slabsOf(entry.shape, entry.chunks);
  let slab: Float64Array | null = null;
  let taken = 0;
  return {
    fill(into) {
      let filled = 0;
      while (filled < into.length) {
        if (slab === null || taken === slab.length) {
          const next = slabs.next();
          if (next.done === true) break;
          slab = readSlab(entry, next.value, path);
          taken = 0;
          continue;
        }
        const count = Math.min(into.length - filled, slab.length - taken);
        into.set(slab.subarray(taken, taken + count), filled);
        filled += count;
        taken += count;
      }
      return filled;
    },
    skip(count) {
      let left = count;
      while (left > 0) {
        if (slab === null || taken === slab.length) {
          const next = slabs.next();
          if (next.done === true) return;
          const size = next.value.reduce((product, [from, to]) => product * (to - from), entry.complex ? 2 : 1);
          if (size <= left) {
            left -= size;
            continue;
          }
          slab = readSlab(entry, next.value, path);
          taken = 0;
        }
        const step = Math.min(left, slab.length - taken);
        taken += step;
        left -= step;
      }
    },
    close() {
      slab = null;
    },
  };
}

type Slab = [number, number][];

/** Cuts an array into slabs that follow one another in storage order. */
function* slabsOf(shape: readonly number[], chunks: readonly number[] | null): Generator<Slab> {
  if (shape.includes(0)) return;
  if (shape.length === 0) {
    yield [];
    return;
  }
  // The dimension along which slabs are cut: everything within one step of it fits into a slab.
  let cut = 0;
  let inner = shape.slice(1).reduce((product, extent) => product * extent, 1);
  while (cut < shape.length - 1 && inner > SLAB) inner /= shape[++cut]!;
  const layer = chunks?.[cut] ?? 1;
  let step = Math.max(1, Math.floor(SLAB / inner));
  if (layer > step && layer * inner <= LAYER) step = layer;
  else if (step > layer) step -= step % layer;
  yield* within([], 0);

  function* within(fixed: Slab, dimension: number): Generator<Slab> {
    if (dimension < cut) {
      for (let i = 0; i < shape[dimension]!; i++) yield* within([...fixed, [i, i + 1]], dimension + 1);
      return;
    }
    const rest = shape.slice(cut + 1).map((extent): [number, number] => [0, extent]);
    for (let i = 0; i < shape[cut]!; i += step) yield [...fixed, [i, Math.min(i + step, shape[cut]!)], ...rest];
  }
}

function readSlab(entry: Entry, slab: Slab, path: string): Float64Array {
  let raw: unknown;
  try {
    raw = slab.length === 0 ? entry.dataset.value : entry.dataset.slice(slab);
  } catch (error) {
    const says = `has a data set ${entry.info.name} that cannot be read: ${(error as Error).message}`;
    throw new OutputProblem('damaged', path, says, { cause: error });
  }
  if (raw === null || raw === undefined) {
    throw new OutputProblem('damaged', path, `has a data set ${entry.info.name} that cannot be read`);
  }
  const values = toDoubles(raw, entry);
  if (entry.scale !== 1 || entry.zero !== 0) {
    for (let i = 0; i < values.length; i++) values[i] = values[i]! * entry.scale + entry.zero;
  }
  return values;
}

function toDoubles(raw: unknown, entry: Entry): Float64Array {
  if (raw instanceof Float64Array) return raw;
  if (typeof raw === 'number' || typeof raw === 'bigint') return Float64Array.of(Number(raw));
  if (raw instanceof BigInt64Array || raw instanceof BigUint64Array) return Float64Array.from(raw, Number);
  if (ArrayBuffer.isView(raw)) return new Float64Array(raw as unknown as ArrayLike<number>);
  const rows = raw as unknown[][];
  if (entry.complex) return Float64Array.from(rows.flat() as number[], Number);
  const index = entry.dataset.metadata.compound_type!.members.findIndex((one) => one.name === entry.member);
  return Float64Array.from(rows, (row) => Number(row[index]));
}
