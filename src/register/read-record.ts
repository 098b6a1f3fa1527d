/** Bytes of a record file to a record, or to what is wrong with them, by line. Never throws, whatever the bytes. */
import { LineCounter, parseDocument } from 'yaml';
import type { Finding } from '../model/finding.ts';
import type { RegisterKind } from '../model/finding-kind.ts';
import { type JsonObject, readPlainYaml } from './plain-yaml.ts';
import { RECORD_KINDS, type RegisterRecord, sealOf } from './record.ts';

export interface ReadRecord {
  readonly file: string;
  /** Absent when the file could not be read as a record at all. */
  readonly record?: RegisterRecord;
  readonly findings: readonly Finding[];
}

const LARGEST = 4 << 20;

export function readRecord(file: string, bytes: Uint8Array): ReadRecord {
  const fail = (kind: RegisterKind, line: number, says: string, next: string): ReadRecord => ({
    file,
    findings: [{ kind, gravity: 'stop', place: { file, line, column: 1 }, says, evidence: [], next }],
  });
  const restore = 'bring the file back from git history ("git log -- FILE" tells when it changed).';
  if (bytes.length === 0) return fail('record-unreadable', 1, 'This record is empty.', restore);
  if (bytes.length > LARGEST)
    return fail(
      'record-unreadable',
      1,
      `This record has ${bytes.length} bytes; none is larger than ${LARGEST}.`,
      restore,
    );
  let text: string;
  try {
    text = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes);
  } catch {
    return fail('record-unreadable', lineOfBadByte(bytes), 'This record is not UTF-8.', restore);
  }
  const conflict = /^(?:<{7}|={7}|>{7})(?: |$)/m.exec(text);
  if (conflict !== null) {
    return fail(
      'record-unreadable',
      lineAt(text, conflict.index),
      'This record holds the marks of a merge conflict.',
      'keep one side whole: records are never merged line by line.',
    );
  }
  const quick = readPlainYaml(text);
  const read = quick === null ? readAnyYaml(text) : { value: quick };
  if ('error' in read) return fail('record-unreadable', read.line, `This record is no YAML: ${read.error}`, restore);
  const missing = missingPart(read.value);
  if (missing !== null) return fail('record-unreadable', 1, `This record ${missing}.`, restore);
  const record = read.value as unknown as RegisterRecord;
  let expected: string;
  try {
    expected = sealOf(record);
  } catch (error) {
    return fail('record-altered', 1, `This record can not be sealed: ${(error as Error).message}.`, restore);
  }
  if (record.seal === expected) return { file, record, findings: [] };
  const altered = fail(
    'record-altered',
    lineAt(text, Math.max(0, text.search(/^seal:/m))),
    `The seal of this record is ${record.seal}, its content asks for ${expected}: it was altered after it was sealed.`,
    restore,
  );
  return { ...altered, record };
}

function readAnyYaml(text: string): { value: JsonObject } | { error: string; line: number } {
  const lines = new LineCounter();
  const document = parseDocument(text, {
    lineCounter: lines,
    prettyErrors: false,
    schema: 'core',
    merge: false,
    customTags: [],
  });
  const [error] = document.errors;
  if (error !== undefined) return { error: error.message, line: lines.linePos(error.pos[0]).line };
  try {
    // Records have no aliases, so none may expand.
    const value: unknown = document.toJS({ maxAliasCount: 0 });
    if (typeof value === 'object' && value !== null && !Array.isArray(value)) return { value: value as JsonObject };
    return { error: 'it holds no keys', line: 1 };
  } catch (cause) {
    return { error: (cause as Error).message, line: 1 };
  }
}

function missingPart(value: JsonObject): string | null {
  if (value.format !== 'mortise record 1') return 'is not of the form "mortise record 1"';
  if (!RECORD_KINDS.includes(value.kind as never))
    return `has the kind ${JSON.stringify(value.kind)}, which is none of ${RECORD_KINDS.join(', ')}`;
  for (const key of ['about', 'written', 'seal']) if (typeof value[key] !== 'string') return `has no text "${key}"`;
  if (!Array.isArray(value.follows)) return 'has no list "follows"';
  for (const key of ['by', 'content']) {
    const part = value[key];
    if (typeof part !== 'object' || part === null || Array.isArray(part)) return `has no "${key}"`;
  }
  return null;
}

function lineAt(text: string, offset: number): number {
  let line = 1;
  for (let at = text.indexOf('\n'); at >= 0 && at < offset; at = text.indexOf('\n', at + 1)) line++;
  return line;
}

function lineOfBadByte(bytes: Uint8Array): number {
  const decoder = new TextDecoder('utf-8', { fatal: true });
  let line = 1;
  let start = 0;
  for (let at = 0; at <= bytes.length; at++) {
    if (at < bytes.length && bytes[at] !== 10) continue;
    try {
      decoder.decode(bytes.subarray(start, at));
    } catch {
      return line;
    }
    start = at + 1;
    line++;
  }
  return 1;
}
