/** Opens a result file of any format that Mortise reads, told by its content. */
import { existsSync, readdirSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import type { CaseOutput } from '../model/manifest.ts';
import { openBytes } from './byte-source.edge.ts';
import { type ByteSource, bytesInMemory } from './byte-source.ts';
import { openFits } from './fits.ts';
import { openFortranRecords } from './fortran-records.ts';
import { openHdf5, openHdf5Bytes } from './hdf5.edge.ts';
import { joinOutputs, naturalOrder } from './joined-output.ts';
import { openJson } from './json-values.ts';
import { openLog } from './log-values.ts';
import { openNetcdfClassic } from './netcdf-classic.ts';
import { openNpy } from './npy.ts';
import { openNpz } from './npz.ts';
import { type OutputFile, OutputProblem } from './output-file.ts';
import { openRawBinary } from './raw-binary.ts';
import { recognise } from './recognise.ts';
import { textParser } from './text-kernel.edge.ts';
import { layoutOf, openTextTable } from './text-table.ts';

/** What a manifest declares about a file that says nothing about itself. */
export type OutputHints = Pick<CaseOutput, 'patterns' | 'layout'>;

/**
 * @param path  absolute, or relative to the working folder
 * @param hints patterns make it a log; a layout describes raw binary and Fortran records
 * @returns the file, open; close it after use
 * @throws {OutputProblem} `missing`, `empty`, `truncated`, `damaged` or `unsupported`, each with what was found
 */
export async function openOutput(path: string, hints: OutputHints = {}): Promise<OutputFile> {
  const source = openBytes(path);
  try {
    return await openSource(source, hints);
  } catch (error) {
    source.close();
    throw error;
  }
}

/**
 * The same for a file of which only the bytes are there, as a blob of git.
 *
 * @param path  what messages call it
 */
export function openOutputBytes(bytes: Uint8Array, path: string, hints: OutputHints = {}): Promise<OutputFile> {
  return openSource(bytesInMemory(bytes, path), hints);
}

async function openSource(source: ByteSource, hints: OutputHints): Promise<OutputFile> {
  if (source.size === 0) throw new OutputProblem('empty', source.path, 'is empty: not a single byte was written');
  if (hints.patterns !== undefined) return openLog(source, hints.patterns)!;
  const head = new Uint8Array(Math.min(source.size, 1 << 16));
  source.readAt(0, head);
  const format = recognise(head, source.size);
  if (hints.layout !== undefined && format === 'text') return openRawBinary(source, hints.layout);
  switch (format) {
    case 'hdf5':
      if (source.inMemory !== undefined) return openHdf5Bytes(source.inMemory, source.path);
      source.close();
      return openHdf5(source.path, source.size);
    case 'netcdf-classic':
      return openNetcdfClassic(source);
    case 'npy':
      return openNpy(source);
    case 'npz':
      return openNpz(source);
    case 'fits':
      return openFits(source);
    case 'json':
      return openJson(source);
    case 'text':
      return openText(source);
    case 'fortran-records':
      // A layout that accounts for every byte leaves no room for length markers.
      if (hints.layout !== undefined && layoutFits(source, hints)) return openRawBinary(source, hints.layout);
      return openFortranRecords(source, hints.layout?.arrays);
    default:
      return openRawBinary(source, hints.layout);
  }
}

function layoutFits(source: ByteSource, hints: OutputHints): boolean {
  try {
    openRawBinary(source, hints.layout);
    return true;
  } catch (error) {
    if (error instanceof OutputProblem) return false;
    throw error;
  }
}

function openText(source: ByteSource): OutputFile {
  const layout = layoutOf(source);
  if (layout !== null) return openTextTable(source, layout, textParser);
  const log = openLog(source);
  if (log !== null) return log;
  throw new OutputProblem('unsupported', source.path, 'holds text, but neither rows of numbers nor named numbers');
}

/**
 * Opens the output that a case declares: one file, or all that match when its last part holds `*` (`fields.*.h5`), joined in
 * the order of the numbers in their names.
 *
 * @throws {OutputProblem} as openOutput does
 */
export async function openDeclared(
  folder: string,
  output: Pick<CaseOutput, 'file' | 'patterns' | 'layout'>,
): Promise<OutputFile> {
  const path = join(folder, output.file);
  if (!basename(path).includes('*')) return openOutput(path, output);
  const pattern = new RegExp(`^${basename(path).split('*').map(escaped).join('.*')}$`);
  const names = existsSync(dirname(path)) ? readdirSync(dirname(path)).filter((name) => pattern.test(name)) : [];
  const files: OutputFile[] = [];
  try {
    for (const name of names.sort(naturalOrder)) files.push(await openOutput(join(dirname(path), name), output));
    return joinOutputs(path, files);
  } catch (error) {
    for (const file of files) file.close();
    throw error;
  }
}

const escaped = (text: string) => text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
