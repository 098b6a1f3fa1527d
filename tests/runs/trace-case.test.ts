import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { NoPath } from '../../src/runs/commit-graph.ts';
import type { RunEvent } from '../../src/runs/run-event.ts';
import { NoQuantity, TraceInterrupted, type TraceRequest, traceCase } from '../../src/runs/trace-case.ts';
import { CALLER, TINY, TinyCode } from './tiny-code.ts';

let code: TinyCode;
beforeEach(() => {
  code = new TinyCode();
});
afterEach(() => code.remove());

const cooling = (rate: string, cool: string) =>
  `// cooling\nexport function rate(t) {\n  return ${rate};\n}\n\nexport function cooling(t) {\n  return ${cool};\n}\n`;
const trace = (good: string, bad = 'HEAD', more: Partial<TraceRequest> = {}) =>
  traceCase({ root: code.root, manifests: code.manifests(), env: CALLER, case: 'shock', good, bad, ...more });
const told = (steps: readonly { quantity: string; subject: string }[]) =>
  steps.map((step) => `${step.quantity}: ${step.subject}`);

describe('traceCase', () => {
  it('names every commit at which a quantity moved, and the module', async () => {
    const good = code.git('rev-parse', 'HEAD');
    for (let i = 0; i < 6; i++) {
      code.write({ 'README.md': `Words ${i}\n` });
      code.commit(`Words ${i}`);
      if (i === 1) {
        code.write({ 'src/cooling.mjs': cooling('2 * t', 'rate(t) + 500') });
        code.commit('Cool faster');
      }
      if (i === 4) {
        code.write({
          'src/eos-perfect.mjs': 'export const pressure = (rho, t) => rho * 8.5e7 * t;\n',
          'src/note.txt': 'x',
        });
        code.commit('Tidy the gas constant');
      }
    }
    const result = await trace(good);
    expect(told(result.steps)).toEqual([
      'temperature: Cool faster',
      'pressure: Tidy the gas constant',
      'peak-pressure: Tidy the gas constant',
    ]);
    expect(result.steps.map((step) => step.inside!.modules)).toEqual([
      ['cooling-fit'],
      ['eos-perfect'],
      ['eos-perfect'],
    ]);
    expect(result.commits).toBe(8);
    expect(result.runs).toBeLessThanOrEqual(7);
  });

  it('names the one procedure of several changed that moved the quantity', async () => {
    code.write({ 'src/cooling.mjs': cooling('2 * t', 'rate(t) + 1') });
    const good = code.commit('Lay out');
    code.write({
      'src/cooling.mjs': cooling('2.5 * t', '1 + rate(t)').replace('// cooling', '// cooling, tidied'),
      'src/eos-perfect.mjs': 'export const pressure = (rho, t) => t * rho * 8.31e7;\n',
    });
    code.commit('Tidy everything');
    const result = await trace(good, 'HEAD', { quantities: ['temperature'] });
    expect(result.steps).toMatchObject([
      {
        quantity: 'temperature',
        inside: { modules: ['cooling-fit'], procedures: [{ file: 'src/cooling.mjs', procedure: 'rate' }] },
      },
    ]);
  });

  it('names the manifests when the way it is built changed', async () => {
    const good = code.git('rev-parse', 'HEAD');
    code.write({
      'manifests/modules/eos-perfect.yaml': TINY['manifests/modules/eos-perfect.yaml']!.replace(
        '{EOS: eos-perfect}',
        '{EOS: eos-other}',
      ),
    });
    code.commit('Select another');
    const result = await trace(good, 'HEAD', { quantities: ['pressure'] });
    expect(result.steps.map((step) => step.inside!.modules)).toEqual([['manifests']]);
  });

  it('runs nothing at all the second time', async () => {
    const good = code.git('rev-parse', 'HEAD');
    code.write({ 'src/cooling.mjs': cooling('3 * t', 'rate(t) + 1') });
    code.commit('Cool faster');
    await trace(good);
    const ran: string[] = [];
    const again = await trace(good, 'HEAD', {
      onEvent: (event) => void (event.what === 'ran' && !event.kept && ran.push(event.case)),
    });
    expect(told(again.steps)).toEqual(['temperature: Cool faster']);
    expect(ran).toEqual([]);
  });

  it('goes on where it was interrupted', async () => {
    const good = code.git('rev-parse', 'HEAD');
    for (let i = 0; i < 6; i++) {
      code.write({ 'src/cooling.mjs': cooling(i < 4 ? `2 * t * ${i} / ${i === 0 ? 1 : i}` : '3 * t', 'rate(t) + 1') });
      code.commit(`Cool ${i}`);
    }
    const interrupt = new AbortController();
    const ran: string[] = [];
    const onEvent = (event: RunEvent) => void (event.what === 'ran' && !event.kept && ran.push(event.case));
    const first = trace(good, 'HEAD', {
      signal: interrupt.signal,
      onEvent,
      onTrace: (event) => void (event.what === 'measured' && event.runs >= 2 && interrupt.abort()),
    });
    await expect(first).rejects.toThrow(TraceInterrupted);
    const before = ran.length;
    expect(before).toBeGreaterThan(0);
    const again = await trace(good, 'HEAD', { onEvent });
    expect(again.steps.map((step) => step.subject)).toContain('Cool 4');
    const whole = ran.length;
    const all = await trace(good, 'HEAD', { onEvent });
    expect(all.steps).toEqual(again.steps);
    expect(ran.length).toBe(whole);
  });

  it('looks for the step on the branch that a merge brought in', async () => {
    const good = code.git('rev-parse', 'HEAD');
    code.git('checkout', '-q', '-b', 'side');
    code.write({ 'a.txt': '1' });
    code.commit('Side words');
    code.write({ 'src/cooling.mjs': cooling('3 * t', 'rate(t) + 1') });
    code.commit('Cool on the side');
    code.write({ 'b.txt': '1' });
    code.commit('More side words');
    code.git('checkout', '-q', 'main');
    code.write({ 'c.txt': '1' });
    code.commit('Main words');
    code.git('merge', '-q', '--no-ff', '-m', 'Merge side', 'side');
    const merge = code.git('rev-parse', 'HEAD');
    code.write({ 'd.txt': '1' });
    code.commit('Late words');
    const result = await trace(good);
    expect(told(result.steps)).toEqual(['temperature: Cool on the side']);
    expect(result.steps[0]!.through).toBe(merge);
  });

  it('skips what can not be built and says so', async () => {
    const good = code.git('rev-parse', 'HEAD');
    code.write({ 'src/main.mjs': 'this is no code' });
    const broken = code.commit('Break it');
    code.write({ 'src/cooling.mjs': cooling('3 * t', 'rate(t) + 1') });
    const alsoBroken = code.commit('Cool faster');
    code.git('checkout', '-q', good, '--', 'src/main.mjs');
    const mended = code.commit('Mend it');
    const result = await trace(good);
    expect(result.steps).toMatchObject([
      { quantity: 'temperature', before: good, after: mended, suspects: [broken, alsoBroken, mended] },
    ]);
    expect(result.unmeasurable.map((one) => one.commit).sort()).toEqual([broken, alsoBroken].sort());
    expect(result.unmeasurable[0]!.why).toContain('exit status 1');
  });

  it('takes nothing for a step that two runs of one commit differ by', async () => {
    code.write({ 'src/cooling.mjs': 'export function cooling(t) {\n  return t * (1 + 0.02 * Math.random());\n}\n' });
    const good = code.commit('Draw lots');
    for (let i = 0; i < 4; i++) {
      code.write({ 'src/eos-perfect.mjs': `export const pressure = (rho, t) => rho * 8.31e7 * t; // ${i}\n` });
      code.commit(`Comment ${i}`);
    }
    const result = await trace(good);
    expect(result.noise.temperature).toBeGreaterThan(1);
    expect(result.steps).toEqual([]);
  });

  it('says which quantities there are when asked for another', async () => {
    await expect(trace('HEAD', 'HEAD', { quantities: ['presure'] })).rejects.toThrow(NoQuantity);
  });

  it('refuses a range whose ends do not come from one another', async () => {
    const good = code.git('rev-parse', 'HEAD');
    code.write({ 'a.txt': '1' });
    const bad = code.commit('Later');
    await expect(trace(bad, good)).rejects.toThrow(NoPath);
  });
});
