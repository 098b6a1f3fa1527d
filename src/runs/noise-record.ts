/** What repeated runs of one code lay apart, as it is kept beside a reference: the whole distribution, and how it was measured. */
import { parseDocument, stringify } from 'yaml';
import { floorOf, type NoiseFloor } from '../compare/noise-floor.ts';
import type { Norm } from '../model/deviation.ts';
import { ReferenceDamaged } from './reference-record.ts';

export interface NoiseRecord {
  /** Digest of the record of the reference that the runs are compared with. */
  readonly reference: string;
  /** ISO 8601, UTC. */
  readonly date: string;
  /** How each run was perturbed, in the order in which they were made. */
  readonly runs: readonly string[];
  /** By quantity or feature. */
  readonly floors: Readonly<Record<string, NoiseFloor>>;
  /** The mean of every quantity, one a run: the ensemble that `--ensemble` holds new runs against. */
  readonly means: Readonly<Record<string, readonly number[]>>;
}

const HEAD = `# What runs that change no physics lie apart. Written by "mortise rerun --noise"; measure it again rather than edit it.
`;
const NORMS: readonly string[] = ['pointwise', 'L1', 'L2', 'Linf'] satisfies Norm[];

export function printNoise(record: NoiseRecord): string {
  return HEAD + stringify(record, { lineWidth: 0, aliasDuplicateObjects: false });
}

/** @throws {ReferenceDamaged} saying which part is missing or wrong; the floors are worked out again from the distributions */
export function readNoiseText(text: string, file: string): NoiseRecord {
  const wrong = (what: string) =>
    new ReferenceDamaged(`${file}: ${what}; measure it again with "mortise rerun --noise"`);
  let value: Partial<NoiseRecord> | null;
  try {
    const document = parseDocument(text, { uniqueKeys: true });
    if (document.errors.length > 0) throw document.errors[0]!;
    value = document.toJS({ maxAliasCount: 0 }) as Partial<NoiseRecord> | null;
  } catch (error) {
    throw wrong((error as Error).message.split('\n')[0]!);
  }
  if (typeof value !== 'object' || value === null) throw wrong('it is no map');
  const { reference, date, runs, floors, means = {} } = value;
  if (typeof reference !== 'string' || typeof date !== 'string') throw wrong('"reference" or "date" is missing');
  if (!Array.isArray(runs) || runs.some((one) => typeof one !== 'string')) throw wrong('"runs" is no list of texts');
  if (typeof floors !== 'object' || floors === null) throw wrong('"floors" is missing');
  const read = Object.entries(floors).map(([name, floor]) => {
    const { norm, deviations, unusable } = floor ?? {};
    const isDistribution =
      Array.isArray(deviations) && deviations.every((one) => typeof one === 'number' && one >= 0 && one < Infinity);
    if (!NORMS.includes(norm) || !isDistribution || !Number.isInteger(unusable)) {
      throw wrong(`the distribution of "${name}" has no norm, no numbers or no count of unusable runs`);
    }
    return [name, floorOf(norm, deviations, unusable)] as const;
  });
  for (const [name, members] of Object.entries(means)) {
    const isRow =
      Array.isArray(members) && members.length === runs.length && members.every((one) => typeof one === 'number');
    if (!isRow) throw wrong(`the means of "${name}" are not one number a run`);
  }
  return { reference, date, runs, floors: Object.fromEntries(read), means };
}
