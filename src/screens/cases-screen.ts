/** Cases: progress while they run, results by quantity; start, end, run the failed again, record a reference. */

import { quantityText } from './deviation-screen.ts';
import { cellText, type Line, line, type Size, type Span, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { matching } from './list.ts';
import { tolerancesText } from './numbers.ts';
import { type App, ask, goTo, type Pressed, progressBar, type Screen, type ScreenState, still } from './screen.ts';
import { tableLines } from './table-lines.ts';
import type { CaseView, Views } from './views.ts';

const LIST_HEADS = ['case', 'state', 'time', 'result'];
const QUANTITY_HEADS = ['quantity', 'class', 'tolerances', ''];

export const casesScreen: Screen = {
  letter: 'c',
  count: (views, state) =>
    state.depth === 0 ? cases(views, state).length : (cases(views, state)[state.chosen]?.quantities.length ?? 0),
  draw(views, state, size, glyphs) {
    const shown = cases(views, state);
    const one = shown[state.chosen];
    if (shown.length === 0) return [line('No case is declared. A case is a file under manifests/cases/.')];
    if (state.depth > 0 && one !== undefined) return opened(one, state, size, glyphs);
    const cells = shown.map((each) => caseCells(each, glyphs));
    return tableLines(LIST_HEADS, cells, state.chosen, { columns: size.columns, room: size.rows }, [0, 3], glyphs);
  },
  table(views, state) {
    const shown = cases(views, state);
    const one = shown[state.chosen];
    return state.depth > 0 && one !== undefined
      ? [QUANTITY_HEADS, ...one.quantities.map((each) => quantityCells(each).map(cellText))]
      : [
          LIST_HEADS,
          ...shown.map((each) => [each.name, each.state, String(each.seconds ?? ''), each.worst ?? each.why]),
        ];
  },
  keys: (views) => [
    ['B', 'begin this'],
    ['A', 'begin all'],
    ['T', 'failed again'],
    ...(views.assembly.job === null ? [] : [['E', 'end the job'] as const]),
    ['W', 'new reference'],
    ['Enter', 'quantities'],
  ],
  press(app, state, key) {
    const one = cases(app.views, state)[state.chosen];
    if (one === undefined) return undefined;
    if ('character' in key) return pressLetter(app, one, key.character.toLowerCase());
    if ((key.named === 'enter' || key.named === 'right') && state.depth === 1) {
      const quantity = one.quantities[state.inner];
      const index = app.views.deviations.findIndex(
        (each) => each.case === one.name && each.quantity === quantity?.name && each.of === quantity.of,
      );
      return still(
        index < 0
          ? { ...app, message: 'nothing to plot for this quantity' }
          : goTo(app, 'deviation', { chosen: index, depth: 1, from: 0, to: 1 }),
      );
    }
    return undefined;
  },
};

function pressLetter(app: App, one: CaseView, letter: string): Pressed | undefined {
  switch (letter) {
    case 'b':
      return { app, wishes: [{ do: 'run cases', names: [one.name] }] };
    case 'a':
      return { app, wishes: [{ do: 'run cases', names: app.views.cases.map((each) => each.name) }] };
    case 't': {
      const failed = app.views.cases.filter(
        (each) =>
          each.worst === 'beyond tolerance' || each.worst === 'not comparable' || /failed|timed out/.test(each.state),
      );
      if (failed.length === 0) return still({ ...app, message: 'no case failed' });
      return { app, wishes: [{ do: 'run cases', names: failed.map((each) => each.name) }] };
    }
    case 'e':
      if (app.views.assembly.job === null) return undefined;
      return { app, wishes: [{ do: 'end job' }] };
    case 'w': {
      const moved = one.quantities
        .filter((each) => each.class !== 'bit-for-bit')
        .map((each) => `${each.name} ${each.class}`);
      const changes = moved.length === 0 ? 'nothing moves' : moved.join(', ');
      return ask(app, {
        asks: `New reference of ${one.name} (${changes}). Reason, or Esc:`,
        answer: '',
        wants: 'words',
        wish: (reason) => ({ do: 'record', name: one.name, reason }),
      });
    }
    default:
      return undefined;
  }
}

function cases(views: Views, state: ScreenState): readonly CaseView[] {
  return matching(views.cases, state.typed, (one) => `${one.name} ${one.title}`);
}

function caseCells(one: CaseView, glyphs: Glyphs): (string | Span)[] {
  const bad = one.worst === 'beyond tolerance' || one.worst === 'not comparable';
  return [one.name, one.state, timeText(one, glyphs), span(one.worst ?? one.why, bad ? 'alarm' : undefined)];
}

function timeText(one: CaseView, glyphs: Glyphs): string {
  if (one.seconds === null) return '';
  if (one.state !== 'running' || one.expectedSeconds === null)
    return `${one.seconds.toFixed(one.seconds < 10 ? 1 : 0)} s`;
  return `${progressBar(one.seconds / one.expectedSeconds, 6, glyphs)} ${one.seconds.toFixed(0)} s`;
}

function opened(one: CaseView, state: ScreenState, size: Size, glyphs: Glyphs): Line[] {
  const cells = one.quantities.map(quantityCells);
  const place = { columns: size.columns, room: Math.max(4, size.rows - 2) };
  return [
    line(span(one.name, 'strong'), `  ${one.title}`),
    ...tableLines(QUANTITY_HEADS, cells, state.inner, place, [3, 0], glyphs),
    ...(one.why === '' ? [] : [line(one.why)]),
  ];
}

function quantityCells(each: CaseView['quantities'][number]): (string | Span)[] {
  const bad = each.class === 'beyond tolerance' || each.class === 'not comparable';
  return [
    quantityText({ quantity: each.name, of: each.of }),
    span(each.class, bad ? 'alarm' : undefined),
    tolerancesText(each.tolerances),
    each.says,
  ];
}
