import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, realpathSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { command } from '../../src/commands/check.ts';
import type { Surroundings } from '../../src/commands/command.ts';
import { SOUND } from '../manifests/manifest-text.ts';

const EOS = `subroutine eos_ionising(rho, temp, pres, eint)
  implicit none
  real(8), intent(in) :: rho   ! density [g/cm3]
  real(8), intent(in) :: temp  ! temperature [K]
  real(8), intent(out) :: pres ! pressure [dyn/cm2]
  real(8), intent(out) :: eint ! specific internal energy [erg/g]
  pres = rho * temp
  eint = temp
end subroutine eos_ionising
`;
const HYDRO = `subroutine step(rho, temp)
  implicit none
  real(8), intent(in) :: rho, temp
  real(8) :: pres, eint
  call eos_ionising(rho, temp, pres, eint)
end subroutine step
`;

let root: string;
beforeEach(() => {
  root = realpathSync(mkdtempSync(join(tmpdir(), 'check-')));
  for (const [path, text] of Object.entries(SOUND)) put(path, text);
  put(
    'manifests/modules/hydro.yaml',
    SOUND['manifests/modules/hydro.yaml']!.replace('typescript', 'fortran').replace('hydro.ts', 'hydro.f90'),
  );
  put('src/eos/ionising.f90', EOS);
  put('src/hydro.f90', HYDRO);
});
afterEach(() => rmSync(root, { recursive: true }));

function put(path: string, text: string): void {
  mkdirSync(dirname(join(root, path)), { recursive: true });
  writeFileSync(join(root, path), text);
}

function git(...words: string[]): string {
  return execFileSync('git', ['-c', 'user.name=T', '-c', 'user.email=t@example.org', ...words], {
    cwd: root,
    encoding: 'utf8',
  }).trim();
}

async function check(options: Record<string, string | boolean> = {}, cwd = root) {
  let out = '';
  const surroundings: Surroundings = {
    cwd,
    env: {},
    stdin: process.stdin,
    stdoutIsTerminal: false,
    columns: 100,
    out: (text) => {
      out += text;
    },
    err: (text) => {
      out += text;
    },
    signal: new AbortController().signal,
  };
  const status = await command.run({ words: [], options }, surroundings);
  return { status, out };
}

describe('mortise check', () => {
  it('lists the joints of a code that fits and ends with status 0', async () => {
    expect(await check({}, join(root, 'src/eos'))).toEqual({
      status: 0,
      out: `cloud (work tree): 2 modules plugged in, 1 joint

  expects      contract         offers              outcome
  hydro 1.0.0  gas-state 1.2.0  eos-ionising 2.1.0  fits

no stop, caution or note
`,
    });
  });

  it('finds arguments that were reordered in the source and left in the caller, and ends with status 1', async () => {
    put('src/eos/ionising.f90', EOS.replace('(rho, temp, pres', '(temp, rho, pres'));
    const { status, out } = await check();
    expect(status).toBe(1);
    expect(out).toContain('src/hydro.f90:5:3  stop  joint-order  hydro\n');
    expect(out).toContain(
      'hydro passes density, temperature, pressure, internal-energy; eos_ionising of eos-ionising takes',
    );
  });

  it('finds a unit in a comment that contradicts the manifest', async () => {
    put('src/eos/ionising.f90', EOS.replace('[erg/g]', '[J/kg]'));
    const { status, out } = await check();
    expect(status).toBe(0);
    expect(out).toContain('caution  claim-contradicts  eos-ionising');
    expect(out).toContain('src/eos/ionising.f90:6:');
  });

  it('reads the manifests and the source at a revision, straight from git', async () => {
    git('init', '-q', '-b', 'main');
    git('add', '.');
    git('commit', '-q', '-m', 'Fits');
    put('src/eos/ionising.f90', EOS.replace('(rho, temp, pres', '(temp, rho, pres'));
    put('manifests/assembly.yaml', 'assembly: [\n');
    expect((await check()).status).toBe(2);
    const then = await check({ at: 'HEAD' });
    expect(then.status).toBe(0);
    expect(then.out).toContain(`cloud (${git('rev-parse', 'HEAD').slice(0, 10)}): 2 modules`);
  });

  it('ends with status 2 and every error when a manifest could not be read', async () => {
    put('manifests/modules/hydro.yaml', 'module: hydro\nversoin: 1\n');
    const { status, out } = await check();
    expect(status).toBe(2);
    expect(out).toContain('A module has no key "versoin".');
  });

  it('says what to do where there is no assembly', async () => {
    const { status, out } = await check({ assembly: 'nowhere.yaml' });
    expect(status).toBe(2);
    expect(out).toContain('nowhere.yaml:1:1  stop  manifest-absent');
    expect(out).toContain('write manifests with');
  });

  it('spells adapters out, with their source text when asked', async () => {
    put(
      'manifests/modules/eos-ionising.yaml',
      SOUND['manifests/modules/eos-ionising.yaml']!.replace('internal-energy: erg/g', 'internal-energy: J/kg'),
    );
    put('src/eos/ionising.f90', EOS.replace('[erg/g]', '[J/kg]'));
    const { status, out } = await check({ adapters: true });
    expect(status).toBe(1);
    expect(out).toContain('adapter from hydro to eos_ionising of eos-ionising\n  internal-energy: multiply by 1e-4');
    expect(out).toContain('    internal_energy = own_internal_energy / 0.0001d0');
  });

  it('reads modules written in TypeScript, with what comes out in the fields of a result', async () => {
    const eos = (unit: string) => `/** State of the gas. */
export interface GasState {
  /** Pressure [dyn/cm2]. */
  pres: number;
  /** Specific internal energy [${unit}]. */
  eint: number;
}
export function eos_ionising(rho: number, temp: number): GasState {
  return { pres: rho * temp, eint: temp };
}
`;
    const module = SOUND['manifests/modules/eos-ionising.yaml']!;
    put(
      'manifests/modules/eos-ionising.yaml',
      module.replace('fortran', 'typescript').replace('ionising.f90', 'ionising.ts'),
    );
    put('manifests/modules/hydro.yaml', SOUND['manifests/modules/hydro.yaml']!);
    put('src/eos/ionising.ts', eos('erg/g'));
    put(
      'src/hydro.ts',
      "import { eos_ionising } from './eos/ionising.ts';\nexport const step = (rho: number, temp: number) => eos_ionising(rho, temp).pres;\n",
    );
    expect((await check()).out).toContain('no stop, caution or note');
    put('src/eos/ionising.ts', eos('J/kg'));
    expect((await check()).out).toContain('src/eos/ionising.ts:5:');
    put('src/eos/ionising.ts', eos('erg/g'));
    put(
      'src/hydro.ts',
      "import { eos_ionising } from './eos/ionising.ts';\nexport const step = (rho: number, temp: number) => eos_ionising(temp, rho).pres;\n",
    );
    const { status, out } = await check();
    expect(status).toBe(1);
    expect(out).toContain('stop  joint-order  hydro');
  });

  it('prints one JSON document', async () => {
    const { out } = await check({ json: true });
    const document = JSON.parse(out);
    expect(document).toMatchObject({ document: 'mortise check', assembly: 'cloud', revision: null, findings: [] });
    expect(document.joints[0].rows[0]).toMatchObject({
      quantity: 'density',
      state: 'fits',
      offering: { unit: 'g/cm3', carrier: { name: 'rho', position: 1, bytes: 8, intent: 'in' } },
    });
  });
});
