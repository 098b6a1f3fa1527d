import { describe, expect, it } from 'vitest';
import { siftFindings } from '../../src/audit/acceptance.ts';
import type { Finding } from '../../src/model/finding.ts';
import type { Acceptance, Accepted, Declaration } from '../../src/model/manifest.ts';

const found: Finding = {
  kind: 'unit-unknown',
  gravity: 'stop',
  module: 'eos',
  place: { file: 'manifests/modules/eos.yaml', line: 3, column: 4, revision: 'abcdef0123' },
  says: '"gm" is not a unit.',
  evidence: [],
  next: 'write "g".',
};

function declared(...accepted: Acceptance[]): Declaration<Accepted> {
  return {
    file: 'manifests/accepted.yaml',
    value: { accepted },
    placeOf: (path) => ({ file: 'manifests/accepted.yaml', line: 2 + Number(path[1]), column: 3 }),
    lineText: () => '',
    excerptOf: () => ({ line: 1, text: '', column: 1, width: 1 }),
  };
}

const acceptance: Acceptance = { finding: 'unit-unknown', reason: 'known since 2019' };

describe('an acceptance', () => {
  it.each([
    ['its kind alone', {}],
    ['module, file, words and revision', { module: 'eos', file: found.place.file, says: '"gm"', revision: 'abcdef' }],
    ['its last day', { until: '2026-05-01' }],
  ])('holds by %s', (_, more) => {
    const sifted = siftFindings([found], declared({ ...acceptance, ...more }), '2026-05-01');
    expect(sifted.open).toEqual([]);
    expect(sifted.accepted).toEqual([{ finding: found, acceptance: { ...acceptance, ...more } }]);
  });

  it.each([
    ['another kind', { finding: 'unit-ambiguous' }],
    ['another module', { module: 'hydro' }],
    ['other words', { says: 'kg' }],
    ['another revision', { revision: 'fff' }],
  ])('of %s leaves the finding open and is itself noted', (_, more) => {
    const sifted = siftFindings([found], declared({ ...acceptance, ...more }), '2026-05-01');
    expect(sifted.open.map((one) => one.kind)).toEqual(['unit-unknown', 'acceptance-unused']);
  });

  it('counts no longer the day after its last, and says so at its own line', () => {
    const sifted = siftFindings([found], declared({ ...acceptance, until: '2026-04-30' }), '2026-05-01');
    expect(sifted.open.map((one) => one.kind)).toEqual(['unit-unknown', 'acceptance-expired']);
    expect(sifted.open[1]?.place.line).toBe(2);
  });
});
