/** Where the procedures of a source file stand, as its reader sees them. */
import { readSource } from '../readers/read-source.ts';
import type { ProcedureSpan } from './changed-parts.ts';

/** null for a file that no reader knows or whose reader could not follow it: it can only be taken back as a whole. */
export async function proceduresIn(file: string, bytes: Uint8Array): Promise<ProcedureSpan[] | null> {
  const seen = await readSource(file, bytes);
  if (seen.language === 'table') return null;
  const spans = seen.procedures
    .filter((procedure) => procedure.prototype !== true)
    .map(({ name, parent, line, endLine }) => ({ name: parent === null ? name : `${parent}::${name}`, line, endLine }));
  return spans.length === 0 && seen.incomplete.length > 0 ? null : spans;
}
