/** Cases: progress while they run, results by quantity; start, end, run the failed again, record a reference. */
import { type Line, line, row, type Size, type Span, span, widthsOf } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { listLines, matching } from './list.ts';
import { tolerancesText } from './numbers.ts';
import { type App, ask, goTo, type Pressed, progressBar, type Screen, type ScreenState, still } from './screen.ts';
import type { CaseView, Views } from './views.ts';

export const casesScreen: Screen = {
  letter: 'c',
  count: (views, state) =>
    state.depth === 0 ? cases(views, state).length : (cases(views, state)[state.chosen]?.quantities.length ?? 0),
  draw(views, state, size, glyphs) {
    const shown = cases(views, state);
    const one = shown[state.chosen];
    if (shown.length === 0) return [line('No case is declared. A case is a file under manifests/cases/.')];
    if (state.depth > 0 && one !== undefined) return opened(one, state, size, glyphs);
    const head = ['case', 'state', 'time', 'result'];
    const cells = shown.map((each) => caseCells(each, glyphs));
    const widths = widthsOf([head, ...cells], size.columns - 2, [0, 3]);
    return [
      [
        span('  '),
        ...row(
          head.map((name) => span(name, 'faint')),
          widths,
        ),
      ],
      ...listLines(shown.length, state.chosen, size.rows - 1, glyphs, (index) => row(cells[index]!, widths)),
    ];
  },
  keys: (views) => [
    ['B', 'begin this case'],
    ['T', 'try the failed again'],
    ...(views.assembly.job === null ? [] : [['E', 'end the job'] as const]),
    ['W', 'write a reference'],
    ['Enter', 'its quantities'],
  ],
  press(app, state, key) {
    const one = cases(app.views, state)[state.chosen];
    if (one === undefined) return undefined;
    if ('character' in key) return pressLetter(app, one, key.character.toLowerCase());
    if ((key.named === 'enter' || key.named === 'right') && state.depth === 1) {
      const quantity = one.quantities[state.inner]?.name;
      const index = app.views.deviations.findIndex((each) => each.case === one.name && each.quantity === quantity);
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
  const head = ['quantity', 'class', 'tolerances', ''];
  const cells = one.quantities.map((each) => {
    const bad = each.class === 'beyond tolerance' || each.class === 'not comparable';
    return [each.name, span(each.class, bad ? 'alarm' : undefined), tolerancesText(each.tolerances), each.says];
  });
  const widths = widthsOf([head, ...cells], size.columns - 2, [0, 3]);
  return [
    line(span(one.name, 'strong'), `  ${one.title}`),
    [
      span('  '),
      ...row(
        head.map((name) => span(name, 'faint')),
        widths,
      ),
    ],
    ...listLines(one.quantities.length, state.inner, Math.max(3, size.rows - 3), glyphs, (index) =>
      row(cells[index]!, widths),
    ),
    ...(one.why === '' ? [] : [line(one.why)]),
  ];
}
