/** A report as terminal text, narrow or wide. */
import { printable, printableLines } from '../model/printable.ts';
import { countText, findingText, type TextOptions } from './finding-text.ts';
import { type Cell, cellText, type Report, type Section } from './report.ts';
import { paint, type Style } from './style.ts';
import textWidth, { fitToWidth } from './text-width.ts';
import { wrap } from './wrap.ts';

export function reportText(report: Report, options: TextOptions): string {
  const parts: string[] = [paint(printable(report.title), 'strong', options.colour)];
  const nameWidth = Math.max(0, ...report.facts.map((fact) => textWidth(fact.name)));
  for (const fact of report.facts) {
    const indent = ' '.repeat(nameWidth + 2);
    parts.push(
      fitToWidth(fact.name, nameWidth + 2) + wrap(printableLines(fact.value), options.width - nameWidth - 2, indent),
    );
  }
  for (const section of report.sections) {
    if (section.rows.length > 0 || (section.lines ?? []).length > 0) parts.push('', sectionText(section, options));
  }
  parts.push('');
  for (const finding of report.findings) parts.push(findingText(finding, options));
  if (report.accepted.length > 0) {
    parts.push(paint(`Accepted: ${report.accepted.length}`, 'strong', options.colour));
    for (const { finding, acceptance } of report.accepted) {
      const until = acceptance.until === undefined ? '' : `, until ${acceptance.until}`;
      const by = acceptance.by === undefined ? '' : ` (${printable(acceptance.by)})`;
      parts.push(
        wrap(
          `  ${finding.kind}: ${printable(finding.says)} Accepted${by}: ${printable(acceptance.reason)}${until}`,
          options.width,
          '    ',
        ),
      );
    }
    parts.push('');
  }
  parts.push(lastLine(report, options));
  if (report.caution !== null) parts.push(wrap(report.caution, options.width));
  return `${parts.join('\n')}\n`;
}

function lastLine(report: Report, options: TextOptions): string {
  const count = countText(report.findings);
  if (report.outcome === undefined) return count;
  const style: Style = report.outcome === 'held' ? 'alarm' : report.outcome === 'cleared' ? 'good' : 'warm';
  return `${paint(report.outcome, style, options.colour)}: ${count}`;
}

export function sectionText(section: Section, options: TextOptions): string {
  const title = paint(printable(section.title), 'strong', options.colour);
  const lines = (section.lines ?? []).map((one) => wrap(printableLines(one), options.width, '  '));
  if (section.rows.length === 0) return [title, ...lines].join('\n');
  const cells = section.rows.map((row) => row.map((cell) => printable(cellText(cell))));
  const columns = section.head.map((name, index) =>
    Math.max(textWidth(name), ...cells.map((row) => textWidth(row[index] ?? ''))),
  );
  const total = columns.reduce((sum, width) => sum + width + 2, 0);
  if (total > options.width && columns.length > 1) return [title, ...narrowRows(section, options), ...lines].join('\n');
  const head = paint(
    section.head
      .map((name, index) => fitToWidth(name, columns[index] ?? 0))
      .join('  ')
      .trimEnd(),
    'faint',
    options.colour,
  );
  const rows = section.rows.map((row, rowIndex) =>
    row
      .map((cell, index) => painted(cell, fitToWidth(cells[rowIndex]?.[index] ?? '', columns[index] ?? 0), options))
      .join('  ')
      .trimEnd(),
  );
  return [title, ...(section.head.some((name) => name !== '') ? [head] : []), ...rows, ...lines].join('\n');
}

/** Where a table is wider than the terminal: the first cell on a line, the others below it with their names. */
function narrowRows(section: Section, options: TextOptions): string[] {
  return section.rows.map((row, rowIndex) =>
    row
      .map((cell, index) => {
        const text = painted(cell, printable(cellText(cell)), options);
        const above = section.rows[rowIndex - 1]?.[0];
        // What stands above already is not said again.
        if (index === 0) return above !== undefined && cellText(above) === cellText(cell) ? '' : text;
        const name = section.head[index] ?? '';
        return wrap(name === '' ? `  ${text}` : `  ${name}: ${text}`, options.width, '    ');
      })
      .filter((text) => !/^\s*([^:]+: )?$/.test(text))
      .join('\n'),
  );
}

function painted(cell: Cell, text: string, options: TextOptions): string {
  return typeof cell === 'string' ? text : paint(text, cell.mood, options.colour);
}
