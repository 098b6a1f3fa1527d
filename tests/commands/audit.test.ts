import { readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { mortise } from '../support/run-mortise.ts';
import { commitAll, laySmallCode, SMALL_CODE, writeFiles } from '../support/small-code.ts';

const roots: string[] = [];
function lay(changes: Readonly<Record<string, string>> = {}): string {
  const root = laySmallCode(changes);
  roots.push(root);
  return root;
}
afterAll(() => {
  for (const root of roots) rmSync(root, { recursive: true, force: true });
});

async function recorded(): Promise<string> {
  const root = lay();
  expect((await mortise(root, 'rerun', '--record', '--reason', 'looked at by eye')).status).toBe(0);
  commitAll(root, 'Record the front');
  return root;
}

const kinds = (out: string): string[] => JSON.parse(out).findings.map((one: { kind: string }) => one.kind);

describe('mortise audit', () => {
  it('clears a code whose case agrees with its reference, and the gate opens for it and for nothing else', async () => {
    const root = await recorded();
    const audited = await mortise(root, 'audit', '--clearance', '../clearance.json', '--json');
    expect(JSON.parse(audited.out)).toMatchObject({ outcome: 'cleared', command: 'audit' });
    expect(audited.status).toBe(0);
    const clearance = join(root, '..', 'clearance.json');
    expect((await mortise(root, 'audit', '--verify', clearance)).status).toBe(0);
    expect((await mortise(root, 'audit', '--gate', clearance)).status).toBe(0);
    writeFiles(root, { 'run.mjs': `${SMALL_CODE['run.mjs']}// changed\n` });
    const shut = await mortise(root, 'audit', '--gate', clearance);
    expect(shut.status).toBe(1);
    expect(shut.out).toContain('run.mjs');
    commitAll(root, 'Change');
    expect((await mortise(root, 'audit', '--gate', clearance)).out).toContain('contents differ');
    writeFiles(root, { '../clearance.json': readFileSync(clearance, 'utf8').replace('"cleared"', '"held"') });
    expect((await mortise(root, 'audit', '--verify', clearance)).status).toBe(1);
    rmSync(clearance);
  });

  it('holds a code whose result moved, and says by how much and where', async () => {
    const root = await recorded();
    writeFiles(root, { 'run.mjs': SMALL_CODE['run.mjs']!.replace('1000 /', '1001 /') });
    commitAll(root, 'Heat a little more');
    const { status, out } = await mortise(root, 'audit');
    expect(status).toBe(1);
    expect(out).toMatch(/stop {2}result-beyond-tolerance/);
    expect(out).toMatch(/temperature of case front is \d+(\.\d+)? times its tolerance/);
    expect(out).toMatch(/worst at \d+ cm/);
    expect(out.trimEnd().split('\n').at(-1)).toMatch(/^held: /);
  });

  it('holds a code that is not committed', async () => {
    const root = await recorded();
    writeFiles(root, { 'src/cool.ts': SMALL_CODE['src/cool.ts']!.replace('1e-3', '2e-3') });
    const { status, out } = await mortise(root, 'audit', '--json');
    expect(status).toBe(1);
    expect(kinds(out)).toContain('tree-dirty');
  });

  it('has a case without a reference as a caution, and can be told to accept it', async () => {
    const root = lay();
    const before = await mortise(root, 'audit', '--json');
    expect(JSON.parse(before.out).outcome).toBe('cleared with cautions');
    expect(before.status).toBe(0);
    writeFiles(root, {
      'manifests/accepted.yaml':
        'accepted:\n  - finding: never-validated\n    reason: first campaign of a new code\n    by: R. Vale\n',
    });
    commitAll(root, 'Accept');
    const after = JSON.parse((await mortise(root, 'audit', '--json')).out);
    expect(after.outcome).toBe('cleared');
    expect(after.accepted).toHaveLength(1);
  });

  it('answers unreadable manifests with status 2, every one of them', async () => {
    const root = lay({ 'manifests/cases/front.yaml': 'case: front\n\trun: x\n' });
    expect((await mortise(root, 'audit')).status).toBe(2);
  });

  it('writes the report in every form that a suffix names, and refuses one that none does before running anything', async () => {
    const root = await recorded();
    const files = ['report.txt', 'report.json', 'report.md', 'report.html', 'report.xml', 'report.sarif'];
    expect((await mortise(root, 'audit', ...files.flatMap((file) => ['--report', file]))).status).toBe(0);
    for (const file of files) expect(readFileSync(join(root, file), 'utf8').length, file).toBeGreaterThan(200);
    expect((await mortise(root, 'audit', '--report', 'report.docx')).err).toContain('the suffix tells the form');
  });
});
