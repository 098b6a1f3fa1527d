/** A small simulation code in a repository of its own, for tests of whole commands: one TypeScript module, one case, one reference to record. */
import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';

export const SMALL_CODE: Readonly<Record<string, string>> = {
  'src/cool.ts': `/**
 * Cooling rate of the gas.
 * @param rho density [g/cm3]
 * @param temp temperature [K]
 * @returns rate [erg/cm3/s]
 */
export function cool(rho: number, temp: number): number {
  return 1e-3 * rho * temp;
}
`,
  'run.mjs': `import { mkdirSync, writeFileSync } from 'node:fs';
const out = process.argv[2];
mkdirSync(out, { recursive: true });
const rows = Array.from({ length: 50 }, (_, i) => [i, 10 + 1000 / (1 + Math.exp((25 - i) / 3))]);
writeFileSync(out + '/profile.csv', 'x[cm],temperature[K]\\n' + rows.map((r) => r.join(',')).join('\\n') + '\\n');
`,
  'manifests/assembly.yaml': `assembly: small
title: A small code
plugged: {cooling: cool}
`,
  'manifests/contracts/cooling-rate.yaml': `contract: cooling-rate
version: 1.0.0
component: cooling
quantities:
  density: {unit: g/cm3, intent: in}
  temperature: {unit: K, intent: in}
  rate: {unit: erg/cm3/s, intent: out}
`,
  'manifests/modules/cool.yaml': `module: cool
component: cooling
version: 1.0.0
source: {language: typescript, files: [src/cool.ts], procedures: [cool]}
offers:
  - contract: cooling-rate ^1
    procedure: cool
    arguments: {density: rho, temperature: temp, rate: result}
`,
  'manifests/cases/front.yaml': `case: front
title: A cooling front
run: node {root}/run.mjs {out}
outputs:
  - file: profile.csv
    along: x
    quantities:
      temperature: {dataset: temperature, unit: K, tolerance: {relative: 1e-6, reason: far above roundoff}}
`,
};

const IDENTITY = {
  GIT_AUTHOR_NAME: 'R. Vale',
  GIT_AUTHOR_EMAIL: 'vale@example.org',
  GIT_COMMITTER_NAME: 'R. Vale',
  GIT_COMMITTER_EMAIL: 'vale@example.org',
};

/** Lays the code, with changes, into a new folder and commits it. */
export function laySmallCode(changes: Readonly<Record<string, string>> = {}): string {
  const root = mkdtempSync(join(tmpdir(), 'mortise-small-'));
  gitIn(root, 'init', '-q', '-b', 'main');
  writeFiles(root, { ...SMALL_CODE, ...changes });
  commitAll(root, 'Begin');
  return root;
}

export function writeFiles(root: string, files: Readonly<Record<string, string>>): void {
  for (const [file, text] of Object.entries(files)) {
    mkdirSync(dirname(join(root, file)), { recursive: true });
    writeFileSync(join(root, file), text);
  }
}

export function commitAll(root: string, message: string): string {
  gitIn(root, 'add', '-A');
  gitIn(root, 'commit', '-q', '-m', message);
  return gitIn(root, 'rev-parse', 'HEAD').trim();
}

export function gitIn(root: string, ...words: readonly string[]): string {
  return execFileSync('git', words, {
    cwd: root,
    encoding: 'utf8',
    env: { ...process.env, ...IDENTITY, GIT_CONFIG_GLOBAL: '/dev/null', GIT_CONFIG_NOSYSTEM: '1' },
  });
}
