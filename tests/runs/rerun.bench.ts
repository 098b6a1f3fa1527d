/**
 * What Mortise adds to the runs themselves. Floors: the bare command, started as it is; the time that 200 cases of 0.2 s need
 * on so many workers; the same array handed to Slurm by hand.
 */
import { execFileSync, spawn } from 'node:child_process';
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
    ).replace(
      /run: .*/,
      seconds === 0 ? `run: cp --suffix=.${i} ${WRITES} {out}/profile.csv` : `run: sh src/wait.sh {out} ${i}`,
    );
  }
  files['src/wait.sh'] = `sleep ${seconds}\ncp ${WRITES} "$1/profile.csv"\n`;
  return new TinyCode(files);
}

const quick = codeOf(30, 0);
const many = codeOf(200, 0.2);
afterAll(() => {
  quick.remove();
  many.remove();
});
const manifestsOfQuick = quick.manifests();
const manifestsOfMany = many.manifests();
const out = join(quick.root, '.git', 'bare');
mkdirSync(out, { recursive: true });
const once = { iterations: 1, warmupIterations: 0, warmupTime: 0, time: 0 };

function start(program: string, words: readonly string[], folder: string): Promise<unknown> {
  return new Promise((resolve) => spawn(program, words, { cwd: folder, stdio: 'ignore' }).on('close', resolve));
}

// A case's overhead is the difference of the two over 30; a single rerun also asks git three things.
describe('30 cases one after another, results compared and kept', () => {
  bench('floor: the bare commands', async () => {
    for (let i = 0; i < 30; i++) await start('cp', [WRITES, join(out, 'profile.csv')], quick.root);
  });
  bench('rerun of the cases, nothing kept from before', async () => {
    await rerunCases({
      root: quick.root,
      manifests: manifestsOfQuick,
      env: CALLER,
      executor: 'here',
      fresh: true,
      jobs: 1,
    });
  });
  bench('rerun of one case, nothing kept from before', async () => {
    const cases = ['c1'];
    await rerunCases({
      root: quick.root,
      manifests: manifestsOfQuick,
      env: CALLER,
      executor: 'here',
      fresh: true,
      cases,
    });
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
          await start('sh', ['src/wait.sh', folder], many.root);
        }
      };
      await Promise.all(Array.from({ length: workers }, worker));
    },
    once,
  );
  bench(
    'rerun of the cases',
    async () => {
      await rerunCases({ root: many.root, manifests: manifestsOfMany, env: CALLER, executor: 'here', fresh: true });
    },
    once,
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
    once,
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
    once,
  );
});
