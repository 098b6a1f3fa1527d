import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { NotDeclared } from '../../src/runs/configuration.ts';
import { readExchange } from '../../src/runs/exchange.ts';
import { type SwapRequest, swapModules } from '../../src/runs/swap.ts';
import { CALLER, TINY, TinyCode } from './tiny-code.ts';

let code: TinyCode;
beforeEach(() => {
  code = new TinyCode({
    ...TINY,
    // The pressure is multiplied by both the equation of state and a boost of the cooling, so that the two interact.
    'src/main.mjs': `
import { writeFileSync } from 'node:fs';
const [, , eos, rates, out] = process.argv;
const { pressure } = await import('./' + eos + '.mjs');
const { boost } = await import('./' + rates + '.mjs');
let text = 'x,pressure,temperature\\n';
for (let i = 0; i < 20; i++) text += i + ',' + pressure(1 + i, 100) * (i < 10 ? 1 : boost) * Number(process.env.SCALE ?? 1) + ',' + 100 + '\\n';
writeFileSync(out + '/profile.csv', text);
`,
    'src/eos-other.mjs': 'export function pressure(rho, t) {\n  return 2 * rho * 8.31e7 * t;\n}\n',
    'src/cooling.mjs': 'export const boost = 1;\n',
    'src/cooling-strong.mjs': 'export const boost = 3;\n',
    'manifests/modules/cooling-fit.yaml': `${TINY['manifests/modules/cooling-fit.yaml']}select: {RATES: cooling}\n`,
    'manifests/modules/cooling-strong.yaml': `module: cooling-strong
component: reaction-rates
version: 1.0.0
source: {language: javascript, files: [src/cooling-strong.mjs]}
select: {RATES: cooling-strong}
`,
    'manifests/modules/eos-fortran.yaml': `module: eos-fortran
component: equation-of-state
version: 1.0.0
source: {language: fortran, files: [src/eos.f90]}
select: {EOS: eos-fortran}
needs: [no-such-compiler]
`,
    'manifests/cases/shock.yaml': TINY['manifests/cases/shock.yaml']!.replace(
      '{select.EOS} {out}',
      '{select.EOS} {select.RATES} {out}',
    ),
  });
});
afterEach(() => code.remove());

const swap = (words: readonly string[], more: Partial<SwapRequest> = {}) =>
  swapModules({
    root: code.root,
    manifests: code.manifests(),
    env: CALLER,
    exchanges: words.map(readExchange),
    ...more,
  });

describe('swapModules', () => {
  it('says by how many tolerances each quantity moved, and where along the profile', async () => {
    const [shock] = await swap(['reaction-rates=cooling-strong']);
    expect(shock).toMatchObject({
      case: 'shock',
      against: 'plugged',
      class: 'beyond tolerance',
      smallest: ['reaction-rates=cooling-strong'],
    });
    const pressure = shock!.effects.find((effect) => effect.quantity === 'pressure')!;
    // Three times as much where 0.1 % is allowed: 2 / 1e-3.
    expect(pressure.together).toBeCloseTo(2000, 6);
    expect(pressure.stretches).toEqual([{ from: 10, to: 19 }]);
    expect(shock!.effects.find((effect) => effect.quantity === 'temperature')).toMatchObject({
      together: 0,
      stretches: [],
    });
  });

  it('tells the effects of two exchanges from their interaction, and shares out the whole', async () => {
    const [shock] = await swap(['equation-of-state=eos-other', 'reaction-rates=cooling-strong']);
    const peak = shock!.effects.find((effect) => effect.quantity === 'peak-pressure')!;
    // Twice, three times, six times: 1, 2 and 5 over 1e-3, so the pair adds 2 beyond its parts.
    expect(peak.alone.map((one) => Math.round(one!))).toEqual([1000, 2000]);
    expect(peak.together).toBeCloseTo(5000, 6);
    expect(peak.interactions).toHaveLength(1);
    expect(peak.interactions[0]!.tolerances).toBeCloseTo(2000, 6);
    expect(peak.shares!.map((one) => Math.round(one))).toEqual([2000, 3000]);
    expect(shock!.runs.map((run) => run.exchanges)).toEqual([
      ['equation-of-state=eos-other'],
      ['reaction-rates=cooling-strong'],
      ['equation-of-state=eos-other', 'reaction-rates=cooling-strong'],
    ]);
  });

  it('finds the one exchange of many that moves the result', async () => {
    const idle = ['A', 'B', 'C', 'D'].map((name) => `select.${name}=1`);
    const [shock] = await swap([...idle.slice(0, 2), 'equation-of-state=eos-other', ...idle.slice(2)], {
      budget: 16,
    });
    expect(shock!.smallest).toEqual(['equation-of-state=eos-other']);
    const pressure = shock!.effects.find((effect) => effect.quantity === 'pressure')!;
    expect(pressure.shares!.map((one) => Math.round(one))).toEqual([0, 0, 1000, 0, 0]);
  });

  it('takes a variable, such as a compiler flag, for an exchange', async () => {
    const [shock] = await swap(['set.SCALE=1.01']);
    expect(shock!.class).toBe('beyond tolerance');
    expect(shock!.effects.find((effect) => effect.quantity === 'peak-pressure')!.together).toBeCloseTo(10, 6);
  });

  it('reports a module whose compiler is absent as not runnable', async () => {
    const [shock] = await swap(['equation-of-state=eos-fortran']);
    expect(shock!.runs[0]).toMatchObject({ state: 'not runnable' });
    expect(shock!.runs[0]!.why).toContain('no-such-compiler (needed by eos-fortran)');
    expect(shock!.class).toBeNull();
  });

  it.each([
    ['equation-of-state=eos-perfect', 'plugged into equation-of-state already'],
    ['equation-of-state=eos-othr', 'did you mean "eos-other"'],
    ['opacity=eos-other', 'fills equation-of-state, not opacity'],
  ])('refuses %s before anything is run', async (word, says) => {
    await expect(swap([word])).rejects.toThrow(NotDeclared);
    await expect(swap([word])).rejects.toThrow(says);
  });
});
