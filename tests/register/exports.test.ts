import { describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { exportEntry } from '../../src/register/exports/export-entry.ts';
import { provJson } from '../../src/register/exports/prov-json.ts';
import { roCrate } from '../../src/register/exports/ro-crate.ts';
import checks from '../checks/metadata.json' with { type: 'json' };
import { sampleContent, standing } from './sample-entry.ts';

const entry = standing();
const fact = (id: string) =>
  (checks as unknown as { id: string; expected: Record<string, string> }[]).find((one) => one.id === id)!.expected;

describe('RO-Crate', () => {
  const { '@context': context, '@graph': graph } = roCrate(entry);
  const byId = new Map(graph.map((one) => [one['@id'], one]));

  it('has a descriptor that conforms to the specification and is about the root', () => {
    // RO-Crate Metadata Specification 1.1 and 1.2, Root Data Entity (tests/checks/metadata.json)
    const { file } = fact('meta-rocrate-filename');
    expect(byId.get(file!)).toMatchObject({
      '@type': fact('meta-rocrate-descriptor')['@type'],
      about: { '@id': './' },
      conformsTo: { '@id': 'https://w3id.org/ro/crate/1.2' },
    });
    expect(context).toBe('https://w3id.org/ro/crate/1.2/context');
  });

  it('has a root with every property that a valid one needs', () => {
    // RO-Crate Metadata Specification 1.1, Root Data Entity: name, description, datePublished, license.
    const root = byId.get('./')!;
    for (const property of ['name', 'description', 'datePublished', 'license'])
      expect(root[property], property).toBeTruthy();
  });

  it('is one flat graph without two entities of one id, in which every reference is met', () => {
    expect(byId.size).toBe(graph.length);
    const refs = JSON.stringify(graph.slice(1)).matchAll(/\{"@id":"([^"]+)"\}/g);
    for (const [, id] of refs) expect(byId.has(id!), id).toBe(true);
  });

  it('describes files with their digest and the run with instrument, object and result', () => {
    // sha256 is a term of the 1.2 context; CreateAction as in "Software used to create files".
    expect(byId.get('profile.csv')).toMatchObject({ '@type': 'File', sha256: 'c'.repeat(64) });
    const action = graph.find((one) => one['@type'] === 'CreateAction')!;
    for (const part of ['instrument', 'object', 'result'])
      expect((action[part] as unknown[]).length, part).toBeGreaterThan(0);
    expect(byId.get('#module-eos')).toMatchObject({ '@type': 'SoftwareApplication', version: '2.0.3' });
  });

  it('names people by their ORCID iD where it is known', () => {
    expect(byId.get('https://orcid.org/0000-0002-1825-0097')).toMatchObject({ '@type': 'Person' });
  });
});

describe('PROV-JSON', () => {
  const document = provJson(entry);

  it('has the top-level keys of the serialization', () => {
    expect(Object.keys(document)).toEqual(fact('meta-prov-json-keys').keys);
  });

  it('relates only things that are there, each end of the kind that PROV-DM asks for', () => {
    const kinds: Record<string, object> = {
      Entity: document.entity,
      Activity: document.activity,
      Agent: document.agent,
    };
    const ends = fact('meta-prov-core-relations') as unknown as Record<string, [string, string]>;
    let checked = 0;
    for (const name of ['used', 'wasGeneratedBy', 'wasDerivedFrom', 'wasAssociatedWith', 'wasAttributedTo'] as const) {
      for (const relation of Object.values(document[name])) {
        const [from, to] = Object.values(relation) as [string, string];
        expect(Object.keys(kinds[ends[name]![0]]!), name).toContain(from);
        expect(Object.keys(kinds[ends[name]![1]]!), name).toContain(to);
        checked++;
      }
    }
    expect(checked).toBeGreaterThan(8);
  });

  it('declares every prefix that it uses', () => {
    for (const id of [
      ...Object.keys(document.entity),
      ...Object.keys(document.activity),
      ...Object.keys(document.agent),
    ]) {
      expect(Object.keys(document.prefix)).toContain(id.split(':')[0]);
    }
  });
});

describe('the other forms', () => {
  it('cites with family and given names, DOI and ORCID iD', () => {
    expect(parse(exportEntry(entry, 'citation')).references[0]).toMatchObject({
      type: 'article',
      doi: '10.1000/182',
      authors: [
        { 'family-names': 'Carberry', 'given-names': 'Josiah', orcid: 'https://orcid.org/0000-0002-1825-0097' },
        {},
      ],
    });
  });

  it('escapes what BibTeX would take for a command', () => {
    const text = exportEntry(entry, 'bibtex');
    expect(text).toContain('Ada Example \\& Sons');
    expect(text).toMatch(/^@misc\{2024-05-06-front,/);
    expect((text.match(/\{/g) ?? []).length).toBe((text.match(/\}/g) ?? []).length);
  });

  it('quotes in CSV as RFC 4180 says, and hands a spreadsheet no formula', () => {
    const tricky = standing({ ...sampleContent, result: { title: 'a "b", c' }, notes: '=SUM(A1)' });
    const text = exportEntry(tricky, 'csv');
    expect(text).toContain('"a ""b"", c"');
    expect(text).toContain("'=SUM(A1)");
    expect(text.split('\r\n')).toHaveLength(3);
  });

  it('gives DataCite its mandatory parts', () => {
    // DataCite Metadata Schema 4.5: identifier aside (it is given on registration), creator, title, publisher, year, type.
    const value = JSON.parse(exportEntry(entry, 'datacite'));
    for (const part of ['creators', 'titles', 'publisher', 'publicationYear', 'types'])
      expect(value[part], part).toBeTruthy();
    expect(value.publicationYear).toBe(2024);
  });
});
