import { describe, expect, it } from 'vitest';
import { canonicalOrcid, orcidCheckCharacter, readArxiv, readDoi, sameDoi } from '../../src/register/identifiers.ts';
import checks from '../checks/identifiers.json' with { type: 'json' };

interface Check {
  id: string;
  what: string;
  source: string;
  inputs: { orcid?: string; string?: string; doi?: string };
  expected: { valid?: boolean; canonical?: string | null; check?: string; prefix?: string; suffix?: string };
}
const all = checks as unknown as Check[];

describe('ORCID iD', () => {
  // ORCID documentation, Structure of the ORCID Identifier (ISO/IEC 7064:2003 MOD 11-2); each entry names its own source.
  for (const { id, what, inputs, expected } of all.filter((one) => one.inputs.orcid !== undefined)) {
    it(`${inputs.orcid}: ${what} (${id})`, () => {
      expect(canonicalOrcid(inputs.orcid!) !== null).toBe(expected.valid);
      if (expected.check !== undefined) {
        expect(orcidCheckCharacter(inputs.orcid!.replaceAll('-', '').slice(0, 15))).toBe(expected.check);
      }
    });
  }
  for (const { id, what, inputs, expected } of all.filter((one) => one.inputs.string !== undefined)) {
    it(`"${inputs.string}": ${what} (${id})`, () => {
      expect(canonicalOrcid(inputs.string!)).toBe(expected.canonical);
    });
  }
  it('checks every form and digit that the published examples have', () => {
    expect(all.filter((one) => one.inputs.orcid !== undefined).length).toBeGreaterThanOrEqual(9);
  });
});

describe('DOI', () => {
  // DOI Handbook, Numbering (ISO 26324); each entry names its own source.
  for (const { id, what, inputs, expected } of all.filter((one) => one.inputs.doi !== undefined)) {
    it(`${inputs.doi}: ${what} (${id})`, () => {
      const doi = readDoi(inputs.doi!);
      expect(doi !== null).toBe(expected.valid);
      if (doi !== null) expect([doi.prefix, doi.suffix]).toEqual([expected.prefix, expected.suffix]);
    });
  }
  it('is the same whatever the case of its letters, as the DOI Handbook says of 10.123/ABC and 10.123/AbC', () => {
    expect(sameDoi('10.123/ABC', '10.123/AbC')).toBe(true);
    expect(sameDoi('10.123/ABC', '10.123/ABD')).toBe(false);
  });
  it.each(['https://doi.org/10.1000/182', 'http://dx.doi.org/10.1000/182', 'doi:10.1000/182', '10.1000/182'])(
    'is read from %s',
    (text) => {
      expect(readDoi(text)?.link).toBe('https://doi.org/10.1000/182');
    },
  );
});

describe('arXiv identifier', () => {
  // Forms from memory of the arXiv identifier scheme.
  it.each([
    ['arXiv:2103.01234v2', '2103.01234v2'],
    ['astro-ph/9901001', 'astro-ph/9901001'],
    ['https://arxiv.org/abs/0704.0001', '0704.0001'],
    ['21031234', null],
  ])('%s is read as %s', (text, expected) => {
    expect(readArxiv(text)).toBe(expected);
  });
});
