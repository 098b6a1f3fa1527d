/** Old results from a spreadsheet: rows of paper, date and code version become entries; what a row does not say stays open. Pure. */
import { readDoi } from './identifiers.ts';
import type { Entry, UsedModule } from './record.ts';

export interface ImportedRow {
  /** Line of the file, from 1. */
  readonly line: number;
  readonly title: string;
  readonly entry: Entry;
}

export interface ImportProblem {
  readonly line: number;
  readonly says: string;
}

/** The names that columns may have, by what they mean. */
const COLUMNS: Readonly<Record<string, readonly string[]>> = {
  title: ['title', 'paper', 'result', 'publication'],
  doi: ['doi'],
  arxiv: ['arxiv', 'preprint', 'eprint'],
  figure: ['figure', 'fig'],
  table: ['table'],
  people: ['people', 'authors', 'author', 'person', 'who'],
  published: ['published', 'date', 'day', 'year'],
  commit: ['commit', 'revision', 'code version', 'version', 'hash'],
  modules: ['modules', 'module', 'module versions'],
  notes: ['notes', 'note', 'comment', 'comments', 'remarks'],
};

/** @returns a row an entry, and a problem for every line that gives no result or nobody, or whose columns are not known */
export function importCsv(text: string): { rows: ImportedRow[]; problems: ImportProblem[] } {
  const lines = readCsv(text);
  const [head, ...body] = lines;
  if (head === undefined) return { rows: [], problems: [{ line: 1, says: 'the file is empty' }] };
  const names = head.fields.map((field) => meaningOf(field));
  const problems: ImportProblem[] = head.fields.flatMap((field, index) =>
    names[index] === null
      ? [
          {
            line: 1,
            says: `column "${field}" is not known and is left out; known are ${Object.keys(COLUMNS).join(', ')}`,
          },
        ]
      : [],
  );
  const rows: ImportedRow[] = [];
  for (const { line, fields } of body) {
    if (fields.every((field) => field.trim() === '')) continue;
    const value = (name: string) => fields[names.indexOf(name)]?.trim() ?? '';
    const made = entryFrom(value);
    if (typeof made === 'string') problems.push({ line, says: made });
    else rows.push({ line, title: value('title') || value('doi') || value('arxiv'), entry: made });
  }
  return { rows, problems };
}

function meaningOf(field: string): string | null {
  const name = field.trim().toLowerCase().replace(/[_-]/g, ' ');
  return Object.entries(COLUMNS).find(([, names]) => names.includes(name))?.[0] ?? null;
}

function entryFrom(value: (name: string) => string): Entry | string {
  const people = value('people')
    .split(/;| and /)
    .map((name) => name.trim())
    .filter((name) => name !== '');
  if (value('title') === '' && value('doi') === '' && value('arxiv') === '')
    return 'this line names no result: give a title, a DOI or an arXiv id';
  if (value('doi') !== '' && readDoi(value('doi')) === null) return `"${value('doi')}" is no DOI`;
  if (people.length === 0) return 'this line names nobody';
  const published = dateFrom(value('published'));
  if (published === null) return `"${value('published')}" is no date: write YYYY, YYYY-MM or YYYY-MM-DD`;
  const modules = value('modules')
    .split(/[;,]/)
    .map((part) => part.trim())
    .filter((part) => part !== '')
    .map(moduleFrom);
  const optional = (name: string) => (value(name) === '' ? {} : { [name]: value(name) });
  return {
    result: {
      ...optional('title'),
      ...optional('doi'),
      ...optional('arxiv'),
      ...optional('figure'),
      ...optional('table'),
    },
    code: value('commit') === '' ? [] : [{ commit: value('commit') }],
    modules,
    people: people.map((name) => ({ name })),
    ...(published === '' ? {} : { dates: { published } }),
    ...optional('notes'),
  };
}

/** `eos 2.0.3` or `eos@2.0.3`; a version that is not given is unknown. */
function moduleFrom(text: string): UsedModule {
  const [, module = text, version = 'unknown'] = /^(\S+?)(?:[@ ]v?(\d\S*))?$/.exec(text) ?? [];
  return { module, component: 'unknown', version };
}

function dateFrom(text: string): string | null {
  if (text === '') return '';
  return /^\d{4}(?:-\d\d(?:-\d\d)?)?$/.test(text) ? text : null;
}

/** Records of a CSV text with the line each begins on; quoted fields may hold separators and line ends. @source RFC 4180 */
export function readCsv(text: string): { line: number; fields: string[] }[] {
  const separator = /^[^"\n]*;/.test(text) && !/^[^"\n]*,/.test(text) ? ';' : ',';
  const records: { line: number; fields: string[] }[] = [];
  let [line, begun] = [1, 1];
  let fields: string[] = [];
  let field = '';
  let quoted = false;
  const source = text.replace(/^\ufeff/, '');
  for (let at = 0; at < source.length; at++) {
    const one = source[at]!;
    if (one === '\n') line++;
    if (quoted) {
      if (one !== '"') field += one;
      else if (source[at + 1] === '"') field += source[++at];
      else quoted = false;
    } else if (one === '"' && field === '') quoted = true;
    else if (one === separator) {
      fields.push(field);
      field = '';
    } else if (one === '\n') {
      records.push({ line: begun, fields: [...fields, field] });
      [fields, field, begun] = [[], '', line];
    } else if (one !== '\r') field += one;
  }
  if (field !== '' || fields.length > 0) records.push({ line: begun, fields: [...fields, field] });
  return records;
}
