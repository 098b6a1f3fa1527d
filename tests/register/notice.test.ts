import { describe, expect, it } from 'vitest';
import type { StandingNotice } from '../../src/register/chain.ts';
import { type Ancestry, NO_ANCESTRY, touchedBy } from '../../src/register/notice.ts';
import type { Notice } from '../../src/register/record.ts';
import { sampleContent, standing } from './sample-entry.ts';

const base: Notice = { title: 'wrong weight', module: 'eos', versions: '>=2.0.0 <2.1.0', says: 'pressure too low' };

function touch(notice: Partial<Notice>, entry = sampleContent, ancestry: Ancestry = NO_ANCESTRY) {
  const whole: StandingNotice = {
    id: 'n',
    content: { ...base, ...notice },
    written: '2026-01-01',
    lifted: null,
    seal: 'sha256:0',
  };
  return touchedBy(whole, [standing(entry)], ancestry)[0]?.touch ?? 'free';
}

const without = ({ versions, ...rest }: Notice): Partial<Notice> => rest;
const git = (holds: Record<string, boolean>): Ancestry => ({
  ...NO_ANCESTRY,
  holds: (_, ancestor) => holds[ancestor] ?? null,
});

describe('a notice', () => {
  it.each<[string, Partial<Notice>, string]>([
    ['by its range of versions', {}, 'touched'],
    ['not outside the range', { versions: '>=2.0.4' }, 'free'],
    ['not another module', { module: 'cooling' }, 'free'],
    ['by the component the module was plugged into', { component: 'equation-of-state' }, 'touched'],
    ['not in another component', { component: 'opacity' }, 'free'],
    [
      'when the run entered its states',
      { states: [{ quantity: 'temperature', unit: 'K', from: 1e6, to: null }] },
      'touched',
    ],
    [
      'not when the run stayed outside',
      { states: [{ quantity: 'temperature', unit: 'K', from: 1e9, to: null }] },
      'free',
    ],
    [
      'perhaps, when the states were not recorded',
      { states: [{ quantity: 'density', unit: 'g/cm3', from: 1, to: null }] },
      'not known',
    ],
  ])('touches a result %s', (_, notice, expected) => {
    expect(touch(notice)).toBe(expected);
  });

  it('touches by ancestry: brought in and not mended', () => {
    const notice = { ...base, broughtIn: ['bad'], mendedAt: ['mend'] };
    expect(touch(notice, sampleContent, git({ bad: true, mend: false }))).toBe('touched');
    expect(touch(notice, sampleContent, git({ bad: true, mend: true }))).toBe('free');
    expect(touch(notice, sampleContent, git({ bad: false, mend: false }))).toBe('free');
  });

  it('falls back on versions where git does not hold the commits, and says so where it can say nothing', () => {
    const notice = { ...base, broughtIn: ['bad'] };
    expect(touch(notice)).toBe('touched');
    expect(touch({ ...notice, versions: '>=3' })).toBe('free');
    const whole: StandingNotice = {
      id: 'n',
      content: { ...(without(base) as Notice), broughtIn: ['bad'] },
      written: '',
      lifted: null,
      seal: 'sha256:0',
    };
    expect(touchedBy(whole, [standing()], NO_ANCESTRY)).toMatchObject([
      { touch: 'not known', because: expect.stringContaining('not in this repository') },
    ]);
  });

  it('finds a copy in another code by its content', () => {
    const copied = {
      ...sampleContent,
      modules: [
        {
          module: 'other',
          component: 'equation-of-state',
          version: '0.1.0',
          contents: { 'x.f90': `swh:1:cnt:${'e'.repeat(40)}` },
        },
      ],
    };
    expect(touch({}, copied, { ...NO_ANCESTRY, contentsWithDefect: () => new Set(['e'.repeat(40)]) })).toBe('touched');
    expect(touch({}, copied)).toBe('free');
  });

  it('touches nothing once it is lifted', () => {
    expect(
      touchedBy({ id: 'n', content: base, written: '', lifted: 'wrong', seal: 'sha256:0' }, [standing()], NO_ANCESTRY),
    ).toEqual([]);
  });
});
