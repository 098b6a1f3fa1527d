/** Published results and the module versions that made them: found as you type. */
import { type Line, line, row, span } from './frame.ts';
import { firstShown } from './list.ts';
import type { Screen } from './screen.ts';

export const registerScreen: Screen = {
  letter: 'r',
  count: (views, state) => views.register?.count(state.typed) ?? 0,
  draw(views, state, size, glyphs) {
    const { register } = views;
    if (register === null) return [line('No result is registered here. "mortise register add" records the first.')];
    const count = register.count(state.typed);
    const head: Line[] = [
      line(`${count} of ${register.total} results`, state.typed === '' ? '' : `  that hold "${state.typed}"`),
      ...register.notices.slice(0, 3).map((text) => line(span('notice ', 'warm'), text)),
    ];
    const rows = Math.max(1, size.rows - head.length);
    const first = firstShown(state.chosen, count, rows);
    const shown = register.find(state.typed, first, rows);
    const widths = [12, Math.max(16, size.columns - 44), 28];
    return [
      ...head,
      ...shown.map(
        (one, offset): Line => [
          first + offset === state.chosen ? span(`${glyphs.chosen} `, 'strong') : span('  '),
          ...row([one.date, one.result, one.standing], widths),
        ],
      ),
    ];
  },
  page({ register }, state) {
    if (state.depth === 0 || register === null) return null;
    const chosen = register.find(state.typed, state.chosen, 1)[0];
    return chosen === undefined ? null : register.entry(chosen.id).map((text) => line(text));
  },
  keys: (_, state) =>
    state.depth === 0
      ? [
          ['=', 'type to find'],
          ['Enter', 'open'],
        ]
      : [['Esc', 'all results']],
};
