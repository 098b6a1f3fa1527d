/**
 * The one spelling in which records are written: YAML 1.2 in block style that needs no knowledge of YAML to be read by eye.
 * Whoever reorders or reindents a record by hand still has YAML; the full reader then takes over. The quick reader here exists
 * because a register is verified whole, and a general YAML reader takes a hundred times as long.
 */
import type { Json } from '../model/canonical-json.ts';

export type JsonObject = { readonly [key: string]: Json | undefined };

/** The text of a record; keys in the order given, members that are undefined left out. */
export function plainYaml(value: JsonObject): string {
  return membersText(value, '');
}

function membersText(value: JsonObject, indent: string): string {
  return Object.entries(value)
    .filter((entry): entry is [string, Json] => entry[1] !== undefined)
    .map(([key, member]) => `${indent}${scalarText(key)}:${valueText(member, indent)}`)
    .join('');
}

function valueText(value: Json, indent: string): string {
  if (value === null || typeof value !== 'object') return ` ${scalarText(value)}\n`;
  if (Array.isArray(value)) {
    if (value.length === 0) return ' []\n';
    return `\n${(value as readonly Json[]).map((item) => itemText(item, `${indent}  `)).join('')}`;
  }
  const members = membersText(value as JsonObject, `${indent}  `);
  return members === '' ? ' {}\n' : `\n${members}`;
}

function itemText(item: Json, indent: string): string {
  if (item === null || typeof item !== 'object') return `${indent}- ${scalarText(item)}\n`;
  const inside = Array.isArray(item)
    ? (item as readonly Json[]).map((one) => itemText(one, `${indent}  `)).join('')
    : membersText(item as JsonObject, `${indent}  `);
  if (inside === '') return `${indent}- ${Array.isArray(item) ? '[]' : '{}'}\n`;
  return `${indent}- ${inside.slice(indent.length + 2)}`;
}

// Plain only what no reader of any YAML version takes for a number, a date, a truth value or a mark.
const PLAIN = /^[A-Za-z][A-Za-z0-9_./-]*(?: [A-Za-z0-9_./()-]+)*$/;
const WORDS = /^(?:true|false|yes|no|on|off|null|y|n|nan|inf)$/i;

function scalarText(value: null | boolean | number | string): string {
  if (typeof value === 'string') return PLAIN.test(value) && !WORDS.test(value) ? value : JSON.stringify(value);
  return JSON.stringify(value);
}

/** Reads what `plainYaml` wrote; null when the text has any other form, though it may still be YAML. */
export function readPlainYaml(text: string): JsonObject | null {
  if (!text.endsWith('\n')) return null;
  const reader = new PlainReader(text.slice(0, -1).split('\n'));
  return reader.whole();
}

class PlainReader {
  private at = 0;
  private readonly lines: readonly string[];

  constructor(lines: readonly string[]) {
    this.lines = lines;
  }

  whole(): JsonObject | null {
    try {
      const value = this.members(0);
      return this.at === this.lines.length ? value : null;
    } catch (error) {
      if (error instanceof SyntaxError) return null;
      throw error;
    }
  }

  private members(indent: number, first?: string): JsonObject {
    const object: Record<string, Json> = {};
    let line = first;
    for (;;) {
      if (line === undefined) {
        const next = this.lines[this.at];
        if (next === undefined || indentOf(next) !== indent || next.startsWith('- ', indent)) return object;
        line = next.slice(indent);
        this.at++;
      }
      const [key, rest] = splitKey(line);
      if (key === '__proto__' || Object.hasOwn(object, key)) throw new SyntaxError('a key twice');
      object[key] = rest === '' ? this.block(indent + 2) : scalar(rest.slice(1));
      line = undefined;
    }
  }

  private block(indent: number): Json {
    const next = this.lines[this.at];
    if (next === undefined || indentOf(next) !== indent) throw new SyntaxError('nothing below a key');
    return next.startsWith('- ', indent) ? this.items(indent) : this.members(indent);
  }

  private items(indent: number, first?: string): Json[] {
    const items: Json[] = [];
    let line = first;
    for (;;) {
      if (line === undefined) {
        const next = this.lines[this.at];
        if (next === undefined || indentOf(next) !== indent || !next.startsWith('- ', indent)) return items;
        line = next.slice(indent);
        this.at++;
      }
      const inside = line.slice(2);
      if (inside.startsWith('- ')) items.push(this.items(indent + 2, inside));
      else if (isMember(inside)) items.push(this.members(indent + 2, inside));
      else items.push(scalar(inside));
      line = undefined;
    }
  }
}

function indentOf(line: string): number {
  let indent = 0;
  while (line.charCodeAt(indent) === 32) indent++;
  return indent;
}

function isMember(text: string): boolean {
  if (text.startsWith('"')) return /^"(?:[^"\\]|\\.)*":(?: |$)/.test(text);
  return /^[A-Za-z][A-Za-z0-9_./ ()-]*:(?: |$)/.test(text);
}

function splitKey(line: string): [string, string] {
  if (line.startsWith('"')) {
    const match = /^("(?:[^"\\]|\\.)*"):(.*)$/s.exec(line);
    if (match === null) throw new SyntaxError('no key');
    return [JSON.parse(match[1]!) as string, match[2]!];
  }
  const colon = line.indexOf(':');
  const key = line.slice(0, colon);
  if (colon < 1 || !PLAIN.test(key) || WORDS.test(key)) throw new SyntaxError('no key');
  const rest = line.slice(colon + 1);
  if (rest !== '' && !rest.startsWith(' ')) throw new SyntaxError('no space after a key');
  return [key, rest];
}

function scalar(text: string): Json {
  if (text === '[]') return [];
  if (text === '{}') return {};
  if (PLAIN.test(text)) {
    if (text === 'true') return true;
    if (text === 'false') return false;
    if (text === 'null') return null;
    if (WORDS.test(text)) throw new SyntaxError('a word that needs quotes');
    return text;
  }
  const value = JSON.parse(text) as Json;
  if (typeof value === 'object' && value !== null) throw new SyntaxError('not a scalar');
  if (JSON.stringify(value) !== text) throw new SyntaxError('spelled otherwise');
  return value;
}
