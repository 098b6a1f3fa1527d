/** An entry in the forms that archives, papers and spreadsheets take. Pure. */
import type { StandingEntry } from '../chain.ts';
import { bibtex } from './bibtex.ts';
import { citationReference } from './citation.ts';
import { csv } from './csv.ts';
import { datacite } from './datacite.ts';
import { provJson } from './prov-json.ts';
import { roCrate } from './ro-crate.ts';

export const EXPORT_FORMS = ['ro-crate', 'prov-json', 'citation', 'datacite', 'bibtex', 'csv'] as const;
export type ExportForm = (typeof EXPORT_FORMS)[number];

export function exportEntry(entry: StandingEntry, form: ExportForm): string {
  switch (form) {
    case 'ro-crate':
      return `${JSON.stringify(roCrate(entry), null, 2)}\n`;
    case 'prov-json':
      return `${JSON.stringify(provJson(entry), null, 2)}\n`;
    case 'citation':
      return citationReference(entry);
    case 'datacite':
      return `${JSON.stringify(datacite(entry), null, 2)}\n`;
    case 'bibtex':
      return bibtex(entry);
    case 'csv':
      return csv([entry]);
  }
}
