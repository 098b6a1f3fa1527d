import { describe, expect, it } from 'vitest';
import { type Again, judgeRemaking } from '../../src/register/remake.ts';
import { sampleContent } from './sample-entry.ts';

const outcome = {
  case: 'shock',
  state: 'compared',
  why: '',
  class: 'bit-for-bit' as const,
  worst: null,
  outputs: { 'profile.csv': `sha256:${'c'.repeat(64)}` },
};
const again: Again = {
  revision: 'a'.repeat(40),
  outcomes: [outcome],
  contentOf: () => `swh:1:cnt:${'b'.repeat(40)}`,
  environment: { compiler: 'gfortran 12.2', machine: 'cluster-7' },
};

describe('a result made again', () => {
  it.each<[string, Partial<Again>, string, string | undefined]>([
    ['all equal', {}, 'remade bit-for-bit', undefined],
    ['within tolerance', { outcomes: [{ ...outcome, class: 'roundoff' }] }, 'remade within tolerance', undefined],
    [
      'an output with another digest',
      { outcomes: [{ ...outcome, outputs: { 'profile.csv': 'sha256:00' } }] },
      'remade within tolerance',
      undefined,
    ],
    [
      'a result that moved',
      { outcomes: [{ ...outcome, class: 'beyond tolerance', worst: 'temperature' }] },
      'not remade',
      'temperature of case shock is beyond tolerance',
    ],
    [
      'another compiler and a result that moved',
      { outcomes: [{ ...outcome, class: 'beyond tolerance' }], environment: { compiler: 'gfortran 14' } },
      'not remade',
      'compiler was gfortran 12.2, here gfortran 14',
    ],
    [
      'other source',
      { outcomes: [{ ...outcome, class: 'beyond tolerance' }], contentOf: () => null },
      'not remade',
      'src/eos.f90 of eos is not the recorded content',
    ],
    [
      'a build that failed',
      { outcomes: [{ ...outcome, state: 'not built', why: 'no compiler accepts it' }] },
      'not remade',
      'no compiler accepts it',
    ],
    ['no such revision', { revision: null }, 'cannot be tried', 'not in this repository'],
    [
      'a missing program',
      { outcomes: [{ ...outcome, state: 'not runnable', why: 'needs gfortran' }] },
      'cannot be tried',
      'needs gfortran',
    ],
    ['no case', { outcomes: [] }, 'cannot be tried', 'no case'],
  ])('with %s stands as it should, with the first thing that differs', (_, change, standing, because) => {
    const judged = judgeRemaking(sampleContent, { ...again, ...change });
    expect(judged.standing).toBe(standing);
    if (because === undefined) expect(judged.because).toBeUndefined();
    else expect(judged.because).toContain(because);
  });
});
