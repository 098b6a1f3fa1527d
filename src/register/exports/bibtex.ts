/** An entry as a BibTeX item. @source O. Patashnik, BibTeXing (1988): entry types and fields */
import type { StandingEntry } from '../chain.ts';
import { dayOf, resultText } from '../find.ts';
import { readDoi } from '../identifiers.ts';

export function bibtex(entry: StandingEntry): string {
  const { result, people, modules, code } = entry.content;
  const doi = result.doi === undefined ? null : readDoi(result.doi);
  const fields: [string, string][] = [
    ['title', `{${escaped(result.title ?? resultText(result))}}`],
    ['author', people.map((one) => escaped(one.name)).join(' and ')],
    ['year', dayOf(entry).slice(0, 4)],
    ...(doi === null ? [] : [['doi', escaped(`${doi.prefix}/${doi.suffix}`)] as [string, string]]),
    ...(result.arxiv === undefined ? [] : [['eprint', escaped(result.arxiv)] as [string, string]]),
    [
      'note',
      escaped(
        `Made with ${modules.map((one) => `${one.module} ${one.version}`).join(', ')}${code[0] === undefined ? '' : `; revision ${code[0].commit}`}`,
      ),
    ],
  ];
  const type = result.thesis !== undefined ? 'phdthesis' : 'misc';
  const key = entry.id.replace(/[^A-Za-z0-9:._-]/g, '');
  return `@${type}{${key},\n${fields.map(([name, value]) => `  ${name} = {${value}}`).join(',\n')}\n}\n`;
}

const SPECIAL: Readonly<Record<string, string>> = {
  '\\': '\\textbackslash{}',
  '~': '\\textasciitilde{}',
  '^': '\\textasciicircum{}',
};

/** Braces must pair in BibTeX whatever stands before them, so they are left out. */
function escaped(text: string): string {
  return text
    .replace(/[{}]/g, '')
    .replace(/[\\~^]/g, (one) => SPECIAL[one]!)
    .replace(/[&%$#_]/g, (one) => `\\${one}`)
    .replace(/\s+/g, ' ');
}
