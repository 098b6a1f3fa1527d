import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { mortise } from '../support/run-mortise.ts';

const root = mkdtempSync(join(tmpdir(), 'mortise-draft-'));
afterAll(() => rmSync(root, { recursive: true, force: true }));
const put = (file: string, text: string) => {
  mkdirSync(join(root, file, '..'), { recursive: true });
  writeFileSync(join(root, file), text);
};

put('VERSION', '2.3.1\n');
put(
  'src/eos/ideal.f90',
  'subroutine ideal(rho, temp, pres)\n real(8), intent(in) :: rho ! density [g/cm3]\n real(8), intent(in) :: temp ! temperature [K]\n real(8), intent(out) :: pres\nend subroutine\n',
);
put(
  'src/cooling.ts',
  '/** @param temp temperature [K] */\nexport function cool(temp: number): number {\n  return temp;\n}\n',
);
put('src/words only.txt', 'nothing\n');

describe('mortise draft', () => {
  it('writes a module for each file that offers procedures, with units and the lines they were read from', async () => {
    const { status, out } = await mortise(root, 'draft');
    expect(status).toBe(0);
    expect(out).toContain('3 written');
    const eos = readFileSync(join(root, 'manifests/modules/ideal.yaml'), 'utf8');
    expect(eos).toContain('component: equation-of-state  # guessed from the folder');
    expect(eos).toContain('version: 2.3.1  # from VERSION');
    expect(eos).toMatch(/#\s+rho: real\*8, unit g\/cm3 \(line 2: density \[g\/cm3\]\)/);
    expect(eos).toMatch(/#\s+pres: real\*8, unit unknown/);
    expect(readFileSync(join(root, 'manifests/assembly.yaml'), 'utf8')).toContain('equation-of-state: ideal');
  });

  it('drafts what "mortise check" reads without a stop', async () => {
    const { status, out } = await mortise(root, 'check', '--json');
    expect(JSON.parse(out).findings.filter((one: { gravity: string }) => one.gravity === 'stop')).toEqual([]);
    expect(status).toBe(0);
  });

  it('writes nothing over, and a second run tells what a fresh draft would say otherwise', async () => {
    const file = join(root, 'manifests/modules/ideal.yaml');
    const edited = readFileSync(file, 'utf8').replace('version: 2.3.1', 'version: 3.0.0');
    writeFileSync(file, edited);
    const { out } = await mortise(root, 'draft');
    expect(out).toMatch(/^kept +manifests\/modules\/ideal\.yaml$/m);
    expect(out).toMatch(/^as drafted +manifests\/modules\/cooling\.yaml$/m);
    expect(readFileSync(file, 'utf8')).toBe(edited);
  });
});
