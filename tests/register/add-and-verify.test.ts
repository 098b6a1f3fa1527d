import { appendFileSync, mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { mortise, mortiseIn } from '../support/run-mortise.ts';
import { laySmallCode } from '../support/small-code.ts';

const entries = async (root: string) =>
  (JSON.parse((await mortise(root, 'register', 'list', '--json')).out) as { entries: { result: string }[] }).entries;

describe('mortise register add on a terminal', () => {
  it('asks for what nothing else tells, shows what it filled in, and records what was answered', async () => {
    const root = laySmallCode();
    writeFileSync(join(root, 'profile.csv'), 'x\n1\n');
    const input = [
      'Cooling front',
      '10.1000/182',
      '',
      '4',
      '',
      '2026-03-01',
      'R. Vale, 0000-0002-1825-0097, author',
      '',
      'profile.csv',
      '',
      '',
      'kept on tape',
      'yes',
    ].join('\n');
    const { status, out, err } = await mortiseIn({ cwd: root, input, terminal: true }, ['register', 'add']);
    expect([status, err]).toEqual([0, '']);
    expect(out).toContain('cooling: cool 1.0.0');
    const shown = await mortise(root, 'register', 'show', '2026', '--json');
    expect(JSON.parse(shown.out)).toMatchObject({
      content: {
        result: { title: 'Cooling front', doi: '10.1000/182', figure: '4' },
        people: [{ name: 'R. Vale', orcid: 'https://orcid.org/0000-0002-1825-0097', role: 'author' }],
        outputs: [{ name: 'profile.csv' }],
        dates: { published: '2026-03-01' },
        notes: 'kept on tape',
      },
    });
  });

  it('records nothing without a yes, and nothing when the input ends early', async () => {
    const root = laySmallCode();
    for (const input of ['A title\n\n\n\n\n\n\n\n\n\nno\n', 'A title\n']) {
      const { status, out } = await mortiseIn({ cwd: root, input, terminal: true }, ['register', 'add']);
      expect([status, out.endsWith('Nothing was recorded.\n')]).toEqual([2, true]);
    }
    expect(await entries(root)).toEqual([]);
  });
});

describe('mortise register verify', () => {
  it('tells a result file that is no longer what the entry names, and counts those that are elsewhere', async () => {
    const root = laySmallCode();
    mkdirSync(join(root, 'results'));
    writeFileSync(join(root, 'results/profile.csv'), 'x\n1\n');
    writeFileSync(join(root, 'results/gone.csv'), 'x\n2\n');
    const added = await mortise(
      root,
      'register',
      'add',
      ...['--title', 'Front', '--person', 'R. Vale', '--output', 'results/profile.csv', '--output', 'results/gone.csv'],
    );
    expect(added.err).toBe('');
    const verified = async () => {
      const { status, out } = await mortise(root, 'register', 'verify', '--json');
      const { named, findings } = JSON.parse(out) as { named: object; findings: { kind: string; says: string }[] };
      return { status, named, findings };
    };
    expect(await verified()).toEqual({ status: 0, named: { held: 2, away: 0 }, findings: [] });
    const { rmSync } = await import('node:fs');
    rmSync(join(root, 'results/gone.csv'));
    expect(await verified()).toMatchObject({ status: 0, named: { held: 1, away: 1 } });
    appendFileSync(join(root, 'results/profile.csv'), '3\n');
    const { status, findings } = await verified();
    expect(status).toBe(1);
    expect(findings).toMatchObject([{ kind: 'digest-differs', says: expect.stringContaining('results/profile.csv') }]);
  });
});
