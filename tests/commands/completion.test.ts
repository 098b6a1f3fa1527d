import { spawnSync } from 'node:child_process';
import { mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { COMMANDS } from '../../src/commands/table.ts';
import { mortise } from '../support/run-mortise.ts';
import { describeWith } from '../support/tools.ts';

async function script(shell: string): Promise<string> {
  const { out, status } = await mortise(tmpdir(), 'completion', shell);
  expect(status).toBe(0);
  const file = join(mkdtempSync(join(tmpdir(), 'mortise-completion-')), `mortise.${shell}`);
  writeFileSync(file, out);
  return file;
}

describeWith(['bash'], 'completion in bash', () => {
  /** What bash would offer after these words. */
  async function offered(...words: string[]): Promise<string[]> {
    const file = await script('bash');
    const { stdout, stderr } = spawnSync(
      'bash',
      [
        '--norc',
        '-c',
        `source "$0"; COMP_WORDS=("$@"); COMP_CWORD=$(($# - 1)); _mortise; printf '%s\\n' "\${COMPREPLY[@]}"`,
        file,
        'mortise',
        ...words,
      ],
      { encoding: 'utf8' },
    );
    expect(stderr).toBe('');
    return stdout.trim().split('\n');
  }

  it('offers every command', async () => {
    expect((await offered('')).sort()).toEqual(Object.keys(COMMANDS).sort());
  });

  it('offers the options of the command and those of all', async () => {
    expect(await offered('review', '--')).toEqual(expect.arrayContaining(['--staged', '--no-run', '--json']));
    expect(await offered('review', '--st')).toEqual(['--staged']);
  });
});

describeWith(['zsh'], 'completion in zsh', () => {
  it('is a script that zsh reads', async () => {
    expect(spawnSync('zsh', ['-n', await script('zsh')], { encoding: 'utf8' }).stderr).toBe('');
  });
});

describeWith(['fish'], 'completion in fish', () => {
  it('is a script that fish reads', async () => {
    expect(spawnSync('fish', ['--no-execute', await script('fish')], { encoding: 'utf8' }).stderr).toBe('');
  });
});

describe('completion', () => {
  it.each(['zsh', 'fish'])('for %s names every command and quotes what it says', async (shell) => {
    const { out } = await mortise(tmpdir(), 'completion', shell);
    for (const name of Object.keys(COMMANDS)) expect(out).toContain(name);
  });

  it('refuses another shell by name', async () => {
    const { status, err } = await mortise(tmpdir(), 'completion', 'ksh');
    expect([status, err]).toEqual([2, expect.stringContaining('bash, zsh, fish')]);
  });
});

describe('the manual page', () => {
  it('has every command with every option of it', async () => {
    const { out } = await mortise(tmpdir(), 'man');
    for (const [name, load] of Object.entries(COMMANDS)) {
      expect(out).toContain(`.SS ${name}\n`);
      for (const option of Object.keys((await load()).command.options))
        expect(out).toContain(`\\-\\-${option.replaceAll('-', '\\-')}`);
    }
  });
});

describeWith(['man'], 'the manual page, formatted', () => {
  it('gives the formatter nothing to complain of', async () => {
    const { out } = await mortise(tmpdir(), 'man');
    const file = join(mkdtempSync(join(tmpdir(), 'mortise-man-')), 'mortise.1');
    writeFileSync(file, out);
    const { stdout, stderr } = spawnSync('man', ['--warnings', '-l', '-P', 'cat', file], {
      encoding: 'utf8',
      env: { ...process.env, MANWIDTH: '100', LC_ALL: 'C.UTF-8' },
    });
    expect(stderr).toBe('');
    expect(stdout).toContain('--staged');
  });
});
