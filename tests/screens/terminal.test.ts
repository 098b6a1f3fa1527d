import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Terminal as HeadlessTerminal } from '@xterm/headless';
import { type IPty, spawn } from 'node-pty';
import { afterAll, afterEach, describe, expect, it } from 'vitest';
import { builtAsset } from '../../src/sources/assets.edge.ts';
import { laySmallCode } from '../support/small-code.ts';

const { Terminal } = createRequire(import.meta.url)('@xterm/headless') as { Terminal: typeof HeadlessTerminal };

/** The built program in a pseudo-terminal, with an emulator that holds what a person would see. */
class Session {
  readonly terminal: HeadlessTerminal;
  readonly process: IPty;
  raw = '';
  exit: { exitCode: number; signal?: number } | null = null;

  constructor(cwd: string, columns: number, rows: number, words: readonly string[] = []) {
    this.terminal = new Terminal({ cols: columns, rows, allowProposedApi: true });
    this.process = spawn(process.execPath, [builtAsset('mortise.js'), ...words], {
      cols: columns,
      rows,
      cwd,
      env: {
        ...withoutCi(),
        LANG: 'C.UTF-8',
        XDG_CACHE_HOME: cache,
        NO_COLOR: '',
        TERM: 'xterm-256color',
      } as Record<string, string>,
    });
    this.process.onData((data) => {
      this.raw += data;
      this.terminal.write(data);
    });
    this.process.onExit((exit) => {
      this.exit = exit;
    });
  }

  screen(): string {
    const buffer = this.terminal.buffer.active;
    return Array.from(
      { length: this.terminal.rows },
      (_, row) => buffer.getLine(buffer.viewportY + row)?.translateToString(true) ?? '',
    ).join('\n');
  }

  async until(what: string | RegExp | (() => boolean), seconds = 20): Promise<string> {
    for (const end = Date.now() + seconds * 1000; Date.now() < end; ) {
      const screen = this.screen();
      if (typeof what === 'function' ? what() : typeof what === 'string' ? screen.includes(what) : what.test(screen))
        return screen;
      await new Promise((done) => setTimeout(done, 20));
    }
    throw new Error(`not seen: ${String(what)}\n${this.screen()}`);
  }

  press(keys: string): void {
    this.process.write(keys);
  }
}

/** Ink draws nothing but the last frame where it sees itself in CI. */
function withoutCi(): NodeJS.ProcessEnv {
  return Object.fromEntries(
    Object.entries(process.env).filter(([name]) => !/^(CI|CI_.*|CONTINUOUS_INTEGRATION)$/.test(name)),
  );
}

const cache = mkdtempSync(join(tmpdir(), 'mortise-terminal-'));
const root = laySmallCode();
const sessions: Session[] = [];
afterEach(() => {
  for (const one of sessions.splice(0)) if (one.exit === null) one.process.kill('SIGKILL');
});
afterAll(() => {
  for (const folder of [cache, root]) rmSync(folder, { recursive: true, force: true });
});
function open(columns: number, rows: number, words: readonly string[] = []): Session {
  const session = new Session(root, columns, rows, words);
  sessions.push(session);
  return session;
}

const LETTERS = {
  assembly: 'a',
  joint: 'j',
  history: 'h',
  cases: 'c',
  deviation: 'd',
  swap: 's',
  register: 'r',
  findings: 'f',
};

/** A code of its own for a test that changes it. */
function openOn(folder: string): Session {
  const session = new Session(folder, 80, 24);
  sessions.push(session);
  return session;
}

describe('the screens in a terminal', () => {
  for (const [columns, rows] of [
    [80, 24],
    [120, 40],
    [200, 60],
  ] as const) {
    it(`are all reached by their letter at ${columns}x${rows}, nothing left over from the one before`, async () => {
      const session = open(columns, rows);
      await session.until('Can the campaign start?');
      await session.until(/ (cases not run|cleared with cautions) *$/m);
      for (const [name, letter] of Object.entries(LETTERS)) {
        session.press(letter);
        const screen = await session.until(new RegExp(`^ A small code {2}${name}\\b`));
        for (const line of screen.split('\n')) expect(line.length).toBeLessThanOrEqual(columns);
        if (name !== 'assembly') expect(screen).not.toContain('Can the campaign start?');
      }
      session.press('?');
      await session.until('Everywhere');
    });
  }

  it('answer "held" or "cleared" once the audit has run, and show the case as it went', async () => {
    const session = open(80, 24);
    await session.until('not known: 1 case is not run');
    session.press('c');
    await session.until(/front +not run/);
    session.press('a');
    await session.until(/front +no reference/);
    session.press('\u001b');
    await session.until('Yes, with cautions');
  });

  it('follow the size of the terminal, down to where they say that it is too small', async () => {
    const session = open(120, 40);
    await session.until(/ (cases not run|cleared with cautions) *$/m);
    for (const [columns, rows] of [
      [60, 20],
      [40, 13],
      [200, 60],
      [80, 24],
    ] as const) {
      session.process.resize(columns, rows);
      session.terminal.resize(columns, rows);
      await session.until(
        () =>
          session
            .screen()
            .split('\n')
            .slice(0, rows - 1)
            .filter((line) => /^─+$/.test(line.trim()) && line.trim().length === columns).length >= 1,
      );
    }
    session.process.resize(39, 11);
    session.terminal.resize(39, 11);
    await session.until('needs 40x12');
  });

  it('never clear the whole screen between frames', async () => {
    const session = open(80, 24);
    await session.until(/ (cases not run|cleared with cautions) *$/m);
    const before = session.raw.length;
    for (const letter of 'jhcdsrfa') session.press(letter);
    await session.until(/assembly/);
    await new Promise((done) => setTimeout(done, 200));
    expect(session.raw.slice(before)).not.toContain('\u001b[2J');
    expect(session.raw.slice(before)).not.toContain('\u001b[3J');
  });

  it('follow the files: a changed manifest is read again without being asked', async () => {
    const folder = laySmallCode();
    const session = openOn(folder);
    await session.until(/ (cases not run|cleared with cautions) *$/m);
    const file = join(folder, 'manifests/assembly.yaml');
    writeFileSync(file, readFileSync(file, 'utf8').replace('A small code', 'Another name'));
    await session.until(/^ Another name/);
    await session.until('1 files changed');
  });

  it('begin with what they showed last, and say of when it is', async () => {
    const folder = laySmallCode();
    const first = openOn(folder);
    await first.until(/ (cases not run|cleared with cautions) *$/m);
    first.press('q');
    await first.until(() => first.exit !== null);
    const second = openOn(folder);
    await second.until(/ (cases not run|cleared with cautions) *$/m);
    expect(second.raw.slice(0, second.raw.indexOf('Leave') + 1 || undefined)).toMatch(
      /as of \d{4}-\d\d-\d\d \d\d:\d\d UTC/,
    );
  });

  it('with --ascii hold no other character', async () => {
    const session = open(80, 24, ['--ascii']);
    await session.until(/ (cases not run|cleared with cautions) *$/m);
    for (const letter of 'jcf') {
      session.press(letter);
      await new Promise((done) => setTimeout(done, 150));
      expect(session.screen()).toMatch(/^[\x20-\x7e\n]*$/);
    }
  });

  it('give the terminal back on Q', async () => {
    const session = open(80, 24);
    await session.until(/ (cases not run|cleared with cautions) *$/m);
    session.press('q');
    await session.until(() => session.exit !== null);
    expect(session.exit?.exitCode).toBe(0);
    expect(session.raw).toMatch(/\u001b\[\?1049l(\u001b\[\?25h)*$/);
    expect(session.terminal.buffer.active.type).toBe('normal');
  });

  for (const signal of ['SIGTERM', 'SIGHUP']) {
    it(`give the terminal back on ${signal}`, async () => {
      const session = open(80, 24);
      await session.until(/ (cases not run|cleared with cautions) *$/m);
      session.process.kill(signal);
      await session.until(() => session.exit !== null);
      expect(session.raw).toContain('\u001b[?1049l');
      expect(session.raw.lastIndexOf('\u001b[?25h')).toBeGreaterThan(session.raw.lastIndexOf('\u001b[?25l'));
    });
  }

  it('give the terminal back on Ctrl-Z and come again when continued', async () => {
    const session = open(80, 24);
    await session.until(/ (cases not run|cleared with cautions) *$/m);
    session.press('\u001a');
    await session.until(() => session.terminal.buffer.active.type === 'normal');
    await session.until(() => {
      // Again and again, since the first may come before the process has stopped.
      session.process.kill('SIGCONT');
      return session.screen().includes('Can the campaign start?');
    });
    expect(session.terminal.buffer.active.type).toBe('alternate');
  });
});
