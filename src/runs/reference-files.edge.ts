/** References on the disk: `references/CASE/record.yaml` in the folder of the manifests, with the output files beside it. */
import { createHash } from 'node:crypto';
import { createReadStream, existsSync, mkdirSync, readdirSync, readFileSync, rmSync, statSync } from 'node:fs';
import { copyFile, open, rename } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { type NoiseRecord, printNoise, readNoiseText } from './noise-record.ts';
import { printReference, type ReferenceRecord, readReferenceText } from './reference-record.ts';
import { writeWhole } from './store.edge.ts';
import { layTree, type TreeListing } from './tree-files.edge.ts';

const RECORD = 'record.yaml';
const NOISE = 'noise.yaml';

/** The folder of a case's reference in the work tree. */
export function referenceFolder(root: string, theCase: string, manifestFolder = 'manifests'): string {
  return join(root, manifestFolder, 'references', theCase);
}

/**
 * The folder where the reference of a case lies for the tree at hand: in the work tree itself, or, for a revision, laid out in
 * the scratch folder from git.
 */
export async function referencePlace(
  listing: TreeListing,
  manifestFolder: string,
  theCase: string,
  scratch: string,
): Promise<string> {
  if (listing.workTree) return referenceFolder(listing.root, theCase, manifestFolder);
  const prefix = `${manifestFolder === '' ? '' : `${manifestFolder}/`}references/${theCase}/`;
  const place = join(scratch, 'references', listing.commit!);
  const folder = join(place, prefix);
  if (!existsSync(folder)) {
    mkdirSync(folder, { recursive: true });
    await layTree({ ...listing, files: listing.files.filter((file) => file.path.startsWith(prefix)) }, place);
  }
  return folder;
}

/**
 * The noise that was measured around the reference in this folder; null where none was, or it was measured around another one.
 *
 * @throws {ReferenceDamaged} when there is one that can't be read
 */
export function readNoise(folder: string): NoiseRecord | null {
  const file = join(folder, NOISE);
  if (!existsSync(file)) return null;
  const noise = readNoiseText(readFileSync(file, 'utf8'), file);
  return noise.reference === recordDigest(folder) ? noise : null;
}

/** Puts it beside the reference that it was measured around. */
export function writeNoise(folder: string, noise: Omit<NoiseRecord, 'reference'>): void {
  writeWhole(join(folder, NOISE), printNoise({ ...noise, reference: recordDigest(folder) }));
}

const recordDigest = (folder: string) =>
  `sha256:${createHash('sha256')
    .update(readFileSync(join(folder, RECORD)))
    .digest('hex')}`;

export function referenceStands(folder: string): boolean {
  return existsSync(join(folder, RECORD));
}

/**
 * The record of a case's reference in the work tree; null when none was recorded.
 *
 * @throws {ReferenceDamaged} when there is one that can't be read
 */
export function readReference(root: string, theCase: string, manifestFolder = 'manifests'): ReferenceRecord | null {
  return readReferenceIn(referenceFolder(root, theCase, manifestFolder), theCase);
}

/** The same, from the folder that holds the record. */
export function readReferenceIn(folder: string, theCase: string): ReferenceRecord | null {
  const file = join(folder, RECORD);
  if (!existsSync(file)) return null;
  return readReferenceText(readFileSync(file, 'utf8'), file, theCase);
}

/** Output files of a reference that are missing or are not what the record says, each with why. Empty when all is well. */
export async function alteredOutputs(
  folder: string,
  record: ReferenceRecord,
): Promise<{ readonly file: string; readonly why: string }[]> {
  const altered: { file: string; why: string }[] = [];
  for (const [file, { digest, bytes }] of Object.entries(record.outputs)) {
    const path = join(folder, file);
    if (!existsSync(path)) altered.push({ file, why: 'is missing' });
    else if (statSync(path).size !== bytes || (await digestOf(path)) !== digest) {
      altered.push({ file, why: 'is not the file that was recorded: its digest differs' });
    }
  }
  return altered;
}

export async function digestOf(file: string): Promise<string> {
  const hash = createHash('sha256');
  for await (const chunk of createReadStream(file, { highWaterMark: 1 << 20 })) hash.update(chunk as Buffer);
  return `sha256:${hash.digest('hex')}`;
}

/**
 * Puts a reference in its place. Each file is whole or not there; the record comes last, so that after a kill in between the
 * digests of the old record tell that its files are no longer its own.
 *
 * @param result  folder of the result's files
 */
export async function writeReference(
  folder: string,
  record: Omit<ReferenceRecord, 'outputs'>,
  result: string,
  files: readonly string[],
): Promise<ReferenceRecord> {
  const outputs: Record<string, { digest: string; bytes: number }> = {};
  for (const file of files) {
    const [from, to] = [join(result, file), join(folder, file)];
    mkdirSync(dirname(to), { recursive: true });
    const temporary = `${to}.${process.pid}.new`;
    await copyFile(from, temporary);
    const handle = await open(temporary, 'r+');
    await handle.sync();
    await handle.close();
    outputs[file] = { digest: await digestOf(temporary), bytes: statSync(temporary).size };
    await rename(temporary, to);
  }
  const whole: ReferenceRecord = { ...record, outputs };
  writeWhole(join(folder, RECORD), printReference(whole));
  for (const left of readdirSync(folder, { recursive: true }).map(String)) {
    // What an earlier record held and this one does not, and what a killed recording left.
    const known = left === RECORD || files.includes(left) || statSync(join(folder, left)).isDirectory();
    if (!known) rmSync(join(folder, left), { force: true });
  }
  return whole;
}
