/** Paths as typed on the command line, as a tree knows them. */
import { realpathSync } from 'node:fs';
import { relative, resolve, sep } from 'node:path';

/** The path from a tree's root, with `/`; empty for the root itself; null when it leads outside. */
export function insideTree(root: string, cwd: string, word: string): string | null {
  const path = relative(realpathSync(root), resolve(realpathSync(cwd), word));
  if (path === '..' || path.startsWith(`..${sep}`) || path.startsWith(sep)) return null;
  return path.split(sep).join('/');
}
