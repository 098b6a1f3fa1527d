/**
 * NetCDF classic files: CDF-1, CDF-2 (64-bit offsets) and CDF-5 (64-bit data). Everything is big-endian.
 * @source NetCDF Classic and 64-bit Offset File Formats, OGC 10-092r3; CDF-5 format specification (PnetCDF)
 */
import type { ByteSource } from './byte-source.ts';
import { type DatasetInfo, type OutputFile, OutputProblem, outputFile } from './output-file.ts';
import { BYTES_OF, decode, type StoredType, stridedCursor } from './stored-numbers.ts';

const TYPES: readonly (StoredType | 'char' | null)[] = [
  null,
  'int8',
  'char',
  'int16',
  'int32',
  'float32',
  'float64',
  'uint8',
  'uint16',
  'uint32',
  'int64',
  'uint64',
];

/** What the library writes where a program never wrote. */
const DEFAULT_FILL: Partial<Record<StoredType, number>> = {
  int16: -32767,
  int32: -2147483647,
  float32: 9.969209968386869e36,
  float64: 9.969209968386869e36,
};

interface Variable {
  readonly info: DatasetInfo;
  readonly type: StoredType;
  readonly begin: number;
  readonly rows: number;
  readonly perRow: number;
  readonly stride: number;
  readonly scale?: number;
  readonly zero?: number;
}

export function openNetcdfClassic(source: ByteSource): OutputFile {
  const { variables, others, attributes } = readHeader(source);
  return outputFile({
    path: source.path,
    format: 'netcdf-classic',
    datasets: variables.map((one) => one.info),
    others,
    groups: attributes.size === 0 ? [] : [{ name: '/', attributes: plainAttributes(attributes) }],
    open: (info) => {
      const { begin, ...rest } = variables.find((one) => one.info.name === info.name)!;
      return stridedCursor(source, { ...rest, offset: begin, littleEndian: false });
    },
    close: () => source.close(),
  });
}

type Attributes = Map<string, string | number[]>;

interface HeaderRead {
  readonly variables: Variable[];
  readonly others: DatasetInfo[];
  readonly attributes: Attributes;
}

function readHeader(source: ByteSource): HeaderRead {
  const header = new Header(source);
  const version = header.byte(3);
  header.at = 4;
  const wide = version === 5;
  const count = () => (wide ? header.int64() : header.uint32());
  const declaredRecords = count();
  const streaming = declaredRecords === (wide ? Number(0xffffffffffffffffn) : 0xffffffff);

  const list = <T>(tag: number, item: () => T): T[] => {
    const found = header.uint32();
    const length = count();
    if (found !== tag && !(found === 0 && length === 0))
      header.damaged(`expected a list of kind ${tag}, found ${found}`);
    if (length > source.size) header.damaged(`a list of ${length} entries`);
    return Array.from({ length }, item);
  };
  const attributes = (): Attributes =>
    new Map(
      list(12, () => {
        const name = header.text(count());
        const type = TYPES[header.uint32()];
        const length = count();
        if (type === undefined || type === null) return header.damaged(`an attribute "${name}" of unknown type`);
        return [name, type === 'char' ? header.text(length) : header.numbers(type, length)] as const;
      }),
    );

  /** No file has more dimensions a variable; a damaged one may claim any number. */
  const rank = (name: string) => {
    const found = count();
    return found <= 1024 ? found : header.damaged(`"${name}" with ${found} dimensions`);
  };
  const dimensions = list(10, () => ({ name: header.text(count()), length: count() }));
  const ofTheFile = attributes();
  const declared = list(11, () => {
    const name = header.text(count());
    const dims = Array.from(
      { length: rank(name) },
      () => dimensions[count()] ?? header.damaged(`a dimension of "${name}"`),
    );
    const attrs = attributes();
    const type = TYPES[header.uint32()] ?? header.damaged(`the type of "${name}"`);
    const bytes = count();
    const begin = version === 1 ? header.uint32() : header.int64();
    return { name, dims, attrs, type, bytes, begin };
  });

  const isRecord = (one: (typeof declared)[number]) => one.dims[0]?.length === 0;
  const records = declared.filter(isRecord);
  const sizes = records.map((one) => padded(rowBytes(one.dims, one.type)));
  // One record variable alone is not padded.
  const stride = records.length === 1 ? rowBytes(records[0]!.dims, records[0]!.type) : sizes.reduce((a, b) => a + b, 0);
  const first = Math.min(...records.map((one) => one.begin));
  const rows = streaming && records.length > 0 ? Math.floor((source.size - first) / stride) : declaredRecords;

  const shapeOf = (one: (typeof declared)[number]) =>
    one.dims.map((dimension) => (dimension.length === 0 ? rows : dimension.length));
  const aboutOf = (one: (typeof declared)[number]) => ({
    ...(one.attrs.size > 0 ? { attributes: plainAttributes(one.attrs) } : {}),
    // A variable of one dimension that has its name is the coordinate along it: the NetCDF Users Guide, "Coordinate Variables".
    ...(one.dims.length === 1 && one.dims[0]!.name === one.name ? { coordinate: true } : {}),
  });
  const others = declared
    .filter((one) => one.type === 'char')
    .map((one): DatasetInfo => ({ name: one.name, shape: shapeOf(one), type: 'text', ...aboutOf(one) }));
  const variables = declared
    .filter((one) => one.type !== 'char')
    .map((one): Variable => {
      const type = one.type as StoredType;
      const perRow = rowBytes(one.dims, type) / BYTES_OF[type];
      const along = isRecord(one);
      const variable = {
        type,
        begin: one.begin,
        perRow,
        rows: along ? rows : 1,
        stride: along ? stride : perRow * BYTES_OF[type],
        ...packing(one.attrs),
      };
      const end = variable.begin + (variable.rows - 1) * variable.stride + perRow * BYTES_OF[type];
      if (variable.rows > 0 && end > source.size) {
        throw new OutputProblem(
          'truncated',
          source.path,
          `ends at byte ${source.size}; its header places "${one.name}" up to byte ${end}`,
        );
      }
      const unit = one.attrs.get('units');
      const { scale = 1, zero = 0 } = variable;
      const fill = numberIn(one.attrs, '_FillValue') ?? numberIn(one.attrs, 'missing_value') ?? DEFAULT_FILL[type];
      return {
        ...variable,
        info: {
          name: one.name,
          shape: shapeOf(one),
          type,
          ...(typeof unit === 'string' ? { unit } : {}),
          ...(fill === undefined ? {} : { fill: fill * scale + zero }),
          ...aboutOf(one),
        },
      };
    });
  return { variables, others, attributes: ofTheFile };
}

function plainAttributes(attrs: Attributes): Record<string, string | number> {
  return Object.fromEntries(
    [...attrs].map(([name, value]) => [
      name,
      typeof value === 'string' ? value : value.length === 1 ? value[0]! : value.join(', '),
    ]),
  );
}

function packing(attrs: Attributes): { scale?: number; zero?: number } {
  const scale = numberIn(attrs, 'scale_factor');
  const zero = numberIn(attrs, 'add_offset');
  return { ...(scale === undefined ? {} : { scale }), ...(zero === undefined ? {} : { zero }) };
}

function numberIn(attrs: Attributes, name: string): number | undefined {
  const value = attrs.get(name);
  return Array.isArray(value) && value.length === 1 ? value[0] : undefined;
}

/** Bytes of a variable, or of one record of it. */
function rowBytes(dims: readonly { length: number }[], type: StoredType | 'char'): number {
  const size = type === 'char' ? 1 : BYTES_OF[type];
  return dims.reduce((product, { length }) => product * (length === 0 ? 1 : length), size);
}

const padded = (bytes: number) => Math.ceil(bytes / 4) * 4;

/** Reads the header on demand: its length stands nowhere. */
class Header {
  at = 0;
  private bytes = new Uint8Array(0);
  private readonly source: ByteSource;

  constructor(source: ByteSource) {
    this.source = source;
  }

  byte(at: number): number {
    return this.take(at, 1).getUint8(0);
  }

  uint32(): number {
    this.at += 4;
    return this.take(this.at - 4, 4).getUint32(0);
  }

  int64(): number {
    this.at += 8;
    return Number(this.take(this.at - 8, 8).getBigUint64(0));
  }

  text(length: number): string {
    const view = this.take(this.at, length);
    this.at += padded(length);
    return Buffer.from(view.buffer, view.byteOffset, length).toString('utf8').replace(/\0+$/, '');
  }

  numbers(type: StoredType, length: number): number[] {
    const view = this.take(this.at, length * BYTES_OF[type]);
    this.at += padded(length * BYTES_OF[type]);
    const values = new Float64Array(length);
    decode(new Uint8Array(view.buffer, view.byteOffset, view.byteLength).slice(), type, false, values, 0, length);
    return [...values];
  }

  damaged(what: string): never {
    throw new OutputProblem(
      'damaged',
      this.source.path,
      `has a NetCDF header that cannot be read at byte ${this.at}: ${what}`,
    );
  }

  private take(at: number, length: number): DataView {
    if (at + length > this.bytes.length) {
      if (at + length > this.source.size) {
        throw new OutputProblem(
          'truncated',
          this.source.path,
          `ends at byte ${this.source.size}, inside its NetCDF header`,
        );
      }
      this.bytes = new Uint8Array(Math.min(this.source.size, Math.max(65536, 2 * (at + length))));
      this.source.readAt(0, this.bytes);
    }
    return new DataView(this.bytes.buffer, at, length);
  }
}
