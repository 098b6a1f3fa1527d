/** Exchanged modules by cases: in each cell the largest deviation in tolerances. */

import { type Line, line, row, span } from './frame.ts';
import { listLines } from './list.ts';
import { tolerancesText } from './numbers.ts';
import type { Screen } from './screen.ts';

export const swapScreen: Screen = {
  letter: 's',
  count: (views) => views.swap?.rows.length ?? 0,
  draw(views, state, size, glyphs) {
    const { swap } = views;
    if (swap === null || swap.rows.length === 0)
      return [line('No module was exchanged yet. Run "mortise swap COMPONENT=MODULE".')];
    const width = Math.max(12, Math.floor((size.columns - 32) / Math.max(1, swap.cases.length)));
    const widths = [30, ...swap.cases.map(() => width)];
    const effects: Line[] = swap.effects.map((text) => line(text));
    return [
      [
        span('  '),
        ...row(
          ['exchange', ...swap.cases].map((name) => span(name, 'faint')),
          widths,
        ),
      ],
      ...listLines(swap.rows.length, state.chosen, Math.max(3, size.rows - 2 - effects.length), glyphs, (index) => {
        const one = swap.rows[index]!;
        const cells = one.cells.map((cell) => {
          if (cell.class === null) return span('not run');
          const bad = cell.class === 'beyond tolerance' || cell.class === 'not comparable';
          return span(
            cell.tolerances === null ? cell.class : tolerancesText(cell.tolerances),
            bad ? 'alarm' : undefined,
          );
        });
        return row([one.exchange, ...cells], widths);
      }),
      line(''),
      ...effects,
    ];
  },
  keys: () => [['Up Down', 'choose an exchange']],
};
