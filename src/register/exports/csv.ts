/** Entries as a table, a row each. @source RFC 4180 */
import type { StandingEntry } from '../chain.ts';
import { dayOf, standingText } from '../find.ts';

export const CSV_HEAD = [
  'entry',
  'day',
  'title',
  'doi',
  'arxiv',
  'figure',
  'table',
  'people',
  'commit',
  'modules',
  'standing',
  'notes',
] as const;

export function csv(entries: readonly StandingEntry[]): string {
  const rows = entries.map((entry) => {
    const { result, people, code, modules, notes } = entry.content;
    return [
      entry.id,
      dayOf(entry),
      result.title ?? '',
      result.doi ?? '',
      result.arxiv ?? '',
      result.figure ?? '',
      result.table ?? '',
      people.map((one) => one.name).join('; '),
      code.map((one) => one.commit).join('; '),
      modules.map((one) => `${one.module} ${one.version}`).join('; '),
      standingText(entry),
      notes ?? '',
    ];
  });
  return [CSV_HEAD, ...rows].map((row) => `${row.map(field).join(',')}\r\n`).join('');
}

/** Quoted where RFC 4180 asks for it; a leading sign that a spreadsheet would run as a formula gets a quote mark before it. */
function field(value: string): string {
  const safe = /^[=+@\t\r-]/.test(value) ? `'${value}` : value;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
