/** Reads one blob down to what comparisons need, and forgets the rest. Pure but for the readers it loads. */
import type { FileInterface } from '../model/interface.ts';
import { readSource } from '../readers/read-source.ts';
import { decodeText } from '../sources/git-object.ts';
import { type ProcedureBody, procedureBody } from './fingerprint.ts';
import type { SourceSide } from './source-side.ts';
import { hashText } from './tokens.ts';

/** Bodies by their text: consecutive versions of a file share nearly all of them. */
const bodies = new Map<string, ProcedureBody>();
const MOST_BODIES = 50_000;

export async function readSide(path: string, bytes: Uint8Array): Promise<SourceSide> {
  const code = await readSource(path, bytes);
  return { path, code: comparable(code), bodies: bodiesOf(code, bytes) };
}

export function bodiesOf(code: FileInterface, bytes: Uint8Array): Map<number, ProcedureBody> {
  const found = new Map<number, ProcedureBody>();
  if (code.procedures.length === 0 || code.language === 'table') return found;
  const text = decodeText(bytes);
  const starts = lineStarts(text);
  for (const { name, line, endLine } of code.procedures) {
    const written = text.slice(starts[line - 1] ?? 0, starts[endLine] ?? text.length);
    const key = `${code.language}${code.form ?? ''}${name} ${written.length} ${hashText(written)}`;
    let body = bodies.get(key);
    if (body === undefined) {
      body = procedureBody(name, written, code.language, code.form);
      if (bodies.size >= MOST_BODIES) bodies.clear();
      bodies.set(key, body);
    }
    found.set(line, body);
  }
  return found;
}

function lineStarts(text: string): number[] {
  const starts = [0];
  for (let at = text.indexOf('\n'); at >= 0; at = text.indexOf('\n', at + 1)) starts.push(at + 1);
  return starts;
}

/** Calls, storage and files read are most of an interface and are not compared. */
function comparable(code: FileInterface): FileInterface {
  return { ...code, calls: [], storage: [], externals: [], uses: [], includes: [] };
}
