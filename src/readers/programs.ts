/** Which sources of one checkout can be linked into one program: a repository often holds a code and the programs around it. Pure. */
import type { FileInterface } from '../model/interface.ts';

export class Programs {
  /** Folders that hold a main program. */
  private readonly folders = new Set<string>();
  private readonly homes = new Map<string, string | null>();

  constructor(files: ReadonlyMap<string, FileInterface>) {
    for (const [path, read] of files)
      if (read.procedures.some((one) => isMain(one.kind, one.name, read.language))) this.folders.add(folderOf(path));
  }

  /** The nearest folder at or above a file that holds a main program; null where none does: a library, part of any program. */
  homeOf(path: string): string | null {
    const folder = folderOf(path);
    const known = this.homes.get(folder);
    if (known !== undefined) return known;
    let home: string | null = null;
    for (let at: string | null = folder; at !== null && home === null; at = above(at))
      if (this.folders.has(at)) home = at;
    this.homes.set(folder, home);
    return home;
  }

  /** False where two files belong to main programs of folders apart: what one calls is hardly defined in the other. */
  together(one: string, other: string): boolean {
    const [a, b] = [this.homeOf(one), this.homeOf(other)];
    return a === null || b === null || a === b || isInside(a, b) || isInside(b, a);
  }
}

function isMain(kind: string, name: string, language: string): boolean {
  return kind === 'program' || ((language === 'c' || language === 'c++') && name === 'main');
}

export function folderOf(path: string): string {
  const slash = path.lastIndexOf('/');
  return slash < 0 ? '' : path.slice(0, slash);
}

function above(folder: string): string | null {
  return folder === '' ? null : folderOf(folder);
}

function isInside(folder: string, outer: string): boolean {
  return outer === '' || folder.startsWith(`${outer}/`);
}
