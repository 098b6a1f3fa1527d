import { describe, expect, it } from 'vitest';
import { mortise } from '../support/run-mortise.ts';
import { laySmallCode } from '../support/small-code.ts';

async function audited(...notice: string[]): Promise<{ kind: string; gravity: string; says: string }[]> {
  const root = laySmallCode();
  const added = await mortise(root, 'notice', 'add', '--module', 'cool', ...notice);
  expect(added.err).toBe('');
  const { out } = await mortise(root, 'audit', '--no-run', '--json');
  return JSON.parse(out).findings.filter((one: { kind: string }) => one.kind === 'notice-touches');
}

const WORDS = ['--title', 'Rate is too high below 100 K', '--says', 'A digit was dropped.'];

describe('a notice of the register in an audit', () => {
  it('touches the version that is plugged in, with its own gravity', async () => {
    const [one] = await audited(...WORDS, '--versions', '<2.0.0', '--gravity', 'stop');
    expect(one).toMatchObject({
      gravity: 'stop',
      says: 'cool 1.0.0 has a recorded defect: Rate is too high below 100 K.',
    });
  });

  it('leaves a version that it does not name', async () => {
    expect(await audited(...WORDS, '--versions', '>=2.0.0')).toEqual([]);
  });
});
