/** The record beside the files of a reference: what produced them. Written as YAML for people, read back with every part checked. */
import { parseDocument, stringify } from 'yaml';
import type { Domain } from '../model/manifest.ts';
import type { Produced } from './case-outcome.ts';

export interface ReferenceRecord extends Produced {
  readonly case: string;
  /** ISO 8601, UTC. */
  readonly date: string;
  readonly who: string;
  /** Why this result may be trusted, in the words of who recorded it. */
  readonly reason: string;
  readonly outputs: Readonly<Record<string, { readonly digest: string; readonly bytes: number }>>;
  readonly footprint: Domain;
  readonly seconds: number;
}

/** A record that is there but is none: edited by hand, cut short, of another case. */
export class ReferenceDamaged extends Error {
  override readonly name = 'ReferenceDamaged';
}

const HEAD = `# What produced this reference. Written by "mortise rerun --record"; renew it that way rather than by hand.
`;

export function printReference(record: ReferenceRecord): string {
  return HEAD + stringify(record, { lineWidth: 0, aliasDuplicateObjects: false });
}

/**
 * @param file  its path, for messages
 * @throws {ReferenceDamaged} saying which part is missing or wrong
 */
export function readReferenceText(text: string, file: string, theCase: string): ReferenceRecord {
  const document = parseDocument(text, { uniqueKeys: true });
  const wrong = (what: string) =>
    new ReferenceDamaged(
      `${file}: ${what}; record the reference again with "mortise rerun ${theCase} --record --reason TEXT"`,
    );
  if (document.errors.length > 0) throw wrong(document.errors[0]!.message.split('\n')[0]!);
  let value: Record<string, unknown>;
  try {
    value = document.toJS({ maxAliasCount: 0 }) as Record<string, unknown>;
  } catch (error) {
    throw wrong((error as Error).message);
  }
  if (!isMap(value)) throw wrong('the record is no map');
  for (const key of ['case', 'date', 'who', 'reason'] as const) {
    if (typeof value[key] !== 'string') throw wrong(`"${key}" is missing or no text`);
  }
  if (value.case !== theCase) throw wrong(`the record is of the case "${String(value.case)}"`);
  if (value.revision !== null && typeof value.revision !== 'string') throw wrong('"revision" is missing');
  for (const key of ['modules', 'select', 'inputs', 'environment', 'outputs', 'footprint'] as const) {
    if (!isMap(value[key])) throw wrong(`"${key}" is missing or no map`);
  }
  for (const key of ['changed', 'command'] as const) {
    if (!Array.isArray(value[key]) || value[key].some((one) => typeof one !== 'string')) {
      throw wrong(`"${key}" is missing or no list of texts`);
    }
  }
  for (const [output, one] of Object.entries(value.outputs as Record<string, unknown>)) {
    if (!isMap(one) || !/^sha256:[0-9a-f]{64}$/.test(String(one.digest)))
      throw wrong(`the digest of ${output} is missing`);
  }
  for (const [component, one] of Object.entries(value.modules as Record<string, unknown>)) {
    if (!isMap(one) || typeof one.module !== 'string' || typeof one.version !== 'string' || !isMap(one.files)) {
      throw wrong(`what filled ${component} is not told`);
    }
  }
  return value as unknown as ReferenceRecord;
}

function isMap(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
