/** Who holds a folder of the store: told by process, its start and its host, so that what dead processes left can be told from what is in use. */
import { readFileSync, statSync, writeFileSync } from 'node:fs';
import { hostname } from 'node:os';
import { join } from 'node:path';

export interface Owner {
  readonly process: number;
  /** Start of the process in clock ticks since boot: process ids are used again, pairs of both are not. */
  readonly started: string;
  readonly host: string;
}

export function thisOwner(): Owner {
  return { process: process.pid, started: startOf(process.pid) ?? '', host: hostname() };
}

export function markOwned(folder: string): void {
  writeFileSync(join(folder, 'owner.json'), JSON.stringify(thisOwner()));
}

/** On another host nobody can be asked; its folders count as held for a week. */
const FOREIGN_HOLD_MILLISECONDS = 7 * 24 * 3600 * 1000;
/** A folder whose owner was not written yet is still being made. */
const NEW_FOLDER_MILLISECONDS = 10_000;

export function isHeld(folder: string): boolean {
  let owner: Owner;
  try {
    owner = JSON.parse(readFileSync(join(folder, 'owner.json'), 'utf8')) as Owner;
  } catch {
    return ageOf(folder) < NEW_FOLDER_MILLISECONDS;
  }
  if (owner.host !== hostname()) return ageOf(folder) < FOREIGN_HOLD_MILLISECONDS;
  try {
    process.kill(owner.process, 0);
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
  const started = startOf(owner.process);
  return started === null || owner.started === '' || started === owner.started;
}

function ageOf(folder: string): number {
  try {
    return Date.now() - statSync(folder).mtimeMs;
  } catch {
    return Number.POSITIVE_INFINITY;
  }
}

/** null where /proc is not to be had. */
function startOf(id: number): string | null {
  try {
    const stat = readFileSync(`/proc/${id}/stat`, 'latin1');
    return stat.slice(stat.lastIndexOf(')') + 2).split(' ')[19] ?? null;
  } catch {
    return null;
  }
}
