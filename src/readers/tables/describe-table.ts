/** An open table comes in, its interface goes out: data sets, axes, what attributes claim, constants that it was made with. */
import {
  type Claim,
  type Dataset,
  emptyInterface,
  type FileInterface,
  type Incomplete,
  type NamedConstant,
} from '../../model/interface.ts';
import type { Position } from '../../model/place.ts';
import { readDecimal } from '../../outputs/decimal.ts';
import { type DatasetInfo, type OutputFile, OutputProblem } from '../../outputs/output-file.ts';
import { textLayout } from '../../outputs/text-layout.ts';
import { claimsFromComment } from '../claims/claims-from-comment.ts';
import { claimsFromName } from '../claims/claims-from-name.ts';
import { type AxisFound, axesOfColumns, axisOf, servesAsAxis } from './axis.ts';

/** No axis has more points than this; longer lists are data. */
const LONGEST_AXIS = 1 << 20;
/** Values of all columns of a text table that are kept to look for axes. */
const MOST_KEPT = 1 << 25;
const START = { line: 1, column: 1 };

/**
 * @param file  open; the caller closes it
 * @param head  the first lines as text, for a table of columns; else null
 */
export function describeTable(file: OutputFile, head: string | null): FileInterface {
  const incomplete: Incomplete[] = [];
  const columns = file.format === 'columns' || file.format === 'csv';
  const infos = file.datasets();
  const read = columns ? readColumns(file, infos, incomplete) : readApart(file, infos, incomplete);
  const claims: Claim[] = [];
  const datasets = [...infos.map((info, index) => ({ info, ...read[index]! })), ...others(file)].map(
    ({ info, axis, shape }): Dataset => {
      const said = claimsOf(info, columns, columns && head !== null ? headingPlace(head, info) : START);
      claims.push(...said);
      const base = said.find((one) => one.what === 'log-base')?.value;
      return {
        name: info.name,
        type: info.type,
        bytes: bytesOf(info.type),
        shape,
        ...(info.unit === undefined ? {} : { unit: info.unit }),
        attributes: info.attributes ?? {},
        ...(axis === null ? {} : { axis: { ...axis, ...(base === undefined ? {} : { logBase: base }) } }),
      };
    },
  );
  const constants = constantsOf(file, infos, columns);
  if (columns && head !== null) preamble(head, datasets, claims, constants);
  if (infos.some((info) => info.guessed === true))
    incomplete.push({ line: 1, why: 'nothing in the file declares its types: they were judged from the bytes' });
  return { ...emptyInterface('table'), datasets, claims, constants, incomplete };
}

interface Read {
  readonly axis: AxisFound | null;
  readonly shape: readonly number[];
}

function others(file: OutputFile): (Read & { info: DatasetInfo })[] {
  return file.others().map((info) => ({ info, axis: null, shape: info.shape.map((extent) => extent ?? 0) }));
}

/** Rows decoded at once. */
const PIECE = 8192;

/** All columns in one pass. What stands before a damaged row was read all the same. */
function readColumns(file: OutputFile, infos: readonly DatasetInfo[], incomplete: Incomplete[]): Read[] {
  const names = infos.map((one) => one.name);
  if (names.length === 0) return [];
  const keep = Math.min(LONGEST_AXIS, Math.floor(MOST_KEPT / names.length));
  let kept = names.map(() => new Float64Array(PIECE));
  let rows = 0;
  const take = (piece: readonly Float64Array[], count: number) => {
    if (rows + count <= keep) {
      const room = kept[0]!.length;
      if (rows + count > room) kept = kept.map((values) => longer(values, Math.max(room * 2, rows + count)));
      for (const [index, values] of piece.entries()) kept[index]!.set(values.subarray(0, count), rows);
    }
    rows += count;
  };
  try {
    readRows(file, names, PIECE, take);
  } catch (error) {
    incomplete.push(problemOf(error));
    rows = 0;
    // A piece that cannot be filled is lost with its good rows: the second time they come one by one where it matters.
    readUpToDamage(file, names, take);
  }
  const axes = rows > keep ? names.map(() => null) : axesOfColumns(kept.map((values) => values.subarray(0, rows)));
  return axes.map((axis) => ({ axis, shape: [rows] }));
}

type Take = (piece: readonly Float64Array[], count: number) => void;

function readRows(file: OutputFile, names: readonly string[], size: number, take: Take, skip = 0): void {
  const table = file.table(names)!;
  const piece = names.map(() => new Float64Array(size));
  const passed = names.map(() => new Float64Array(PIECE));
  try {
    for (let at = 0; at < skip; at += PIECE) table.fill(passed);
    for (;;) {
      const count = table.fill(piece);
      if (count > 0) take(piece, count);
      if (count < size) return;
    }
  } finally {
    table.close();
  }
}

function readUpToDamage(file: OutputFile, names: readonly string[], take: Take): void {
  let whole = 0;
  try {
    readRows(file, names, PIECE, (piece, count) => {
      take(piece, count);
      whole += count;
    });
  } catch {
    try {
      readRows(file, names, 1, take, whole);
    } catch {
      // It ends where the error that was kept says.
    }
  }
}

function longer(values: Float64Array<ArrayBuffer>, length: number): Float64Array<ArrayBuffer> {
  const larger = new Float64Array(length);
  larger.set(values);
  return larger;
}

function readApart(file: OutputFile, infos: readonly DatasetInfo[], incomplete: Incomplete[]): Read[] {
  const shapes = infos.map((info) => info.shape.map((extent) => extent ?? 0));
  // A log names its numbers in the order of time: none of them is an axis.
  const candidates = infos.map((info, index) => ({
    shape: shapes[index]!,
    coordinate: info.coordinate === true,
    axis: file.format === 'log' || info.guessed === true ? null : listAxis(file, info, incomplete),
  }));
  const serves = servesAsAxis(candidates);
  return candidates.map(({ axis, shape }, index) => ({ axis: serves[index] ? axis : null, shape }));
}

function listAxis(file: OutputFile, info: DatasetInfo, incomplete: Incomplete[]): AxisFound | null {
  const [extent] = info.shape;
  if (info.shape.length !== 1 || extent == null || extent < 2 || extent > LONGEST_AXIS) return null;
  if (info.type.startsWith('complex')) return null;
  const values = valuesOf(file, info, extent, incomplete);
  return values === null ? null : axisOf(values, info.type === 'float32' || info.type === 'float16');
}

function valuesOf(file: OutputFile, info: DatasetInfo, count: number, incomplete: Incomplete[]): Float64Array | null {
  const values = new Float64Array(count);
  try {
    const cursor = file.cursor(info.name);
    try {
      return cursor.fill(values) === count ? values : null;
    } finally {
      cursor.close();
    }
  } catch (error) {
    incomplete.push(problemOf(error));
    return null;
  }
}

function problemOf(error: unknown): Incomplete {
  if (!(error instanceof OutputProblem)) throw error;
  const line = /\bline (\d+)/.exec(error.message)?.[1];
  return { line: line === undefined ? 1 : Number(line), why: `the file ${error.message}` };
}

function bytesOf(type: string): number | null {
  const bits = /^(?:u?int|float|complex)(\d+)$/.exec(type)?.[1];
  return bits === undefined ? null : Number(bits) / 8;
}

/** Where the heading of a column stands; the start of the file where it has none. */
function headingPlace(head: string, info: DatasetInfo): Position {
  for (let start = 0, line = 1; start < head.length && line < 1000; line++) {
    const end = head.indexOf('\n', start);
    const text = head.slice(start, end < 0 ? head.length : end);
    const column = text.indexOf(info.name);
    if (column >= 0 && (info.unit === undefined || text.includes(info.unit, column)))
      return { line, column: column + 1 };
    if (end < 0) break;
    start = end + 1;
  }
  return START;
}

/** `log10(K)`, `log T [K]`, `dex`: what a unit says about logarithms. */
const LOG_UNIT = /^\s*(log10|log_10|lg|log|dex|ln|log2)(?![a-z])/i;
const REMARKS =
  /^(?:long_name|standard_name|description|desc|comment|comments|remark|note|notes|title|label|info|doc)$/i;
const BASE_NAMES = /^(?:log_?base|base_of_log|logarithm_base)$/i;

function claimsOf(info: DatasetInfo, columns: boolean, at: Position): Claim[] {
  const claims: Claim[] = [];
  const { name } = info;
  const bare = name.slice(name.lastIndexOf('/') + 1);
  const say = (what: Claim['what'], value: string, text: string, from: Claim['from']) => {
    if (!claims.some((one) => one.what === what))
      claims.push({ name, parent: null, what, value, text: text.slice(0, 200), from, ...at });
  };
  const from = columns ? 'bracket' : 'attribute';
  if (info.unit !== undefined && info.unit.trim() !== '') {
    const text = columns ? `${name} [${info.unit}]` : `units = ${info.unit}`;
    say('unit', info.unit, text, from);
    const log = LOG_UNIT.exec(info.unit)?.[1]?.toLowerCase();
    if (log !== undefined) say('log-base', log === 'ln' ? 'e' : log === 'log2' ? '2' : '10', text, from);
  }
  for (const [key, value] of Object.entries(info.attributes ?? {})) {
    if (BASE_NAMES.test(key))
      say('log-base', value === 'e' || value === Math.E ? 'e' : String(value), `${key} = ${value}`, 'attribute');
    else if (typeof value === 'string' && REMARKS.test(key))
      for (const one of claimsFromComment(value, [bare], at, null, { from: 'attribute', caseSensitive: true }))
        say(one.what, one.value, `${key} = ${value}`, 'attribute');
  }
  for (const one of claimsFromName(bare, at, null)) say(one.what, one.value, name, 'name');
  return claims;
}

/** Attributes of groups, and data sets of a single number: the constants, versions and settings that a table was made with. */
function constantsOf(file: OutputFile, infos: readonly DatasetInfo[], columns: boolean): NamedConstant[] {
  const constants: NamedConstant[] = [];
  for (const group of file.groups())
    for (const [name, value] of Object.entries(group.attributes))
      constants.push({
        name,
        parent: group.name === '/' ? null : group.name,
        type: typeof value === 'number' ? 'number' : 'text',
        bytes: null,
        text: String(value).slice(0, 200),
        value: typeof value === 'string' ? value.slice(0, 200) : value,
        ...START,
      });
  if (columns || file.format === 'log') return constants;
  for (const info of infos) {
    const single = info.shape.every((extent) => extent === 1);
    if (!single || info.type.startsWith('complex') || info.guessed === true) continue;
    // What cannot be read was said when axes were looked for, or is said by whoever compares the values.
    const values = valuesOf(file, info, 1, []);
    if (values === null) continue;
    const cut = info.name.lastIndexOf('/');
    constants.push({
      name: info.name.slice(cut + 1),
      parent: cut > 0 ? info.name.slice(0, cut) : null,
      type: info.type,
      bytes: bytesOf(info.type),
      text: String(values[0]),
      value: Number.isFinite(values[0]) ? values[0]! : null,
      ...START,
    });
  }
  return constants;
}

/** Remarks above the first row: claims about columns that they name, and `name = value`. */
function preamble(head: string, datasets: readonly Dataset[], claims: Claim[], constants: NamedConstant[]): void {
  const layout = textLayout(head);
  if (layout === null) return;
  const names = datasets.map((one) => one.name);
  const lines = head.split('\n', layout.preamble);
  for (const [index, line] of lines.entries()) {
    const text = line.replace(/^[\s#!%]+/, '').trimEnd();
    const at = { line: index + 1, column: line.length - line.replace(/^[\s#!%]+/, '').length + 1 };
    const named = /^([A-Za-z_][\w.\- ]{0,60}?)\s*[=:]\s*(\S+)(?:\s+(.*))?$/.exec(text);
    const value = named === null ? null : readDecimal(named[2]!);
    if (named !== null && value !== null) {
      const constant = { name: named[1]!, parent: null, type: 'decimal', bytes: null, text: named[2]!, value, ...at };
      constants.push(constant);
      claims.push(...claimsFromComment(named[3] ?? '', [constant.name], at, null, { caseSensitive: true }));
    } else {
      const known = new Set(claims.map((one) => `${one.name}\0${one.what}`));
      for (const one of claimsFromComment(text, names, at, null, { block: true, caseSensitive: true }))
        if (!known.has(`${one.name}\0${one.what}`)) claims.push(one);
    }
  }
}
