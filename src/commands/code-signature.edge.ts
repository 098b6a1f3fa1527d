/** Whether anything that an opened code rests on has changed on disk, told by size and time of change alone. */
import { type Stats, statSync } from 'node:fs';
import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { findRepository } from '../sources/find-repository.edge.ts';
import type { OpenedCode } from './open-code.ts';

/**
 * A text that stays the same until a manifest, a declared source, table or input or HEAD changes. Files are asked
 * for their state instead of being watched, since network file systems tell nobody of a change.
 */
export async function codeSignature({ place, set }: OpenedCode): Promise<string> {
  const manifests = (await namesBelow(join(place.root, place.folder))).map((name) => join(place.folder, name));
  const declared = [...set.modules.values()].flatMap(({ value }) => [
    ...value.source.files,
    ...(value.tables ?? []).map((table) => table.file),
  ]);
  const inputs = [...set.cases.values()].flatMap(({ value }) => value.inputs ?? []);
  const files = [...new Set([...manifests, ...declared, ...inputs])].map((file) => join(place.root, file));
  return [await headOf(place.root), ...files.map((file) => `${file} ${stateOf(file)}`)].join('\n');
}

async function headOf(root: string): Promise<string> {
  const repository = findRepository(root);
  if (repository === null) return '';
  const head = await readFile(join(repository.gitFolder, 'HEAD'), 'utf8').catch(() => '');
  const ref = /^ref: (.+)$/m.exec(head)?.[1];
  const loose = ref === undefined ? '' : await readFile(join(repository.commonFolder, ref), 'utf8').catch(() => '');
  const packed = stateOf(join(repository.commonFolder, 'packed-refs'));
  return [head, loose, packed].join(' ');
}

async function namesBelow(folder: string): Promise<string[]> {
  return (await readdir(folder, { recursive: true }).catch(() => [])).map(String).sort();
}

function stateOf(file: string): string {
  const state: Stats | undefined = statSync(file, { throwIfNoEntry: false });
  return state === undefined ? 'absent' : `${state.size} ${state.mtimeMs}`;
}
