/** JSON results: numbers and arrays of numbers under dotted paths (`run.steps.2.energy`). */
import type { ByteSource } from './byte-source.ts';
import { readExactly } from './byte-source.ts';
import { cursorOver } from './memory-cursor.ts';
import { type DatasetInfo, type OutputFile, OutputProblem, outputFile } from './output-file.ts';

/** A JSON document must fit in memory to be parsed; result files beyond this are another format's job. */
const LARGEST = 512 * 1024 * 1024;

interface Found {
  readonly info: DatasetInfo;
  readonly values: Float64Array;
}

export function openJson(source: ByteSource): OutputFile {
  if (source.size > LARGEST) {
    throw new OutputProblem(
      'unsupported',
      source.path,
      `is a JSON document of ${source.size} bytes; up to ${LARGEST} are read`,
    );
  }
  const text = Buffer.from(readExactly(source, 0, source.size, 'the document')).toString('utf8');
  const found = new Map<string, Found>();
  gather(parseJson(text.replace(/^\ufeff/, ''), source.path), '', found);
  return outputFile({
    path: source.path,
    format: 'json',
    datasets: [...found.values()].map((one) => one.info),
    open: (info) => cursorOver(found.get(info.name)!.values),
    close: () => source.close(),
  });
}

function parseJson(text: string, path: string): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    // Python's json and many codes write NaN and Infinity bare, which JSON does not have; read them as what they are.
    try {
      return JSON.parse(text.replace(/"(?:[^"\\]|\\.)*"|-?\bInfinity\b|\bNaN\b/g, bareToText));
    } catch {
      const truncated = /end of JSON|Unterminated/i.test((error as Error).message);
      throw new OutputProblem(truncated ? 'truncated' : 'damaged', path, `is not JSON: ${(error as Error).message}`, {
        cause: error,
      });
    }
  }
}

const bareToText = (token: string) => (token.startsWith('"') ? token : `"${token}"`);

function gather(value: unknown, path: string, found: Map<string, Found>): void {
  const number = numberOf(value);
  const name = path === '' ? 'value' : path;
  if (number !== null) {
    found.set(name, { info: { name, shape: [], type: 'decimal' }, values: Float64Array.of(number) });
  } else if (Array.isArray(value)) {
    const shape = shapeOf(value);
    if (shape === null) {
      for (const [index, item] of value.entries()) gather(item, join(path, String(index)), found);
    } else if (shape.every((extent) => extent > 0)) {
      const flat = value.flat(shape.length - 1).map((item) => numberOf(item)!);
      found.set(name, { info: { name, shape, type: 'decimal' }, values: Float64Array.from(flat) });
    }
  } else if (typeof value === 'object' && value !== null) {
    for (const [key, item] of Object.entries(value)) gather(item, join(path, key), found);
  }
}

const join = (path: string, key: string) => (path === '' ? key : `${path}.${key}`);

/** NaN and the infinities were turned into text above. */
function numberOf(value: unknown): number | null {
  if (typeof value === 'number') return value;
  if (value === 'NaN') return Number.NaN;
  if (value === 'Infinity') return Number.POSITIVE_INFINITY;
  return value === '-Infinity' ? Number.NEGATIVE_INFINITY : null;
}

/** The extents of a nested array of numbers; null when it is ragged or holds anything else. */
function shapeOf(value: readonly unknown[]): number[] | null {
  if (value.length > 0 && value.every((item) => numberOf(item) !== null)) return [value.length];
  if (value.length === 0 || !value.every(Array.isArray)) return null;
  const inner = (value as unknown[][]).map(shapeOf);
  const first = inner[0];
  if (first === null || first === undefined) return null;
  const same = inner.every((shape) => shape !== null && shape.join() === first.join());
  return same ? [value.length, ...first] : null;
}
