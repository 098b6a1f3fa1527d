/** Tiny repositories for the tests of runs: a code of a few lines of JavaScript with two modules, a case, and a history. */
import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, realpathSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { loadManifests } from '../../src/manifests/load-manifests.ts';
import type { ManifestSet } from '../../src/model/manifest.ts';

/** The environment that a test calls with: nothing of the one that runs the tests but where programs are. */
export const CALLER = { PATH: process.env.PATH, HOME: process.env.HOME };

export class TinyCode {
  readonly root: string;

  constructor(files: Readonly<Record<string, string>> = TINY) {
    this.root = realpathSync(mkdtempSync(join(tmpdir(), 'mortise-tiny-')));
    this.git('init', '-q', '-b', 'main');
    this.git('config', 'user.name', 'Ada Tester');
    this.git('config', 'user.email', 'ada@example.org');
    this.git('config', 'commit.gpgsign', 'false');
    this.write(files);
    this.commit('Begin');
  }

  git(...words: string[]): string {
    return execFileSync('git', words, { cwd: this.root, encoding: 'utf8', stdio: ['ignore', 'pipe', 'pipe'] }).trim();
  }

  write(files: Readonly<Record<string, string>>): void {
    for (const [path, text] of Object.entries(files)) {
      mkdirSync(dirname(join(this.root, path)), { recursive: true });
      writeFileSync(join(this.root, path), text);
    }
  }

  /** Commits everything there is. @returns the full commit id */
  commit(subject: string): string {
    this.git('add', '-A');
    this.git('commit', '-q', '--allow-empty', '-m', subject);
    return this.git('rev-parse', 'HEAD');
  }

  manifests(): ManifestSet {
    const names = this.git('ls-files', '-co', '--exclude-standard', 'manifests').split('\n');
    const files = new Map(
      names.filter((name) => name.endsWith('.yaml')).map((name) => [name, readFileSync(join(this.root, name))]),
    );
    const { set, findings } = loadManifests(files);
    if (set.assembly === null) throw new Error(JSON.stringify(findings, null, 1));
    return set;
  }

  get store(): string {
    return join(this.root, '.git', 'mortise');
  }

  remove(): void {
    rmSync(this.root, { recursive: true, force: true, maxRetries: 5 });
  }
}

const MAIN = `
import { mkdirSync, readFileSync, writeFileSync, appendFileSync } from 'node:fs';
const [, , eos, out] = process.argv;
const { pressure } = await import('./' + eos + '.mjs');
const { cooling } = await import('./cooling.mjs');
let text = 'x,pressure,temperature\\n';
for (let i = 0; i < 20; i++) text += i + ',' + pressure(1 + i, 100) + ',' + cooling(1000 / (1 + i)) + '\\n';
writeFileSync(out + '/profile.csv', text);
`;

export const TINY: Readonly<Record<string, string>> = {
  'README.md': 'A tiny code.\n',
  'src/main.mjs': MAIN,
  'src/eos-perfect.mjs': 'export function pressure(rho, t) {\n  return rho * 8.31e7 * t;\n}\n',
  'src/eos-other.mjs': 'export function pressure(rho, t) {\n  return rho * 8.4e7 * t;\n}\n',
  'src/cooling.mjs':
    'export function rate(t) {\n  return 2 * t;\n}\n\nexport function cooling(t) {\n  return rate(t) + 1;\n}\n',
  'manifests/assembly.yaml': `assembly: tiny
plugged: {equation-of-state: eos-perfect, reaction-rates: cooling-fit}
build: {run: "node -e \\"require('fs').cpSync('src','build',{recursive:true})\\"", makes: [build/main.mjs]}
`,
  'manifests/modules/eos-perfect.yaml': `module: eos-perfect
component: equation-of-state
version: 1.0.0
source: {language: javascript, files: [src/eos-perfect.mjs]}
select: {EOS: eos-perfect}
`,
  'manifests/modules/eos-other.yaml': `module: eos-other
component: equation-of-state
version: 1.0.0
source: {language: javascript, files: [src/eos-other.mjs]}
select: {EOS: eos-other}
`,
  'manifests/modules/cooling-fit.yaml': `module: cooling-fit
component: reaction-rates
version: 1.0.0
source: {language: javascript, files: [src/cooling.mjs]}
`,
  'manifests/cases/shock.yaml': `case: shock
run: node build/main.mjs {select.EOS} {out}
outputs:
  - file: profile.csv
    along: x
    quantities:
      pressure: {dataset: pressure, unit: dyn/cm2, tolerance: {relative: 1e-3}}
      temperature: {dataset: temperature, unit: K, tolerance: {relative: 1e-3}}
features:
  peak-pressure: {of: pressure, take: maximum, tolerance: {relative: 1e-3}}
footprint: {temperature: temperature}
`,
};
