import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Clearance, gateReasons, outcomeOf, sealedText, sealOf, unseal } from '../../src/audit/clearance.ts';
import type { Finding, Gravity } from '../../src/model/finding.ts';

const clearance: Clearance = {
  format: 'mortise clearance 1',
  assembly: 'cloud',
  outcome: 'cleared',
  made: '2026-01-02T03:04:05.000Z',
  revision: 'a'.repeat(40),
  tree: 'b'.repeat(40),
  changed: [],
  modules: [
    { component: 'equation-of-state', module: 'eos', version: '1.0.0', files: { 'src/eos.ts': 'c'.repeat(40) } },
  ],
  cases: [{ case: 'shock', class: 'bit-for-bit', tolerances: 0 }],
  findings: [],
  accepted: [],
  environment: { node: '20' },
};
const here = { revision: clearance.revision, tree: clearance.tree, changed: [] };

function finding(gravity: Gravity): Finding {
  return {
    kind: 'unit-unknown',
    gravity,
    place: { file: 'f', line: 1, column: 1 },
    says: 's',
    evidence: [],
    next: 'n',
  };
}

describe('outcome', () => {
  it.each([
    [[], 'cleared'],
    [['note'], 'cleared'],
    [['note', 'caution'], 'cleared with cautions'],
    [['caution', 'stop', 'note'], 'held'],
  ] as const)('of %j is %s', (gravities, outcome) => {
    expect(outcomeOf(gravities.map(finding))).toBe(outcome);
  });
});

describe('a clearance file', () => {
  it('reads back as it was sealed', () => {
    expect(unseal(sealedText(clearance))).toEqual({ clearance, seal: sealOf(clearance) });
  });

  it('is told from one with any single character altered', () => {
    const text = sealedText(clearance);
    fc.assert(
      fc.property(fc.nat(text.length - 1), fc.constantFrom('0', 'x', '"', ' '), (at, character) => {
        const altered = text.slice(0, at) + character + text.slice(at + 1);
        const read = unseal(altered);
        // White space between members is not part of the content; everything else is.
        if ('clearance' in read) expect(read.clearance).toEqual(clearance);
      }),
      { numRuns: 500 },
    );
    expect(unseal(text.replace('"cleared"', '"held"'))).toMatchObject({ broken: expect.stringContaining('altered') });
    expect(unseal(text.slice(0, 50))).toMatchObject({ broken: expect.stringContaining('no JSON') });
    expect(unseal('{}')).toMatchObject({ broken: expect.stringContaining('no clearance') });
    expect(unseal('null')).toMatchObject({ broken: expect.stringContaining('no clearance') });
  });
});

describe('the gate', () => {
  it('lets the cleared code run, also from another commit with the same content', () => {
    expect(gateReasons(clearance, here)).toEqual([]);
    expect(gateReasons(clearance, { ...here, revision: 'd'.repeat(40) })).toEqual([]);
    expect(gateReasons({ ...clearance, outcome: 'cleared with cautions' }, here)).toEqual([]);
  });

  it.each([
    ['other content', clearance, { ...here, tree: 'e'.repeat(40) }, 'contents differ'],
    ['a changed file', clearance, { ...here, changed: ['src/eos.ts'] }, 'src/eos.ts'],
    ['no repository', clearance, { revision: null, tree: null, changed: [] }, 'no git repository'],
    ['a held audit', { ...clearance, outcome: 'held' as const }, here, 'held'],
    ['an audit of a dirty tree', { ...clearance, changed: ['a', 'b', 'c', 'd'] }, here, 'a, b, c and 1 more'],
  ])('stops %s', (_, cleared, now, reason) => {
    expect(gateReasons(cleared, now).join('; ')).toContain(reason);
  });
});
