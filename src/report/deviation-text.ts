/** Deviations as terminal text: a line each, in the order given; worst places and reasons below. */
import type { Deviation, DeviationClass } from '../model/deviation.ts';
import { DEVIATION_CLASSES } from '../model/deviation.ts';
import { printable } from '../model/printable.ts';
import type { TextOptions } from './finding-text.ts';
import { paint, type Style } from './style.ts';
import { fitToWidth } from './text-width.ts';
import { wrap } from './wrap.ts';

const STYLE_OF: Readonly<Record<DeviationClass, Style>> = {
  'bit-for-bit': 'good',
  roundoff: 'good',
  'within tolerance': 'good',
  'beyond tolerance': 'alarm',
  'not comparable': 'warm',
};

const HEADINGS = ['max absolute', 'max relative', 'max ULP', 'L2', 'of allowed'];
const CELL = 12;
const LONGEST_CLASS = 16;

/** One table, then what a reader needs to know of single entries, then a line that counts them by class. */
export function deviationsText(deviations: readonly Deviation[], options: TextOptions): string {
  if (deviations.length === 0) return 'nothing to compare\n';
  const names = deviations.map(nameOf);
  const cells = Math.min(HEADINGS.length, Math.floor((options.width - LONGEST_CLASS - 2 - 16) / (CELL + 1)));
  // On a narrow terminal the last columns matter most: how much of what is allowed, then norms and ULP.
  const shown = HEADINGS.slice(HEADINGS.length - cells);
  const room = Math.max(
    12,
    Math.min(Math.max(...names.map((name) => name.length)), options.width - LONGEST_CLASS - 2 - cells * (CELL + 1)),
  );
  const row = (first: string, second: string, values: readonly string[]) =>
    `${fitToWidth(first, room)}  ${fitToWidth(second, LONGEST_CLASS)}${values.map((value) => ` ${value.padStart(CELL)}`).join('')}`.trimEnd();
  const lines = [paint(row('quantity', 'class', shown), 'faint', options.colour)];
  deviations.forEach((deviation, index) => {
    const text = row(names[index]!, deviation.class, figures(deviation).slice(HEADINGS.length - cells));
    lines.push(text.replace(deviation.class, paint(deviation.class, STYLE_OF[deviation.class], options.colour)));
    for (const remark of remarks(deviation)) lines.push(`    ${wrap(remark, options.width - 6, '      ')}`);
  });
  return `${lines.join('\n')}\n\n${countClasses(deviations)}\n`;
}

/** `2 beyond tolerance, 5 bit-for-bit`, the worst first. */
export function countClasses(deviations: readonly Pick<Deviation, 'class'>[]): string {
  return [...DEVIATION_CLASSES]
    .reverse()
    .map((one) => [one, deviations.filter((deviation) => deviation.class === one).length] as const)
    .filter(([, count]) => count > 0)
    .map(([one, count]) => `${count} ${one}`)
    .join(', ');
}

function nameOf(deviation: Deviation): string {
  const unit = deviation.unit === '' ? '' : ` [${deviation.unit}]`;
  const of = deviation.of === 'field' ? '' : ` (${deviation.of})`;
  return printable(`${deviation.quantity}${unit}${of}`);
}

function figures({ measures, tolerances }: Deviation): string[] {
  if (measures === null) return HEADINGS.map(() => '');
  return [measures.maxAbsolute, measures.maxRelative, measures.maxUlp, measures.l2, tolerances].map((value) =>
    value === null ? '' : figure(value),
  );
}

/** Three significant digits: enough to judge a deviation by. */
export function figure(value: number): string {
  if (value === Number.POSITIVE_INFINITY) return 'unbounded';
  if (Number.isInteger(value) && Math.abs(value) < 1e6) return String(value);
  return Math.abs(value) >= 1e-3 && Math.abs(value) < 1e6
    ? String(Number(value.toPrecision(3)))
    : value.toExponential(2);
}

function remarks(deviation: Deviation): string[] {
  const { measures, why } = deviation;
  const lines = why === undefined ? [] : [printable(why)];
  const worst = measures?.worst;
  if (
    worst !== null &&
    worst !== undefined &&
    (deviation.class === 'beyond tolerance' || deviation.class === 'within tolerance')
  ) {
    const at = worst.along === undefined ? '' : `, at ${worst.along.value} ${worst.along.unit}`.trimEnd();
    const where = measures!.count === 1 ? '' : `worst at element ${worst.index}${printable(at)}: `;
    lines.push(`${where}reference ${worst.reference}, result ${worst.result}`);
  }
  return lines;
}
