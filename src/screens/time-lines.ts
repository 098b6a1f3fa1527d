/** The steps of a module on a line through time: versions above it, a sign a step on it, the chosen one marked below. */
import { type Line, line, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import type { StepView } from './views.ts';

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
    // A step that was not declared is never hidden by one that was.
    if (rail[column] !== glyphs.undeclared) rail[column] = one.undeclared ? glyphs.undeclared : glyphs.point;
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
