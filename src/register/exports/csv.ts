/** Entries as a table, a row each. @source RFC 4180 */
import { csvText } from '../../model/csv.ts';
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
  return csvText([CSV_HEAD, ...rows]);
}
