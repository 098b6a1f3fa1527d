/**
 * FITS: images, binary tables and ASCII tables, a data set for each image and each numeric column.
 * @source Definition of the Flexible Image Transport System (FITS), Standard 4.0, sections 4, 5 and 7
 */
import { type ByteSource, readExactly } from './byte-source.ts';
import { readDecimal } from './decimal.ts';
import { cursorOver } from './memory-cursor.ts';
import { type ArrayCursor, type DatasetInfo, type OutputFile, OutputProblem, outputFile } from './output-file.ts';
import { BYTES_OF, partType, type StoredType, stridedCursor } from './stored-numbers.ts';

const BLOCK = 2880;
const IMAGE_TYPES: Readonly<Record<string, StoredType>> = {
  '8': 'uint8',
  '16': 'int16',
  '32': 'int32',
  '64': 'int64',
  '-32': 'float32',
  '-64': 'float64',
};
const COLUMN_TYPES: Readonly<Record<string, StoredType>> = {
  L: 'uint8',
  B: 'uint8',
  I: 'int16',
  J: 'int32',
  K: 'int64',
  E: 'float32',
  D: 'float64',
  C: 'complex64',
  M: 'complex128',
};

type Cards = Map<string, string | number | boolean>;

interface Entry {
  readonly info: DatasetInfo;
  open(): ArrayCursor;
}

export function openFits(source: ByteSource): OutputFile {
  const entries: Entry[] = [];
  let at = 0;
  for (let unit = 0; at + BLOCK <= source.size; unit++) {
    const { cards, data } = readCards(source, at, unit);
    const bytes = dataBytes(cards);
    if (data + bytes > source.size) {
      throw new OutputProblem(
        'truncated',
        source.path,
        `ends at byte ${source.size}, inside the data of header unit ${unit}, which end at byte ${data + bytes}`,
      );
    }
    entries.push(...entriesOf(source, cards, data, unit));
    at = data + Math.ceil(bytes / BLOCK) * BLOCK;
  }
  if (at === 0)
    throw new OutputProblem('truncated', source.path, `ends at byte ${source.size}, inside its first header`);
  return outputFile({
    path: source.path,
    format: 'fits',
    datasets: entries.map((one) => one.info),
    open: (info) => entries.find((one) => one.info.name === info.name)!.open(),
    close: () => source.close(),
  });
}

function readCards(source: ByteSource, start: number, unit: number): { cards: Cards; data: number } {
  const cards: Cards = new Map();
  for (let block = start; ; block += BLOCK) {
    const text = Buffer.from(readExactly(source, block, BLOCK, `header unit ${unit}`)).toString('latin1');
    for (let at = 0; at < BLOCK; at += 80) {
      const card = text.slice(at, at + 80);
      const key = card.slice(0, 8).trimEnd();
      if (key === 'END') return { cards, data: block + BLOCK };
      if (card.slice(8, 10) === '= ') cards.set(key, cardValue(card.slice(10)));
    }
  }
}

function cardValue(text: string): string | number | boolean {
  const quoted = /^\s*'((?:[^']|'')*)'/.exec(text);
  if (quoted !== null) return quoted[1]!.replaceAll("''", "'").trimEnd();
  const bare = (text.split('/')[0] ?? '').trim();
  if (bare === 'T' || bare === 'F') return bare === 'T';
  return readDecimal(bare) ?? bare;
}

const numberIn = (cards: Cards, key: string) => {
  const value = cards.get(key);
  return typeof value === 'number' ? value : undefined;
};
const textIn = (cards: Cards, key: string) => {
  const value = cards.get(key);
  return typeof value === 'string' && value !== '' ? value : undefined;
};

/** Axes and columns: never more than 999. @source FITS Standard 4.0, 4.4.1 and 7.2.1 */
function countIn(cards: Cards, key: string): number {
  const count = numberIn(cards, key) ?? 0;
  return Number.isInteger(count) && count > 0 && count <= 999 ? count : 0;
}

function axes(cards: Cards): number[] {
  return Array.from({ length: countIn(cards, 'NAXIS') }, (_, i) => numberIn(cards, `NAXIS${i + 1}`) ?? 0);
}

/** @source FITS Standard 4.0, equation 2: |BITPIX| * GCOUNT * (PCOUNT + NAXIS1 * NAXIS2 * ...) bits */
function dataBytes(cards: Cards): number {
  const extents = axes(cards);
  if (extents.length === 0) return 0;
  const elements = extents.reduce((product, extent) => product * extent, 1);
  const bits = Math.abs(numberIn(cards, 'BITPIX') ?? 8);
  return (bits / 8) * (numberIn(cards, 'GCOUNT') ?? 1) * ((numberIn(cards, 'PCOUNT') ?? 0) + elements);
}

function entriesOf(source: ByteSource, cards: Cards, data: number, unit: number): Entry[] {
  const name = textIn(cards, 'EXTNAME') ?? (unit === 0 ? 'primary' : `extension ${unit}`);
  const kind = textIn(cards, 'XTENSION');
  if (kind === 'BINTABLE') {
    // A compressed image is stored as a table of byte strings; its columns are no physical quantities.
    return cards.get('ZIMAGE') === true ? [] : binaryColumns(source, cards, data, name);
  }
  if (kind === 'TABLE') return asciiColumns(source, cards, data, name);
  if (kind !== undefined && kind !== 'IMAGE') return [];
  return image(source, cards, data, name);
}

function image(source: ByteSource, cards: Cards, data: number, name: string): Entry[] {
  // NAXIS1 runs fastest; shapes here have the fastest extent last.
  const shape = axes(cards).reverse();
  const type = IMAGE_TYPES[String(numberIn(cards, 'BITPIX'))];
  if (shape.length === 0 || shape.includes(0) || type === undefined) return [];
  const scaling = scaled(numberIn(cards, 'BSCALE'), numberIn(cards, 'BZERO'), numberIn(cards, 'BLANK'));
  const count = shape.reduce((product, extent) => product * extent, 1);
  const layout = { type, littleEndian: false, offset: data, rows: 1, perRow: count, stride: count * BYTES_OF[type] };
  const unit = textIn(cards, 'BUNIT');
  return [
    {
      info: { name, shape, type, ...(unit === undefined ? {} : { unit }), ...scaling.fill },
      open: () => stridedCursor(source, { ...layout, ...scaling.packing }),
    },
  ];
}

function scaled(scale = 1, zero = 0, blank?: number) {
  return {
    packing: scale === 1 && zero === 0 ? {} : { scale, zero },
    fill: blank === undefined ? {} : { fill: blank * scale + zero },
  };
}

function binaryColumns(source: ByteSource, cards: Cards, data: number, table: string): Entry[] {
  const [stride = 0, rows = 0] = axes(cards);
  const entries: Entry[] = [];
  let offset = data;
  for (let column = 1; column <= countIn(cards, 'TFIELDS'); column++) {
    const form = /^(\d*)([LXBIJKAEDCMPQ])/.exec(textIn(cards, `TFORM${column}`) ?? '');
    if (form === null) {
      throw new OutputProblem(
        'damaged',
        source.path,
        `has a table "${table}" whose column ${column} has no TFORM that can be read`,
      );
    }
    const repeat = form[1] === '' ? 1 : Number(form[1]);
    const code = form[2]!;
    const bytes =
      code === 'X' ? Math.ceil(repeat / 8) : repeat * ({ A: 1, P: 8, Q: 16 }[code] ?? BYTES_OF[COLUMN_TYPES[code]!]);
    const type = COLUMN_TYPES[code];
    if (type !== undefined && repeat > 0) {
      const perRow = (repeat * BYTES_OF[type]) / BYTES_OF[partType(type)];
      const layout = { type, littleEndian: false, offset, rows, perRow, stride };
      const scaling = scaled(
        numberIn(cards, `TSCAL${column}`),
        numberIn(cards, `TZERO${column}`),
        numberIn(cards, `TNULL${column}`),
      );
      const unit = textIn(cards, `TUNIT${column}`);
      entries.push({
        info: {
          name: `${table}.${textIn(cards, `TTYPE${column}`) ?? `column ${column}`}`,
          shape: repeat === 1 ? [rows] : [rows, repeat],
          type,
          ...(unit === undefined ? {} : { unit }),
          ...scaling.fill,
        },
        open: () => stridedCursor(source, { ...layout, ...scaling.packing }),
      });
    }
    offset += bytes;
  }
  return entries;
}

function asciiColumns(source: ByteSource, cards: Cards, data: number, table: string): Entry[] {
  const [stride = 0, rows = 0] = axes(cards);
  const entries: Entry[] = [];
  for (let column = 1; column <= countIn(cards, 'TFIELDS'); column++) {
    const form = /^([IFED])(\d+)(?:\.(\d+))?/.exec(textIn(cards, `TFORM${column}`) ?? '');
    const begin = numberIn(cards, `TBCOL${column}`);
    if (form === null || begin === undefined) continue;
    const width = Number(form[2]);
    const unit = textIn(cards, `TUNIT${column}`);
    const scaling = scaled(numberIn(cards, `TSCAL${column}`), numberIn(cards, `TZERO${column}`)).packing;
    entries.push({
      info: {
        name: `${table}.${textIn(cards, `TTYPE${column}`) ?? `column ${column}`}`,
        shape: [rows],
        type: 'decimal',
        ...(unit === undefined ? {} : { unit }),
      },
      // ASCII tables are small: a row is at most a few hundred characters and the form is rare.
      open: () => {
        const values = new Float64Array(rows);
        for (let row = 0; row < rows; row++) {
          const at = data + row * stride + begin - 1;
          const text = Buffer.from(readExactly(source, at, width, `table "${table}"`))
            .toString('latin1')
            .trim();
          values[row] = (readDecimal(text) ?? Number.NaN) * (scaling.scale ?? 1) + (scaling.zero ?? 0);
        }
        return cursorOver(values);
      },
    });
  }
  return entries;
}
