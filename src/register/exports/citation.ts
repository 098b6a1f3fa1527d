/** A `references:` item for a CITATION.cff file. @source Citation File Format 1.2.0, definitions.reference */
import { stringify } from 'yaml';
import type { StandingEntry } from '../chain.ts';
import { dayOf, resultText } from '../find.ts';
import { canonicalOrcid, readDoi } from '../identifiers.ts';

export function citationReference(entry: StandingEntry): string {
  const { result, people, code } = entry.content;
  const doi = result.doi === undefined ? null : readDoi(result.doi);
  const reference = {
    type:
      result.thesis !== undefined
        ? 'thesis'
        : result.dataset !== undefined
          ? 'data'
          : doi !== null
            ? 'article'
            : 'generic',
    title: result.title ?? resultText(result),
    authors: people.map((one) => ({
      ...nameParts(one.name),
      ...(orcidOf(one.orcid) === null ? {} : { orcid: orcidOf(one.orcid) }),
    })),
    ...(doi === null ? {} : { doi: `${doi.prefix}/${doi.suffix}` }),
    'date-released': dayOf(entry),
    ...(code[0] === undefined ? {} : { commit: code[0].commit }),
    identifiers: [{ type: 'other', value: entry.seal, description: `register entry ${entry.id}` }],
  };
  return stringify({ references: [reference] }, { lineWidth: 0 });
}

function orcidOf(orcid: string | undefined): string | null {
  return orcid === undefined ? null : canonicalOrcid(orcid);
}

/** The last word is the family name, unless a comma says otherwise; a name of one word is an entity's. */
export function nameParts(name: string): { 'family-names': string; 'given-names': string } | { name: string } {
  const comma = name.indexOf(',');
  if (comma > 0) return { 'family-names': name.slice(0, comma).trim(), 'given-names': name.slice(comma + 1).trim() };
  const space = name.trim().lastIndexOf(' ');
  return space < 0
    ? { name: name.trim() }
    : { 'family-names': name.trim().slice(space + 1), 'given-names': name.trim().slice(0, space) };
}
