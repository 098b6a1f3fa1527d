/** Exchanged modules by cases, in each cell the largest deviation in tolerances; what could be exchanged is there to be begun. */
import { drawDeviation, lookAlong, quantityText } from './deviation-screen.ts';
import { cellText, type Line, line, type Size, type Span, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { matching } from './list.ts';
import { tolerancesText } from './numbers.ts';
import { type App, type Pressed, type Screen, type ScreenState, still, withState } from './screen.ts';
import { tableLines } from './table-lines.ts';
import type { DeviationView, SwapCell, SwapRow, Views } from './views.ts';

export const swapScreen: Screen = {
  letter: 's',
  count(views, state) {
    const row = rows(views, state)[state.chosen];
    return state.depth === 0 ? rows(views, state).length : row === undefined ? 0 : moved(row).length;
  },
  draw(views, state, size, glyphs) {
    const shown = rows(views, state);
    const row = shown[state.chosen];
    if (views.swap === null || views.swap.rows.length === 0)
      return [line('Nothing can be exchanged: no component has a second module with a manifest.')];
    if (state.depth > 0 && row !== undefined) return opened(views, row, state, size, glyphs);
    const effects = (row?.effects ?? []).slice(0, 4).map((text) => line(text));
    const place = { columns: size.columns, room: Math.max(4, size.rows - effects.length - 1) };
    return [
      ...tableLines(
        heads(views),
        shown.map((one) => rowCells(one, state)),
        state.chosen,
        place,
        [...(views.swap?.cases ?? []).map((_, index) => index + 2), 1],
        glyphs,
      ),
      ...(effects.length === 0 ? [] : [line('')]),
      ...effects,
    ];
  },
  table: (views, state) => [heads(views), ...rows(views, state).map((one) => rowCells(one, state).map(cellText))],
  keys: (views, state) =>
    state.depth === 0
      ? [
          ['B', 'begin it'],
          ['M', 'take it along'],
          ...(views.assembly.job === null ? [] : [['E', 'end the job'] as const]),
          ['Enter', 'what moved'],
        ]
      : state.depth === 1
        ? [
            ['Enter', 'draw it'],
            ['Esc', 'all exchanges'],
          ]
        : [
            ['Up Down', 'nearer, farther'],
            ['Left Right', 'along'],
            ['L', 'log'],
            ['Esc', 'back'],
          ],
  press(app, state, key) {
    const row = rows(app.views, state)[state.chosen];
    if (row === undefined) return undefined;
    if (state.depth === 0)
      return 'character' in key ? pressLetter(app, state, row, key.character.toLowerCase()) : undefined;
    if (state.depth === 2) return lookAlong(app, state, key);
    const opens = 'named' in key && (key.named === 'enter' || key.named === 'right');
    return opens && moved(row).length > 0 ? still(withState(app, { depth: 2, from: 0, to: 1 })) : undefined;
  },
};

function pressLetter(app: App, state: ScreenState, row: SwapRow, letter: string): Pressed | undefined {
  if (letter === 'm') {
    const taken = state.taken.includes(row.exchange)
      ? state.taken.filter((one) => one !== row.exchange)
      : [...state.taken, row.exchange];
    return still(withState(app, { taken }));
  }
  if (letter === 'e' && app.views.assembly.job !== null) return { app, wishes: [{ do: 'end job' }] };
  if (letter !== 'b') return undefined;
  const words = [
    ...new Set((state.taken.length === 0 ? [row.exchange] : state.taken).flatMap((one) => one.split(' '))),
  ];
  const components = words.map((word) => word.slice(0, word.indexOf('=')));
  const twice = components.find((one, index) => components.indexOf(one) !== index);
  if (twice !== undefined) return still({ ...app, message: `${twice} can take one module at a time` });
  return { app: withState(app, { taken: [] }), wishes: [{ do: 'exchange', words }] };
}

function rows(views: Views, state: ScreenState): readonly SwapRow[] {
  return matching(views.swap?.rows ?? [], state.typed, (one) => one.exchange);
}

function heads(views: Views): string[] {
  return ['', 'exchange', ...(views.swap?.cases ?? [])];
}

function rowCells(one: SwapRow, state: ScreenState): (string | Span)[] {
  return [state.taken.includes(one.exchange) ? 'with' : '', one.exchange, ...one.cells.map(cell)];
}

function cell(one: SwapCell): Span {
  if (one.class === null) return span(one.why === '' ? 'not run' : 'no result', 'faint');
  const bad = one.class === 'beyond tolerance' || one.class === 'not comparable';
  return span(one.tolerances === null ? one.class : tolerancesText(one.tolerances), bad ? 'alarm' : undefined);
}

function moved(row: SwapRow): readonly DeviationView[] {
  return row.cells.flatMap((one) => one.deviations);
}

function opened(views: Views, row: SwapRow, state: ScreenState, size: Size, glyphs: Glyphs): Line[] {
  const one = moved(row)[state.inner];
  if (state.depth === 2 && one !== undefined) return drawDeviation(one, state, size, glyphs);
  const whys = row.cells.flatMap((each, index) =>
    each.why === '' ? [] : [line(`${views.swap?.cases[index] ?? ''}: ${each.why}`)],
  );
  const effects = row.effects.map((text) => line(text));
  const place = { columns: size.columns, room: Math.max(4, size.rows - 2 - whys.length - effects.length) };
  const cells = moved(row).map((each): (string | Span)[] => [
    each.case,
    quantityText(each),
    span(each.class, each.class === 'beyond tolerance' || each.class === 'not comparable' ? 'alarm' : undefined),
    tolerancesText(each.tolerances),
  ]);
  return [
    line(span(row.exchange, 'strong'), '  against the plugged modules'),
    ...(cells.length === 0
      ? [line('Not run yet, or no case uses it.')]
      : tableLines(['case', 'quantity', 'class', 'tolerances'], cells, state.inner, place, [1, 0], glyphs)),
    ...whys,
    ...effects,
  ];
}
