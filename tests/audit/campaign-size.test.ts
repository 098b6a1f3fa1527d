import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bytesText, campaignDemands, campaignFindings, campaignSize } from '../../src/audit/campaign-size.ts';
import { loadManifests } from '../../src/manifests/load-manifests.ts';
import type { Campaign } from '../../src/model/manifest.ts';

const BOLTZMANN: Campaign = {
  grid: [1000, 1000, 1000],
  species: 4,
  'energy-bins': 20,
  directions: 100,
  steps: 1000,
};

function assembly(campaign: string) {
  const text = `assembly: star\nplugged: {hydrodynamics: hydro}\ncampaign:\n${campaign}`;
  const { set } = loadManifests(new Map([['manifests/assembly.yaml', new TextEncoder().encode(text)]]));
  return set.assembly!;
}

describe('the size of a campaign', () => {
  it('is 64 TB for 1000^3 zones, 20 energy bins, 100 directions, 4 species and 8 bytes (common practice)', () => {
    const size = campaignSize(BOLTZMANN);
    expect(size.stateBytes).toBe(64e12);
    expect(bytesText(size.stateBytes)).toBe('64 TB');
  });

  it('counts the fields of a zone beside those by species, bin and direction, and one value where none is given', () => {
    expect(campaignSize({ ...BOLTZMANN, fields: 6 }).valuesPerZone).toBe(8006);
    expect(campaignSize({ grid: [10], fields: 6, steps: 1 }).valuesPerZone).toBe(6);
    expect(campaignSize({ grid: [10], steps: 1 }).valuesPerZone).toBe(1);
  });

  it('holds every copy of the state in memory, and writes the first state and every n-th', () => {
    const size = campaignSize({
      grid: [100],
      fields: 5,
      'bytes-per-value': 4,
      copies: 3,
      steps: 1000,
      'output-every': 100,
    });
    expect(size.memoryBytes).toBe(6000);
    expect(size.outputs).toBe(11);
    expect(size.storageBytes).toBe(22_000);
    expect(campaignSize({ grid: [100], steps: 10 }).storageBytes).toBe(0);
  });

  it('takes its cost from what is declared, or from the measured run over its zones and steps', () => {
    const declared: Campaign = { grid: [3600], steps: 100, cost: { 'core-seconds-per-zone-step': 0.01 } };
    expect(campaignSize(declared).coreHours).toBeCloseTo(1, 12);
    const measured: Campaign = { grid: [3600], steps: 100, cost: { 'measured-by': 'tube', zones: 100, steps: 50 } };
    expect(campaignSize(measured, { coreSeconds: 10 }).coreHours).toBeCloseTo((3600 * 100 * (10 / 5000)) / 3600, 12);
    expect(campaignSize(measured).coreHours).toBeNull();
  });

  it('grows with each of its parts and never shrinks', () => {
    const part = fc.integer({ min: 1, max: 500 });
    fc.assert(
      fc.property(part, part, part, part, part, part, (zones, fields, species, bins, copies, steps) => {
        const campaign: Campaign = {
          grid: [zones, 7],
          fields,
          species,
          'energy-bins': bins,
          copies,
          steps,
          'output-every': 3,
        };
        const size = campaignSize(campaign);
        for (const key of ['fields', 'species', 'energy-bins', 'copies', 'steps'] as const) {
          const more = campaignSize({ ...campaign, [key]: campaign[key]! + 3 });
          expect(more.memoryBytes).toBeGreaterThanOrEqual(size.memoryBytes);
          expect(more.storageBytes).toBeGreaterThanOrEqual(size.storageBytes);
        }
      }),
    );
  });
});

describe('an allocation', () => {
  it('that is too small is a stop at its line, with the reckoning', () => {
    const declared = assembly(`  grid: [1000, 1000, 1000]
  species: 4
  energy-bins: 20
  directions: 100
  copies: 2
  steps: 10000
  output-every: 1000
  cost: {core-seconds-per-zone-step: 1e-4}
  allocation: {core-hours: 1e5, memory-bytes: 100e12, storage-bytes: 1e15}
`);
    const findings = campaignFindings(declared);
    expect(findings.map((one) => [one.gravity, one.place.line, one.place.column, one.says])).toEqual([
      ['stop', 12, 47, 'The campaign asks for 128 TB of memory; 100 TB were granted.'],
      ['stop', 12, 28, 'The campaign asks for 278,000 core-hours; 100,000 core-hours were granted.'],
    ]);
    expect(findings[0]!.evidence[1]!.says).toBe(
      '1000 x 1000 x 1000 zones x 8000 values x 8 bytes = 64 TB, times 2 copies',
    );
    const demands = campaignDemands(declared.value.campaign!, campaignSize(declared.value.campaign!));
    expect(demands.map((one) => [one.what, one.over])).toEqual([
      ['memory', true],
      ['storage', false],
      ['core-hours', true],
    ]);
  });

  it('that is just met is no finding', () => {
    expect(campaignFindings(assembly('  grid: [125]\n  steps: 1\n  allocation: {memory-bytes: 1000}\n'))).toEqual([]);
  });

  it('of core-hours without a cost is a caution', () => {
    const findings = campaignFindings(assembly('  grid: [8]\n  steps: 1\n  allocation: {core-hours: 10}\n'));
    expect(findings.map((one) => [one.gravity, one.kind])).toEqual([['caution', 'campaign-cost-unknown']]);
  });
});

describe('bytes as text', () => {
  it.each([
    [0, '0 bytes'],
    [999, '999 bytes'],
    [1000, '1 kB'],
    [64e12, '64 TB'],
    [1.2345e18, '1.23 EB'],
    [1e30, '1000000 YB'],
  ])('is decimal: %d is %s', (bytes, text) => expect(bytesText(bytes)).toBe(text));
});
