/** Findings as terminal text: place, gravity and kind; the line meant with the characters underlined; what is wrong; what next. */
import type { Evidence, Excerpt, Finding, Gravity } from '../model/finding.ts';
import { GRAVITIES } from '../model/finding.ts';
import { printPlace } from '../model/place.ts';
import { printable, printableLines } from '../model/printable.ts';
import { paint, type Style } from './style.ts';
import textWidth from './text-width.ts';
import { wrap } from './wrap.ts';

export interface TextOptions {
  /** Columns to fill. */
  readonly width: number;
  readonly colour: boolean;
}

const STYLE_OF: Readonly<Record<Gravity, Style>> = { stop: 'alarm', caution: 'warm', note: 'faint' };

/** One finding, with a line end. */
export function findingText(finding: Finding, options: TextOptions): string {
  const gravity = paint(finding.gravity, STYLE_OF[finding.gravity], options.colour);
  const about = finding.module === undefined ? '' : `  ${printable(finding.module)}`;
  const lines = [
    `${paint(printable(printPlace(finding.place)), 'strong', options.colour)}  ${gravity}  ${finding.kind}${about}`,
  ];
  const own = finding.evidence.find((one) => one.excerpt !== undefined && one.place === undefined);
  if (own?.excerpt !== undefined) lines.push(...excerptLines(own.excerpt, options));
  lines.push(wrap(printableLines(finding.says), options.width));
  for (const one of finding.evidence) if (one !== own) lines.push(...evidenceLines(one, options));
  lines.push(wrap(`Next: ${printableLines(finding.next)}`, options.width, '      '));
  return `${lines.join('\n')}\n`;
}

/** All findings with an empty line between, and a line that counts them by gravity. */
export function findingsText(findings: readonly Finding[], options: TextOptions): string {
  return [...findings.map((finding) => findingText(finding, options)), `${countText(findings)}\n`].join('\n');
}

/** `2 stops, 1 caution, 3 notes`; `no stop, caution or note` for none. */
export function countText(findings: readonly Finding[]): string {
  const parts = GRAVITIES.map((gravity) => [gravity, findings.filter((one) => one.gravity === gravity).length] as const)
    .filter(([, count]) => count > 0)
    .map(([gravity, count]) => `${count} ${gravity}${count === 1 ? '' : 's'}`);
  return parts.length === 0 ? 'no stop, caution or note' : parts.join(', ');
}

function evidenceLines(evidence: Evidence, options: TextOptions): string[] {
  const where = evidence.place === undefined ? '' : `${printable(printPlace(evidence.place))}  `;
  const says = wrap(`  - ${where}${printableLines(evidence.says)}`, options.width, '    ');
  return evidence.excerpt === undefined ? [says] : [says, ...excerptLines(evidence.excerpt, options)];
}

function excerptLines(excerpt: Excerpt, options: TextOptions): string[] {
  const number = String(excerpt.line);
  const room = Math.max(20, options.width - number.length - 5);
  // A long line is shown around the characters meant, so that they are always in sight.
  const skip = excerpt.column + excerpt.width > room ? Math.max(0, excerpt.column - Math.floor(room / 2)) : 0;
  const before = printable(excerpt.text.slice(skip, excerpt.column - 1));
  const meant = printable(excerpt.text.slice(Math.max(skip, excerpt.column - 1), excerpt.column - 1 + excerpt.width));
  const after = printable(excerpt.text.slice(excerpt.column - 1 + excerpt.width));
  const shown = `${before}${meant}${after}`.slice(0, room);
  const mark = '^'.repeat(Math.max(1, Math.min(textWidth(meant), room - textWidth(before))));
  return [
    `  ${number} | ${shown}`,
    `  ${' '.repeat(number.length)} | ${' '.repeat(textWidth(before))}${paint(mark, 'warm', options.colour)}`,
  ];
}
