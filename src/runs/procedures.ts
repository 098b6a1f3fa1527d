/** Where the procedures of a source file stand, as its reader sees them. */
import type { ProcedureSpan } from './changed-parts.ts';

/** null for a file that no reader knows. */
export async function proceduresIn(_file: string, _bytes: Uint8Array): Promise<ProcedureSpan[] | null> {
  return null;
}
