/** The whole program in this process, as a function of its words: what it prints and its exit status. */
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { dispatch } from '../../src/commands/run-command-line.ts';

// Tests never touch the caches of whoever runs them.
process.env.XDG_CACHE_HOME ??= mkdtempSync(join(tmpdir(), 'mortise-cache-'));

export interface Ran {
  readonly status: number;
  readonly out: string;
  readonly err: string;
}

export interface Setting {
  readonly cwd: string;
  readonly env?: Readonly<Record<string, string | undefined>>;
  /** What stands on standard input. */
  readonly input?: string;
  /** Whether a person sits before it. */
  readonly terminal?: boolean;
}

export function mortise(cwd: string, ...words: readonly string[]): Promise<Ran> {
  return mortiseIn({ cwd }, words);
}

export async function mortiseIn(
  { cwd, env = process.env, input = '', terminal = false }: Setting,
  words: readonly string[],
): Promise<Ran> {
  let [out, err] = ['', ''];
  const status = await dispatch(words, {
    cwd,
    env,
    stdin: Readable.from(input === '' ? [] : [Buffer.from(input)]),
    stdoutIsTerminal: terminal,
    columns: 100,
    out: (text) => {
      out += text;
    },
    err: (text) => {
      err += text;
    },
    signal: new AbortController().signal,
  });
  return { status, out, err };
}
