/** Where derived things are kept: what is thrown away costs time, never truth. */
import { homedir } from 'node:os';
import { join } from 'node:path';

/** `$XDG_CACHE_HOME/mortise`, or `~/.cache/mortise` (XDG Base Directory Specification). */
export function cacheFolder(env: Readonly<Record<string, string | undefined>> = process.env): string {
  const base = env.XDG_CACHE_HOME;
  return join(base?.startsWith('/') ? base : join(homedir(), '.cache'), 'mortise');
}
