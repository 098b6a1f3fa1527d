// Records the references of the demo again, after a change of its code or history: replays the history up to each step that
// records, runs the cases there, and keeps what came out under fixtures/demo/recorded/. Needs gfortran for the Fortran case.
import { execFileSync } from 'node:child_process';
import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parse } from 'yaml';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const mortise = join(root, 'dist/mortise.js');
const { steps } = parse(readFileSync(join(root, 'fixtures/demo/history.yaml'), 'utf8'));

for (const [index, step] of steps.entries()) {
  if (step.record === undefined) continue;
  const target = join(root, 'fixtures/demo/recorded', step.id);
  rmSync(target, { recursive: true, force: true });
  const scratch = mkdtempSync(join(tmpdir(), 'mortise-record-'));
  const code = join(scratch, 'code');
  const run = (words, cwd) =>
    execFileSync(process.execPath, [mortise, ...words], { cwd, stdio: ['ignore', 'inherit', 'inherit'] });
  run(['demo', code, '--lay-only', '--until', steps[index - 1].id], scratch);
  for (const name of step.record.cases) {
    run(['rerun', name, '--record', '--reason', 'REASON'], code);
    const from = join(code, 'manifests/references', name);
    cpSync(from, join(target, name), { recursive: true });
    const record = join(target, name, 'record.yaml');
    const text = readFileSync(record, 'utf8')
      .replace(/^reason: .*$/m, () => `reason: ${JSON.stringify(step.record.reason)}`)
      .replace(/^date: .*$/m, () => `date: ${step.date}T12:00:00.000Z`)
      .replace(/^who: .*$/m, () => `who: ${step.author}`);
    writeFileSync(record, text);
  }
  rmSync(scratch, { recursive: true, force: true });
}
