import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { demoFolder, layDemo } from '../../src/commands/demo/demo-repository.edge.ts';
import type { Finding } from '../../src/model/finding.ts';
import { mortise } from '../support/run-mortise.ts';
import { hasTool } from '../support/tools.ts';

interface Told {
  readonly kind: string;
  readonly module?: string;
  readonly says?: string;
}
interface Planted {
  readonly step: string;
  readonly tells: Told;
  readonly follows?: readonly Told[];
}

const { planted } = parse(readFileSync(join(demoFolder, 'planted.yaml'), 'utf8')) as { planted: Planted[] };
const scratch = mkdtempSync(join(tmpdir(), 'mortise-demo-'));
const code = join(scratch, 'code');
let commits: ReadonlyMap<string, string>;
let findings: Finding[];
let outcome: string;

beforeAll(async () => {
  commits = layDemo(code).commits;
  const { out, status } = await mortise(code, 'audit', '--json');
  const report = JSON.parse(out);
  findings = report.findings;
  outcome = report.outcome;
  expect(status).toBe(1);
}, 120_000);
afterAll(() => rmSync(scratch, { recursive: true, force: true }));

const isTold = (finding: Finding, told: Told) =>
  finding.kind === told.kind &&
  (told.module === undefined || finding.module === told.module) &&
  (told.says === undefined || finding.says.includes(told.says)) &&
  // `temperature of …` is not meant by `peak-temperature of …`.
  (told.says === undefined || !/of case/.test(told.says) || finding.says.startsWith(told.says));

/** Where a tool is missing its case can not move; the case says so itself. */
const withoutFortran = (told: Told) => !hasTool('gfortran') && (told.says?.includes('dust-curve') ?? false);

describe('the demo', () => {
  it('has some forty commits, with a branch and its merge', () => {
    const count = execFileSync('git', ['rev-list', '--count', 'main'], { cwd: code, encoding: 'utf8' });
    expect(Number(count)).toBeGreaterThanOrEqual(36);
    expect(execFileSync('git', ['rev-list', '--merges', 'main'], { cwd: code, encoding: 'utf8' }).trim()).not.toBe('');
  });

  it('is laid with the same commit ids everywhere and every time', () => {
    expect(layDemo(join(scratch, 'again')).commits).toEqual(commits);
  });

  it('is held', () => {
    expect(outcome).toBe('held');
  });

  for (const { step, tells, follows = [] } of planted) {
    it(`tells the mistake planted at ${step} by ${tells.kind}${tells.kind.startsWith('drift') || /renewed|widened/.test(tells.kind) ? ', at its own commit' : ''}`, () => {
      const found = findings.filter((finding) => isTold(finding, tells));
      expect(found, JSON.stringify(tells)).toHaveLength(1);
      const { revision } = found[0]!.place;
      if (revision !== undefined) expect(revision).toBe(commits.get(step));
      if (tells.kind === 'drift-undeclared') expect(revision).toBeDefined();
      for (const told of follows) {
        if (withoutFortran(told)) continue;
        expect(
          findings.filter((finding) => isTold(finding, told)),
          JSON.stringify(told),
        ).toHaveLength(1);
      }
    });
  }

  it('has nothing else told of it', () => {
    const known = planted.flatMap((one) => [one.tells, ...(one.follows ?? [])]);
    const machine = new Set(['platform-differs', ...(hasTool('gfortran') ? [] : ['case-not-runnable'])]);
    const others = findings.filter(
      (finding) => !machine.has(finding.kind) && !known.some((told) => isTold(finding, told)),
    );
    expect(others.map((finding) => `${finding.kind} ${finding.module ?? ''} ${finding.says}`)).toEqual([]);
  });
});
