/** Every screen as plain lines, one after another: for a pipe and for a screen reader. */
import { lineText } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { FRESH, SCREEN_NAMES } from './screen.ts';
import { SCREENS } from './screens.ts';
import type { Views } from './views.ts';

export function screensText(views: Views, columns: number, glyphs: Glyphs): string {
  return SCREEN_NAMES.map((name) => {
    const lines = SCREENS[name].draw(views, FRESH, { columns, rows: 10_000 }, glyphs);
    const title = name.charAt(0).toUpperCase() + name.slice(1);
    return `${title}\n${lines.map((one) => lineText(one).trimEnd()).join('\n')}\n`;
  }).join('\n');
}
