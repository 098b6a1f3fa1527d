/** Manifests for tests: a small sound code, of which each test spoils one file. */
import { type LoadOptions, loadManifests } from '../../src/manifests/load-manifests.ts';

export function bytes(text: string): Uint8Array {
  return new TextEncoder().encode(text);
}

export const SOUND: Readonly<Record<string, string>> = {
  'manifests/assembly.yaml': `assembly: cloud
plugged:
  equation-of-state: eos-ionising
  hydrodynamics: hydro
`,
  'manifests/modules/eos-ionising.yaml': `module: eos-ionising
title: Partly ionised hydrogen, Saha equilibrium
component: equation-of-state
version: 2.1.0
source: {language: fortran, files: [src/eos/ionising.f90], procedures: [eos_ionising]}
offers:
  - contract: gas-state ^1.2
    procedure: eos_ionising
    arguments: {density: rho, temperature: temp, pressure: pres, internal-energy: eint}
    units: {internal-energy: erg/g}
    conventions: {energy-zero: neutral-atom}
    domain: {density: [1e-26, 1e-14], temperature: [10, 1e8]}
select: {EOS: ionising}
`,
  'manifests/modules/hydro.yaml': `module: hydro
component: hydrodynamics
version: 1.0.0
source: {language: typescript, files: [src/hydro.ts]}
expects:
  - contract: gas-state ^1
    domain: {density: [1e-25, 1e-18], temperature: [10, 1e7]}
`,
  'manifests/contracts/gas-state.yaml': `contract: gas-state
version: 1.2.0
component: equation-of-state
quantities:
  density:         {unit: g/cm3,   intent: in,  domain: [1e-28, 1e-10]}
  temperature:     {unit: K,       intent: in,  domain: [3, 1e9]}
  pressure:        {unit: dyn/cm2, intent: out, positive: true}
  internal-energy: {unit: erg/g,   intent: out, conventions: {energy-zero: [neutral-atom, ionised]}}
identities: [first-law, maxwell, causal-sound-speed]
`,
  'manifests/cases/cloud-shock.yaml': `case: cloud-shock
run: node build/run.js --eos {select.EOS} --out {out}
outputs:
  - file: profile.h5
    along: /x
    quantities:
      temperature: {dataset: /temperature, unit: K, tolerance: {relative: 1e-6, norm: L2}}
      mass: {dataset: /mass, unit: g, tolerance: {relative: 1e-12}}
features:
  peak-temperature: {of: temperature, take: maximum, tolerance: {relative: 1e-4}}
conserved: [mass]
`,
};

/** Loads the sound manifests with some of them replaced, added, or (null) removed. */
export function load(changed: Readonly<Record<string, string | Uint8Array | null>> = {}, options: LoadOptions = {}) {
  const files = new Map<string, Uint8Array>();
  for (const [path, content] of Object.entries({ ...SOUND, ...changed })) {
    if (content !== null) files.set(path, typeof content === 'string' ? bytes(content) : content);
  }
  return loadManifests(files, options);
}

/** One line a finding: `file:line:column kind`. */
export function lines(findings: ReturnType<typeof loadManifests>['findings']): string[] {
  return findings.map(
    ({ place, kind }) => `${place.file.replace('manifests/', '')}:${place.line}:${place.column} ${kind}`,
  );
}
