import { symlinkSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { recordReference } from '../../src/runs/record-reference.ts';
import { rerunCases } from '../../src/runs/rerun.ts';
import { runFindings } from '../../src/runs/run-findings.ts';
import { CALLER, TinyCode } from './tiny-code.ts';

let code: TinyCode;
beforeEach(() => {
  code = new TinyCode();
});
afterEach(() => code.remove());
const rerun = () => rerunCases({ root: code.root, manifests: code.manifests(), env: CALLER });

describe('runFindings', () => {
  it('has nothing to say of a whole tree and a reference as it was recorded', async () => {
    expect(runFindings(await rerun(), code.manifests())).toEqual([]);
  });

  it('says that a reference was altered', async () => {
    const [outcome] = await rerun();
    const theCase = code.manifests().cases.get('shock')!.value;
    await recordReference({ root: code.root, case: theCase, outcome: outcome!, reason: 'trial', who: 'Ada' });
    code.write({ 'manifests/references/shock/profile.csv': 'x\n1\n' });
    expect(runFindings(await rerun(), code.manifests())).toMatchObject([
      { kind: 'reference-altered', gravity: 'stop', place: { file: 'manifests/cases/shock.yaml', line: 1 } },
    ]);
  });

  it('says which file of the tree was not there: links that lead outside are not followed', async () => {
    symlinkSync('/etc/hostname', join(code.root, 'src', 'outside'));
    symlinkSync('main.mjs', join(code.root, 'src', 'inside'));
    code.commit('Link');
    const outcomes = await rerun();
    expect(outcomes[0]!.state).toBe('no reference');
    expect(runFindings(outcomes, code.manifests())).toMatchObject([
      {
        kind: 'tree-incomplete',
        gravity: 'caution',
        says: 'One file of the repository was not there when the code was built and run.',
        evidence: [{ says: 'src/outside: it is a link that leads outside, to /etc/hostname' }],
      },
    ]);
    // The same when the result is kept, and straight from git.
    expect(runFindings(await rerun(), code.manifests())).toHaveLength(1);
    const at = await rerunCases({ root: code.root, manifests: code.manifests(), env: CALLER, at: 'HEAD', fresh: true });
    expect(runFindings(at, code.manifests())).toHaveLength(1);
  });
});
