/**
 * What Mortise adds to the runs themselves. Floors: the bare command, started as it is; the time that 200 cases of 0.2 s need
 * on so many workers; the same array handed to Slurm by hand.
 */
import { execFileSync, spawn, spawnSync } from 'node:child_process';
import { mkdirSync, writeFileSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { join } from 'node:path';
import { afterAll, bench, describe } from 'vitest';
import { rerunCases } from '../../src/runs/rerun.ts';
import { hasTool } from '../support/tools.ts';
import { CALLER, TINY, TinyCode } from './tiny-code.ts';

const WRITES = 'src/profile.csv';
/** A code whose cases are a standard program that copies its output into place, perhaps after a while. */
function codeOf(cases: number, seconds: number): TinyCode {
  const files: Record<string, string> = { ...TINY, [WRITES]: `x,pressure,temperature\n${'1,2,3\n'.repeat(100)}` };
  delete files['manifests/cases/shock.yaml'];
  files['manifests/assembly.yaml'] = `assembly: tiny
plugged: {equation-of-state: eos-perfect, reaction-rates: cooling-fit}
executors: {here: {kind: local}, cluster: {kind: slurm}}
`;
  for (let i = 0; i < cases; i++) {
    files[`manifests/cases/c${i}.yaml`] = TINY['manifests/cases/shock.yaml']!.replace(
      'case: shock',
      `case: c${i}`,
    ).replace(/run: .*/, seconds === 0 ? `run: cp ${WRITES} {out}/profile.csv` : `run: sh src/wait.sh {out} ${i}`);
  }
  files['src/wait.sh'] = `sleep ${seconds}\ncp ${WRITES} "$1/profile.csv"\n`;
  return new TinyCode(files);
}

const one = codeOf(1, 0);
const many = codeOf(200, 0.2);
afterAll(() => {
  one.remove();
  many.remove();
});
const manifestsOfOne = one.manifests();
const manifestsOfMany = many.manifests();
const out = join(one.root, '.git', 'bare');
mkdirSync(out, { recursive: true });

describe('one case, its result compared and kept', () => {
  bench('floor: the bare command', () => {
    spawnSync('cp', [WRITES, join(out, 'profile.csv')], { cwd: one.root });
  });
  bench('rerun of the case, nothing kept from before', async () => {
    await rerunCases({ root: one.root, manifests: manifestsOfOne, env: CALLER, executor: 'here', fresh: true });
  });
});

describe('200 cases of 0.2 s', () => {
  const workers = availableParallelism();
  bench(
    'floor: the same commands, one after another on as many workers as cores',
    async () => {
      let next = 0;
      const worker = async () => {
        while (next < 200) {
          const folder = join(out, String(next++));
          mkdirSync(folder, { recursive: true });
          await new Promise((resolve) => spawn('sh', ['src/wait.sh', folder], { cwd: many.root }).on('close', resolve));
        }
      };
      await Promise.all(Array.from({ length: workers }, worker));
    },
    { iterations: 1, warmupIterations: 0, warmupTime: 0, time: 0 },
  );
  bench(
    'rerun of the cases',
    async () => {
      await rerunCases({ root: many.root, manifests: manifestsOfMany, env: CALLER, executor: 'here', fresh: true });
    },
    { iterations: 1, warmupIterations: 0, warmupTime: 0, time: 0 },
  );
});

describe.runIf(hasTool('slurm'))('40 cases of 0.2 s through Slurm', () => {
  const script = join(out, 'array.sh');
  writeFileSync(
    script,
    `#!/bin/sh\nmkdir -p "${out}/s$SLURM_ARRAY_TASK_ID"\nexec sh src/wait.sh "${out}/s$SLURM_ARRAY_TASK_ID"\n`,
  );
  const cases = Array.from({ length: 40 }, (_, i) => `c${i}`);
  bench(
    'floor: the same as a job array by hand',
    () => {
      execFileSync('sbatch', ['--wait', '--array=0-39', '--output=/dev/null', `--chdir=${many.root}`, script]);
    },
    { iterations: 1, warmupIterations: 0, warmupTime: 0, time: 0 },
  );
  bench(
    'rerun of the cases',
    async () => {
      await rerunCases({
        root: many.root,
        manifests: manifestsOfMany,
        env: CALLER,
        executor: 'cluster',
        cases,
        fresh: true,
      });
    },
    { iterations: 1, warmupIterations: 0, warmupTime: 0, time: 0 },
  );
});
