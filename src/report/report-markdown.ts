/** A report as Markdown that reads well as a comment on a pull request: short above, details folded, below the length that forges allow. */
import { type Finding, GRAVITIES } from '../model/finding.ts';
import { printPlace } from '../model/place.ts';
import { printable, printableLines } from '../model/printable.ts';
import { countText } from './finding-text.ts';
import { type Cell, cellText, type Report, type Section } from './report.ts';

/** Forges cut or refuse comments a little above 65,000 characters. */
const LONGEST = 65_000;

export function reportMarkdown(report: Report): string {
  const head = [
    `### ${escaped(report.title)}${report.outcome === undefined ? '' : `: ${report.outcome}`}`,
    '',
    `${countText(report.findings)}${report.accepted.length === 0 ? '' : `, ${report.accepted.length} accepted`}`,
    ...(report.caution === null ? [] : ['', `> ${escaped(report.caution)}`]),
  ].join('\n');
  const tail = `\n\n${folded('What was looked at', report.facts.map((fact) => `- ${escaped(fact.name)}: ${escaped(fact.value)}`).join('\n'))}\n`;
  const accepted = report.accepted.map(
    ({ finding, acceptance }) =>
      `- \`${finding.kind}\` ${escaped(finding.says)} Accepted: ${escaped(acceptance.reason)}`,
  );
  type Block = (room: number) => string | null;
  const whole =
    (text: string): Block =>
    (room) =>
      text.length <= room ? text : null;
  const blocks: Block[] = [
    ...GRAVITIES.flatMap((gravity) =>
      report.findings.filter((one) => one.gravity === gravity).map((one) => whole(findingMarkdown(one))),
    ),
    ...report.sections
      .filter((one) => one.rows.length > 0 || (one.lines ?? []).length > 0)
      .map(
        (one): Block =>
          (room) =>
            sectionWithin(one, room),
      ),
    ...(accepted.length === 0 ? [] : [whole(folded(`Accepted: ${accepted.length}`, accepted.join('\n')))]),
  ];
  const kept: string[] = [];
  let left = 0;
  let room = LONGEST - head.length - tail.length - 200;
  for (const block of blocks) {
    const text = block(room - 2);
    if (text === null) left += 1;
    else {
      kept.push(text);
      room -= text.length + 2;
    }
  }
  const more =
    left === 0 ? '' : `\n\n${left} more parts are left out for length; the JSON and HTML reports hold them all.`;
  return `${head}\n\n${kept.join('\n\n')}${more}${tail}`;
}

function findingMarkdown(finding: Finding): string {
  const about = finding.module === undefined ? '' : ` ${escaped(finding.module)}`;
  const evidence = finding.evidence.map((one) => {
    const where = one.place === undefined ? '' : `${code(printPlace(one.place))} `;
    const excerpt = one.excerpt === undefined ? '' : ` ${code(one.excerpt.text.trim())}`;
    return `- ${where}${escaped(one.says)}${excerpt}`;
  });
  const details = [...evidence, `- Next: ${escaped(finding.next)}`].join('\n');
  return `**${finding.gravity}**${about} ${escaped(finding.says)}\n\n${folded(`${finding.kind} at ${printPlace(finding.place)}`, details)}`;
}

/** The section with as many of its first rows as there is room for, and how many are left out. */
function sectionWithin(section: Section, room: number): string | null {
  const cut = (rows: number) => {
    const left = section.rows.length - rows;
    const lines = [...(left === 0 ? [] : [`${left} more rows are left out for length.`]), ...(section.lines ?? [])];
    return folded(section.title, sectionMarkdown({ ...section, rows: section.rows.slice(0, rows), lines }));
  };
  let [fits, over] = [-1, section.rows.length + 1];
  while (over - fits > 1) {
    const middle = Math.floor((fits + over) / 2);
    if (cut(middle).length <= room) fits = middle;
    else over = middle;
  }
  return fits < 0 || (fits === 0 && section.rows.length > 0) ? null : cut(fits);
}

function sectionMarkdown(section: Section): string {
  const line = (cells: readonly string[]) => `| ${cells.join(' | ')} |`;
  const rows = section.rows.map((row) => line(row.map(cellMarkdown)));
  const table =
    rows.length === 0
      ? []
      : [line(section.head.map((name) => escaped(name) || ' ')), line(section.head.map(() => '---')), ...rows];
  return [...table, ...(section.lines ?? []).map((one) => `\n${escaped(one)}`)].join('\n');
}

function cellMarkdown(cell: Cell): string {
  const text = escaped(cellText(cell)) || ' ';
  return typeof cell === 'string' || cell.mood === 'good' ? text : `**${text}**`;
}

function folded(title: string, body: string): string {
  return `<details><summary>${escapedInHtml(title)}</summary>\n\n${body}\n\n</details>`;
}

/** Forges look for mentions in text that is already decoded, so an entity is no help; a comment keeps the name apart from its sign. */
const ENTITIES: Readonly<Record<string, string>> = { '<': '&lt;', '>': '&gt;', '&': '&amp;', '@': '@<!-- -->' };

/** Text inside a tag that begins a line: Markdown does not read there, so a backslash would be seen. */
function escapedInHtml(text: string): string {
  return printable(text).replace(/[<>&@]/g, (one) => ENTITIES[one]!);
}

/** Text that Markdown and HTML leave as it is: nothing from a repository becomes a link, a mention, an image or a tag. */
export function escaped(text: string): string {
  return printable(printableLines(text))
    .replace(/[\\`*_{}[\]()#+!|~<>&@:]/g, (one) => ENTITIES[one] ?? `\\${one}`)
    .replace(/^(\s*)([-=]|\d+\.)/, '$1\\$2');
}

function code(text: string): string {
  const safe = printable(text).replaceAll('|', '\\|');
  const fence = '`'.repeat(Math.max(0, ...[...safe.matchAll(/`+/g)].map(([run]) => run.length)) + 1);
  return `${fence}${safe.startsWith('`') || safe.endsWith('`') ? ` ${safe} ` : safe}${fence}`;
}
