/** The steps of a module on a line through time: versions above it, a sign a step on it, the chosen one marked below. */
import { type Line, line, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import type { StepView } from './views.ts';

/** Bumps asked by a change that whoever is plugged to the module can notice. */
export const CROSSES_THE_JOINT: ReadonlySet<string> = new Set(['minor', 'major']);

function weight(sign: string, glyphs: Glyphs): number {
  return [glyphs.slight, glyphs.point, glyphs.undeclared].indexOf(sign);
}

/** @returns three lines, or none when there is nothing to set on a line */
export function timeLines(steps: readonly StepView[], chosen: number, columns: number, glyphs: Glyphs): Line[] {
  const times = steps.map((one) => Date.parse(one.date)).filter(Number.isFinite);
  if (times.length < 2 || times.length < steps.length || columns < 40) return [];
  const [first, last] = [Math.min(...times), Math.max(...times)];
  const margin = 5;
  const width = columns - 2 * margin;
  const at = (time: number) => Math.round(((time - first) / Math.max(1, last - first)) * (width - 1));
  const rail = Array.from({ length: width }, () => glyphs.rule);
  const versions = Array.from({ length: width }, () => ' ');
  let free = 0;
  steps.forEach((one, index) => {
    const column = at(times[index]!);
    // Of the steps that fall on one place the gravest is seen.
    const sign = one.undeclared ? glyphs.undeclared : CROSSES_THE_JOINT.has(one.asked) ? glyphs.point : glyphs.slight;
    if (weight(sign, glyphs) > weight(rail[column]!, glyphs)) rail[column] = sign;
    const version = index === 0 || one.version !== steps[index - 1]!.version ? one.version : null;
    if (version === null || column < free || column + version.length > width) return;
    versions.splice(column, version.length, ...version);
    free = column + version.length + 1;
  });
  const years = [first, last].map((time) => String(new Date(time).getUTCFullYear()));
  const mark = at(times[Math.min(chosen, times.length - 1)]!);
  return [
    line(' '.repeat(margin), span(versions.join(''), 'faint')),
    line(span(`${years[0]} `, 'faint'), rail.join(''), span(` ${years[1]}`, 'faint')),
    line(' '.repeat(margin + mark), span(glyphs.here, 'strong'), ` ${steps[chosen]?.date ?? ''}`),
  ];
}
