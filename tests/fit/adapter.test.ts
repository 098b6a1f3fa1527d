import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { transform } from 'esbuild';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { adapterSource, canWriteAdapter, stepText, toExpected, toOffered } from '../../src/fit/adapter.ts';
import { conventionFactor } from '../../src/fit/convention-factor.ts';
import type { Adapter, AdapterStep } from '../../src/fit/joint.ts';
import { describeWith } from '../support/tools.ts';

function step(quantity: string, more: Partial<AdapterStep> = {}): AdapterStep {
  return {
    quantity,
    intent: 'in',
    rank: 0,
    bytes: 8,
    expectedPosition: 1,
    offeredPosition: 1,
    name: quantity,
    factor: 1,
    offset: 0,
    expectedUnit: '1',
    offeredUnit: '1',
    why: '',
    ...more,
  };
}

/** Temperature in degrees Celsius and density exchanged, energy in another unit, an error code passed on. */
const ADAPTER: Adapter = {
  contract: 'gas-state',
  contractVersion: '1.2.0',
  expecting: 'hydro',
  offering: 'eos-ionising',
  procedure: 'eos',
  parent: null,
  file: 'src/eos.f90',
  language: 'fortran',
  steps: [
    step('density', {
      expectedPosition: 2,
      offeredPosition: 1,
      expectedUnit: 'kg/m3',
      offeredUnit: 'g/cm3',
      factor: 1e-3,
      why: 'kg/m3 to g/cm3, another place',
    }),
    step('temperature', {
      expectedPosition: 1,
      offeredPosition: 2,
      expectedUnit: 'degC',
      offeredUnit: 'K',
      offset: 273.15,
      why: 'degC to K, another place',
    }),
    step('pressure', { intent: 'out', expectedPosition: 3, offeredPosition: 3 }),
    step('internal-energy', {
      intent: 'out',
      expectedPosition: 4,
      offeredPosition: 4,
      expectedUnit: 'J/kg',
      offeredUnit: 'erg/g',
      factor: 1e4,
      why: 'J/kg to erg/g',
    }),
  ],
  besides: [{ name: 'ierr', position: 5, type: 'integer' }],
};

describe('an adapter', () => {
  it('applied both ways gives every value back, to roundoff', () => {
    // Numbers so small that they lose digits of their own are no business of an adapter.
    const tiny = 1e-270;
    const factor = fc.oneof(fc.double({ min: 1e-30, max: 1e30, noNaN: true }), fc.constant(-1));
    fc.assert(
      fc.property(
        factor,
        fc.double({ min: -1e3, max: 1e3, noNaN: true }),
        fc.double({ min: -1e15, max: 1e15, noNaN: true }),
        (scale, shift, value) => {
          const scaled = step('x', { factor: scale });
          expect(Math.abs(toExpected(scaled, toOffered(scaled, value)) - value)).toBeLessThanOrEqual(
            4e-16 * Math.abs(value) + tiny,
          );
          // An offset costs the digits that it covers.
          const moved = step('x', { factor: 1, offset: shift });
          const most = Math.max(Math.abs(value), Math.abs(shift));
          expect(Math.abs(toExpected(moved, toOffered(moved, value)) - value)).toBeLessThanOrEqual(4e-16 * most + tiny);
        },
      ),
    );
  });

  it('says in words what it does', () => {
    expect(ADAPTER.steps.map(stepText)).toEqual([
      'density: multiply by 1e-3, pass it as argument 1 (kg/m3 to g/cm3, another place)',
      'temperature: add 273.15, pass it as argument 2 (degC to K, another place)',
      'pressure: hand over',
      'internal-energy: multiply by 1e4 (J/kg to erg/g)',
    ]);
  });

  it('is written as Fortran in the order of the expecting side', () => {
    expect(adapterSource(ADAPTER)).toEqual({
      file: 'eos_for_hydro.f90',
      text: `! Joins hydro to eos of eos-ionising, contract gas-state 1.2.0.
! density: kg/m3 to g/cm3, another place
! temperature: degC to K, another place
! internal-energy: J/kg to erg/g
subroutine eos_for_hydro(temperature, density, pressure, internal_energy, ierr)
  implicit none
  real(kind(1.0d0)), intent(in) :: temperature ! degC
  real(kind(1.0d0)), intent(in) :: density ! kg/m3
  real(kind(1.0d0)), intent(out) :: pressure ! 1
  real(kind(1.0d0)), intent(out) :: internal_energy ! J/kg
  integer, intent(inout) :: ierr
  real(kind(1.0d0)) :: own_temperature ! K
  real(kind(1.0d0)) :: own_density ! g/cm3
  real(kind(1.0d0)) :: own_internal_energy ! erg/g
  own_temperature = temperature + 273.15d0
  own_density = density * 0.001d0
  call eos(own_density, own_temperature, pressure, own_internal_energy, ierr)
  internal_energy = own_internal_energy / 10000.0d0
end subroutine eos_for_hydro
`,
    });
  });

  it('is not written in a language that it does not know', () => {
    expect(canWriteAdapter('c')).toBe(false);
    expect(adapterSource({ ...ADAPTER, language: 'c' })).toBeNull();
  });

  it('written as TypeScript runs and converts', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'adapter-'));
    try {
      const source = adapterSource({
        ...ADAPTER,
        language: 'typescript',
        file: 'src/eos.js',
        besides: [],
        steps: [
          ADAPTER.steps[0]!,
          ADAPTER.steps[1]!,
          step('pressure', { intent: 'out', name: 'pressure', offeredPosition: null, expectedPosition: 3 }),
          step('internal-energy', {
            intent: 'out',
            name: 'energy',
            offeredPosition: null,
            expectedPosition: 4,
            factor: 1e4,
            why: 'J/kg to erg/g',
            expectedUnit: 'J/kg',
          }),
        ],
      })!;
      const { code } = await transform(source.text, { loader: 'ts', format: 'esm' });
      writeFileSync(join(folder, 'adapter.mjs'), code.replace('./eos.js', './eos.mjs'));
      writeFileSync(
        join(folder, 'eos.mjs'),
        'export const eos = (rho, temp) => ({ pressure: rho * temp, energy: 5 * temp });',
      );
      const { eosForHydro } = await import(pathToFileURL(join(folder, 'adapter.mjs')).href);
      const result = eosForHydro(26.85, 2000);
      expect(result.pressure).toBeCloseTo(600, 9);
      expect(result.energy).toBeCloseTo(1500 / 1e4, 12);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});

describeWith(['gfortran'], 'an adapter written as Fortran', () => {
  it('compiles without a warning, converts, reorders, and handles scalars, arrays and functions', () => {
    const folder = mkdtempSync(join(tmpdir(), 'adapter-'));
    try {
      const rows: Adapter = {
        ...ADAPTER,
        procedure: 'heat',
        parent: 'heating',
        besides: [],
        steps: [
          step('density', { rank: 1, factor: 1e-3, offeredPosition: 1, expectedPosition: 1 }),
          step('energy', { rank: 1, factor: 1e4, intent: 'inout', offeredPosition: 2, expectedPosition: 2 }),
          step('rate', { rank: 1, factor: -1, intent: 'out', offeredPosition: 3, expectedPosition: 3 }),
        ],
      };
      const result: Adapter = {
        ...ADAPTER,
        procedure: 'opac',
        besides: [],
        steps: [
          step('temperature', { offset: 273.15 }),
          step('opacity', { intent: 'out', offeredPosition: null, expectedPosition: 2, factor: 10 }),
        ],
      };
      writeFileSync(
        join(folder, 'eos.f90'),
        `module heating
contains
  subroutine heat(rho, e, rate)
    real(kind(1.0d0)), intent(in) :: rho(:)
    real(kind(1.0d0)), intent(inout) :: e(:)
    real(kind(1.0d0)), intent(out) :: rate(:)
    rate = rho * 2
    e = e + 1.0d4
  end subroutine
end module
subroutine eos(rho, temp, pres, eint, ierr)
  real(kind(1.0d0)), intent(in) :: rho, temp
  real(kind(1.0d0)), intent(out) :: pres, eint
  integer, intent(inout) :: ierr
  pres = rho * temp
  eint = 5 * temp
  ierr = ierr + 1
end subroutine
real(kind(1.0d0)) function opac(temp)
  real(kind(1.0d0)), intent(in) :: temp
  opac = temp * 10
end function
`,
      );
      for (const one of [ADAPTER, rows, result]) {
        const source = adapterSource(one)!;
        writeFileSync(join(folder, source.file), source.text);
      }
      writeFileSync(
        join(folder, 'main.f90'),
        `program main
  interface
    subroutine heat_for_hydro(density, energy, rate)
      real(kind(1.0d0)), intent(in) :: density(:)
      real(kind(1.0d0)), intent(inout) :: energy(:)
      real(kind(1.0d0)), intent(out) :: rate(:)
    end subroutine
  end interface
  real(kind(1.0d0)) :: pres, eint, energy(2), rate(2), kappa
  integer :: ierr
  ierr = 6
  call eos_for_hydro(26.85d0, 2000.0d0, pres, eint, ierr)
  print '(es24.16)', pres, eint, real(ierr, kind(1.0d0))
  energy = [1.0d0, 2.0d0]
  call heat_for_hydro([1.0d3, 2.0d3], energy, rate)
  print '(es24.16)', energy, rate
  call opac_for_hydro(26.85d0, kappa)
  print '(es24.16)', kappa
end program
`,
      );
      const files = ['eos.f90', 'eos_for_hydro.f90', 'heat_for_hydro.f90', 'opac_for_hydro.f90', 'main.f90'];
      execFileSync('gfortran', ['-std=f2008', '-Wall', '-Werror', ...files, '-o', 'run'], {
        cwd: folder,
        stdio: 'pipe',
      });
      const printed = execFileSync(join(folder, 'run'), { encoding: 'utf8' }).trim().split(/\s+/).map(Number);
      const wanted = [600, 0.15, 7, 2, 3, -2, -4, 300];
      expect(printed.length).toBe(wanted.length);
      for (const [index, value] of wanted.entries()) expect(printed[index]).toBeCloseTo(value, 9);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});

describe('a convention', () => {
  it('of sign is bridged by -1 when there are two choices, a base of logarithm by the logarithm of the bases', () => {
    expect(conventionFactor('flux-sign', ['positive-up', 'positive-down'], 'positive-up', 'positive-down')).toBe(-1);
    expect(conventionFactor('sign', ['a', 'b', 'c'], 'a', 'b')).toBeNull();
    expect(conventionFactor('log-base', ['linear', 'log10', 'ln'], 'ln', 'log10')).toBeCloseTo(1 / Math.LN10, 15);
    expect(conventionFactor('log-base', ['linear', 'log10', 'ln'], 'linear', 'log10')).toBeNull();
  });

  it('of energy zero, mass basis or frame is bridged by no factor', () => {
    expect(conventionFactor('energy-zero', ['neutral-atom', 'ionised'], 'neutral-atom', 'ionised')).toBeNull();
    expect(conventionFactor('frame', ['comoving', 'laboratory'], 'comoving', 'laboratory')).toBeNull();
  });
});
