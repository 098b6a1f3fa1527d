/** A data set's metadata for a DOI. @source DataCite Metadata Schema 4.5, mandatory and recommended properties, JSON spelling from memory */
import type { StandingEntry } from '../chain.ts';
import { dayOf, resultText } from '../find.ts';
import { canonicalOrcid, readDoi } from '../identifiers.ts';
import { nameParts } from './citation.ts';

export function datacite(entry: StandingEntry) {
  const { result, people, code, notes, outputs } = entry.content;
  const doi = result.doi === undefined ? null : readDoi(result.doi);
  return {
    types: { resourceTypeGeneral: 'Dataset', resourceType: 'Simulation result' },
    titles: [{ title: resultText(result) }],
    creators: people.map((one) => {
      const parts = nameParts(one.name);
      const orcid = one.orcid === undefined ? null : canonicalOrcid(one.orcid);
      const identified =
        orcid === null
          ? {}
          : {
              nameIdentifiers: [
                { nameIdentifier: orcid, nameIdentifierScheme: 'ORCID', schemeUri: 'https://orcid.org' },
              ],
            };
      return 'name' in parts
        ? { name: parts.name, nameType: 'Organizational', ...identified }
        : {
            name: `${parts['family-names']}, ${parts['given-names']}`,
            nameType: 'Personal',
            givenName: parts['given-names'],
            familyName: parts['family-names'],
            ...identified,
          };
    }),
    publisher: { name: 'unknown' },
    publicationYear: Number(dayOf(entry).slice(0, 4)),
    dates: [{ date: dayOf(entry), dateType: entry.content.dates?.published === undefined ? 'Created' : 'Issued' }],
    relatedIdentifiers: [
      ...(doi === null
        ? []
        : [
            {
              relatedIdentifier: `${doi.prefix}/${doi.suffix}`,
              relatedIdentifierType: 'DOI',
              relationType: 'IsSupplementTo',
            },
          ]),
      ...(result.arxiv === undefined
        ? []
        : [
            {
              relatedIdentifier: `arXiv:${result.arxiv.replace(/^arxiv:/i, '')}`,
              relatedIdentifierType: 'arXiv',
              relationType: 'IsSupplementTo',
            },
          ]),
    ],
    alternateIdentifiers: [
      { alternateIdentifier: entry.id, alternateIdentifierType: 'register entry' },
      { alternateIdentifier: entry.seal, alternateIdentifierType: 'seal' },
      ...code.flatMap((one) =>
        one.swhid === undefined ? [] : [{ alternateIdentifier: one.swhid, alternateIdentifierType: 'SWHID' }],
      ),
    ],
    descriptions: [
      {
        description:
          (notes ?? '') || `Modules: ${entry.content.modules.map((one) => `${one.module} ${one.version}`).join(', ')}`,
        descriptionType: 'TechnicalInfo',
      },
    ],
    formats: [...new Set((outputs ?? []).flatMap((one) => /\.[A-Za-z0-9]+$/.exec(one.name) ?? []))],
    schemaVersion: 'http://datacite.org/schema/kernel-4',
  };
}
