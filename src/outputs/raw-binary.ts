/** Numbers one after another with nothing around them: laid out as a manifest declares, or one array judged from its bytes. */
import type { RawArray, RawLayout } from '../model/manifest.ts';
import { type ByteSource, readExactly } from './byte-source.ts';
import { guessType } from './guess-type.ts';
import { type OutputFile, OutputProblem, outputFile } from './output-file.ts';
import { BYTES_OF, partType, type StoredType, storedCursor } from './stored-numbers.ts';

/** @throws {OutputProblem} `truncated` when the file is shorter than the layout, `damaged` when it is longer */
export function openRawBinary(source: ByteSource, layout?: RawLayout): OutputFile {
  const { arrays, skip, littleEndian, guessed } = layout === undefined ? judged(source) : declared(layout);
  let offset = skip;
  const entries = arrays.map((array) => {
    const type = declaredType(source.path, array);
    const elements = array.shape.reduce((product, extent) => product * extent, 1);
    const entry = { array, type, offset, count: (elements * BYTES_OF[type]) / BYTES_OF[partType(type)] };
    offset += elements * BYTES_OF[type];
    return entry;
  });
  if (offset > source.size) {
    throw new OutputProblem('truncated', source.path, `has ${source.size} bytes; its declared layout needs ${offset}`);
  }
  if (offset < source.size) {
    throw new OutputProblem('damaged', source.path, `has ${source.size} bytes; its declared layout ends at ${offset}`);
  }
  return outputFile({
    path: source.path,
    format: 'raw',
    datasets: entries.map(({ array, type }) => ({
      name: array.name,
      shape: array.shape,
      type,
      ...(array.unit === undefined ? {} : { unit: array.unit }),
      ...(guessed ? { guessed } : {}),
    })),
    open: (info) => {
      const { type, offset: start, count } = entries.find((one) => one.array.name === info.name)!;
      return storedCursor(source, { type, littleEndian, runs: [{ offset: start, count }] });
    },
    close: () => source.close(),
  });
}

export function declaredType(path: string, array: RawArray): StoredType {
  if (array.type in BYTES_OF) return array.type as StoredType;
  const known = Object.keys(BYTES_OF).join(', ');
  throw new OutputProblem(
    'unsupported',
    path,
    `is declared with an array "${array.name}" of type "${array.type}"; known are ${known}`,
  );
}

function declared(layout: RawLayout) {
  return {
    arrays: layout.arrays,
    skip: layout.skip ?? 0,
    littleEndian: layout['byte-order'] !== 'big',
    guessed: false,
  };
}

function judged(source: ByteSource) {
  const sample = readExactly(
    source,
    0,
    Math.min(source.size - (source.size % 8 || 0), 1 << 16) || source.size,
    'the file',
  );
  const { type, littleEndian } =
    source.size % 4 === 0 ? guessType(sample) : { type: 'uint8' as const, littleEndian: true };
  const fits = source.size % BYTES_OF[type] === 0 ? type : 'float32';
  const array: RawArray = { name: 'values', type: fits, shape: [source.size / BYTES_OF[fits]] };
  return { arrays: [array], skip: 0, littleEndian, guessed: true };
}
