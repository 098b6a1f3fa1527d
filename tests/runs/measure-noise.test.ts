import { appendFileSync, existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { BAKER_CRITERIA, criteriaFor } from '../../src/compare/ensemble-test.ts';
import { ensembleCases, ensembleText } from '../../src/runs/ensemble-cases.ts';
import { moveLastBits } from '../../src/runs/last-bit.ts';
import { measureNoise, noiseText } from '../../src/runs/measure-noise.ts';
import { recordReference } from '../../src/runs/record-reference.ts';
import { readNoise } from '../../src/runs/reference-files.edge.ts';
import { rerunCases } from '../../src/runs/rerun.ts';
import { CALLER, TINY, TinyCode } from './tiny-code.ts';

const moved = (text: string, seed: number) => {
  const one = moveLastBits(Buffer.from(text, 'latin1'), seed);
  return { text: Buffer.from(one.bytes).toString('latin1'), count: one.moved };
};

describe('an input with its last bits moved', () => {
  it('has every real number one double off, and nothing else changed', () => {
    const text = 'cells = 100 ! \xb5 of run-1.5.dat\nrho = 1.25, t=-3.d0 x 1e10 v1.2.3 0.0\n';
    const { text: changed, count } = moved(text, 3);
    const words = (all: string) => [...all.matchAll(/rho = (\S+), t=(\S+) x (\S+) v1.2.3 0.0/g)][0]!.slice(1);
    expect(count).toBe(3);
    expect(changed.slice(0, changed.indexOf('rho'))).toBe(text.slice(0, text.indexOf('rho')));
    const numbers = (all: string) => words(all).map((word) => Number(word.replace('d', 'e')));
    // numpy.spacing: 2^-52 at 1.25, 2^-51 at 3, 2^-19 at 1e10 (52 - 33 bits behind the point).
    const spacing = [2 ** -52, 2 ** -51, 2 ** -19];
    const off = numbers(changed).map((value, i) => Math.abs(value - numbers(text)[i]!) / spacing[i]!);
    expect(off).toEqual([1, 1, 1]);
    expect(words(changed)[1]).toMatch(/d/);
  });

  it('is the same for the same seed, and another for another', () => {
    const text = Array.from({ length: 40 }, (_, i) => `${i}.5`).join(' ');
    expect(moved(text, 2)).toEqual(moved(text, 2));
    expect(moved(text, 2).text).not.toBe(moved(text, 3).text);
  });
});

const MAIN = `
import { readFileSync, writeFileSync } from 'node:fs';
const scale = Number(/scale = (\\S+)/.exec(readFileSync('inputs/run.par', 'latin1'))[1]);
const order = process.env.ORDER === 'back' ? -1 : 1;
const factor = Number(process.env.FACTOR ?? 1);
let text = 'x,pressure,temperature\\n';
for (let i = 0; i < 20; i++) {
  const parts = Array.from({ length: 50 }, (_, k) => scale / (k + i + 1));
  let sum = 0;
  for (const part of order < 0 ? parts.reverse() : parts) sum += part;
  text += i + ',' + sum * factor + ',' + (100 + i) + '\\n';
}
writeFileSync(process.argv[3] + '/profile.csv', text);
`;
const NOISE = `noise: {exchanges: [set.ORDER=back], last-bit: [inputs/run.par], runs: 3}
`;

let code: TinyCode;
beforeEach(() => {
  const shock = TINY['manifests/cases/shock.yaml']!.replaceAll('{relative: 1e-3}', '{relative: 1e-18}');
  code = new TinyCode({
    ...TINY,
    'src/main.mjs': MAIN,
    'inputs/run.par': 'scale = 1.7\n',
    'manifests/cases/shock.yaml': `${shock}inputs: [inputs/run.par]\n${NOISE}`,
  });
});
afterEach(() => code.remove());

const request = () => ({ root: code.root, manifests: code.manifests(), env: CALLER });
const folder = () => join(code.root, 'manifests/references/shock');
async function record() {
  const [outcome] = await rerunCases(request());
  const theCase = code.manifests().cases.get('shock')!.value;
  await recordReference({ root: code.root, case: theCase, outcome: outcome!, reason: 'first', who: 'Ada Tester' });
}
const environment = (text: string) =>
  code.write({ 'manifests/assembly.yaml': `${TINY['manifests/assembly.yaml']}environment: {set: ${text}}\n` });

describe('the noise of a code', () => {
  it('is measured by runs that change no physics, kept as a distribution, and allowed from then on', async () => {
    await record();
    environment('{ORDER: back}');
    const [before] = await rerunCases(request());
    expect(before!.deviations[0]).toMatchObject({ quantity: 'pressure', class: 'beyond tolerance' });
    environment('{ORDER: forth}');

    const [measured] = await measureNoise({ ...request(), cases: [] });
    const floor = measured!.noise!.floors.pressure!;
    expect(measured!.noise!.runs).toEqual([
      'set.ORDER=back',
      ...[1, 2, 3].map((run) => `last bit of inputs/run.par, run ${run}`),
    ]);
    expect(floor.deviations).toHaveLength(4);
    expect(floor.floor).toBeGreaterThan(1e-17);
    expect(floor.floor).toBeLessThan(1e-14);
    expect(measured!.noise!.floors.temperature!.floor).toBe(0);
    expect(readNoise(folder())!.floors.pressure).toEqual(floor);
    expect(noiseText([measured!])).toContain('pressure: noise floor');

    environment('{ORDER: back}');
    const [after] = await rerunCases(request());
    expect(after!.deviations[0]!.class).toBe('roundoff');
    expect(after!.deviations[0]!.tolerance!.reason).toContain('noise floor of 4 repeated runs');
    environment('{FACTOR: "1.000001"}');
    const [wrong] = await rerunCases(request());
    expect(wrong!.deviations[0]!.class).toBe('beyond tolerance');
  });

  it('belongs to the reference it was measured around, and goes with it', async () => {
    await record();
    await measureNoise({ ...request(), cases: ['shock'] });
    const file = join(folder(), 'noise.yaml');
    const text = readFileSync(file, 'utf8');
    await record();
    expect(existsSync(file)).toBe(false);
    writeFileSync(file, text.replace(/sha256:\w{8}/, 'sha256:00000000'));
    expect(readNoise(folder())).toBeNull();
    appendFileSync(file, 'date: twice\n');
    const [outcome] = await rerunCases(request());
    expect(outcome!.damage).toContain('noise.yaml');
  });

  it('is not told without a reference, and says so', async () => {
    const [measured] = await measureNoise({ ...request(), cases: ['shock'] });
    expect(measured).toMatchObject({ noise: null, why: [expect.stringContaining('no reference was recorded')] });
    expect(existsSync(folder())).toBe(false);
  });
});

describe('an ensemble of runs', () => {
  const test = async () => (await ensembleCases({ ...request(), cases: ['shock'] }))[0]!;
  it('takes in new runs of the same code, and keeps out those of another physics', async () => {
    code.write({
      'manifests/cases/shock.yaml': readFileSync(join(code.root, 'manifests/cases/shock.yaml'), 'utf8').replace(
        'runs: 3',
        'runs: 12',
      ),
    });
    code.commit('Twelve runs');
    await record();
    expect((await test()).why).toContain('was not measured');
    await measureNoise({ ...request(), cases: ['shock'] });
    const same = await test();
    expect(same.outcome).toMatchObject({ passes: true });
    expect(ensembleText([same])).toBe('shock: belongs to the ensemble of 13 runs\n');
    environment('{FACTOR: "1.000001"}');
    const other = await test();
    expect(other.outcome).toMatchObject({ passes: false });
    expect(ensembleText([other])).toContain('does not belong');
  });

  it('needs enough members', async () => {
    await record();
    await measureNoise({ ...request(), cases: ['shock'] });
    expect((await test()).why).toBe('an ensemble of 2 quantities needs 10 runs, it has 4: raise "runs"');
  });

  it('is judged by the criteria of Baker et al. 2015, section 3.2, for the 50 components of the paper', () => {
    expect(criteriaFor(120)).toEqual(BAKER_CRITERIA);
  });
});
