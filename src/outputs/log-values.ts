/** Numbers in a log: by declared patterns (`total energy = {}`), or every `name = number` and `name: number` found. */
import type { ByteSource } from './byte-source.ts';
import { readDecimal } from './decimal.ts';
import { cursorOver } from './memory-cursor.ts';
import { type OutputFile, OutputProblem, outputFile } from './output-file.ts';

const NUMBER = String.raw`[+-]?(?:\d+\.?\d*|\.\d+)(?:[eEdDqQ][+-]?\d+|[+-]\d+)?|[+-]?(?:nan|inf(?:inity)?)\b|\*{2,}`;
const NAMED = new RegExp(
  String.raw`([A-Za-z_%][\w%().\-/]*(?: [A-Za-z_(][\w%().\-/]*){0,5})\s*[=:]\s*(${NUMBER})(?![\w.])`,
  'gi',
);
/** A log names few things many times; a file that names more than this is no log. */
const MOST_NAMES = 10_000;
const PIECE_BYTES = 1 << 20;

/** @returns null when nothing in the file reads as a named number */
export function openLog(source: ByteSource, patterns?: Readonly<Record<string, string>>): OutputFile | null {
  const found = new Map<string, number[]>();
  const read = patterns === undefined ? anyNamed(found) : byPattern(patterns, found);
  for (const line of linesOf(source)) read(line);
  if (found.size === 0 && patterns === undefined) return null;
  return outputFile({
    path: source.path,
    format: 'log',
    datasets: [...found].map(([name, values]) => ({ name, shape: [values.length], type: 'decimal' })),
    open: (info) => cursorOver(Float64Array.from(found.get(info.name)!)),
    close: () => source.close(),
  });

  function byPattern(declared: Readonly<Record<string, string>>, into: Map<string, number[]>) {
    const matchers = Object.entries(declared).map(([name, pattern]) => {
      const at = pattern.indexOf('{}');
      if (at < 0) {
        throw new OutputProblem(
          'unsupported',
          source.path,
          `is declared with a pattern "${pattern}" without {} where its number stands`,
        );
      }
      const literal = (text: string) =>
        text
          .split(/\s+/)
          .map((word) => word.replace(/[.*+?^${}()|[\]\\]/g, '\\$&'))
          .join('\\s+');
      return {
        name,
        expression: new RegExp(
          `${literal(pattern.slice(0, at).trimEnd())}\\s*(${NUMBER})${literal(pattern.slice(at + 2).trimEnd())}`,
          'i',
        ),
      };
    });
    return (line: string) => {
      for (const { name, expression } of matchers) {
        const match = expression.exec(line);
        if (match !== null) add(into, name, match[1]!);
      }
    };
  }

  function anyNamed(into: Map<string, number[]>) {
    return (line: string) => {
      for (const match of line.matchAll(NAMED)) {
        if (into.size < MOST_NAMES || into.has(match[1]!)) add(into, match[1]!, match[2]!);
      }
    };
  }
}

function add(into: Map<string, number[]>, name: string, text: string): void {
  const value = readDecimal(text);
  if (value === null) return;
  const values = into.get(name);
  if (values === undefined) into.set(name, [value]);
  else values.push(value);
}

function* linesOf(source: ByteSource): Generator<string> {
  const piece = new Uint8Array(PIECE_BYTES);
  let rest = '';
  for (let offset = 0; offset < source.size; ) {
    const count = source.readAt(offset, piece);
    if (count === 0) break;
    offset += count;
    const lines = (rest + Buffer.from(piece.subarray(0, count)).toString('latin1')).split('\n');
    rest = lines.pop()!;
    // A line longer than any log's is cut, so that a file without line ends cannot fill the memory.
    if (rest.length > PIECE_BYTES) rest = '';
    yield* lines;
  }
  if (rest !== '') yield rest;
}
