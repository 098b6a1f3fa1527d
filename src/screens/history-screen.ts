/** A module through time: its commits and versions on a line, what changed at each, the bump asked against the bump declared. */
import { type Line, line, row, type Size, span, widthsOf } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { listLines, matching } from './list.ts';
import { type Screen, type ScreenState, still, withState } from './screen.ts';
import type { HistoryView, StepView, Views } from './views.ts';

export const historyScreen: Screen = {
  letter: 'h',
  count: (views, state) =>
    state.depth === 0 ? histories(views, state).length : (histories(views, state)[state.chosen]?.steps.length ?? 0),
  draw(views, state, size, glyphs) {
    const shown = histories(views, state);
    const history = shown[state.chosen];
    if (state.depth > 0 && history !== undefined)
      return state.depth === 1 ? steps(history, state, size, glyphs) : step(history, state);
    if (shown.length === 0)
      return [line('No history was read. Run "mortise audit" or "mortise drift" in a git repository.')];
    return listLines(shown.length, state.chosen, size.rows, glyphs, (index) => {
      const one = shown[index]!;
      const undeclared = one.steps.filter((each) => each.undeclared).length;
      return line(
        `${one.module.padEnd(24)} ${String(one.steps.length).padStart(4)} steps  `,
        span(undeclared === 0 ? 'all declared' : `${undeclared} undeclared`, undeclared === 0 ? undefined : 'alarm'),
      );
    });
  },
  keys: (_, state) =>
    state.depth === 0
      ? [['Enter', 'open the module']]
      : state.depth === 1
        ? [
            ['Enter', 'open the step'],
            ['Esc', 'all modules'],
          ]
        : [['Esc', 'all steps']],
  press(app, state, key) {
    if ('named' in key && (key.named === 'enter' || key.named === 'right') && state.depth === 1)
      return still(withState(app, { depth: 2 }));
    if ('named' in key && key.named === 'back' && state.depth === 2) return still(withState(app, { depth: 1 }));
    return undefined;
  },
};

function histories(views: Views, state: ScreenState): readonly HistoryView[] {
  return matching(views.histories, state.typed, (one) => one.module);
}

function steps(history: HistoryView, state: ScreenState, size: Size, glyphs: Glyphs): Line[] {
  const lineage = history.lineage.slice(0, 3).map((text) => line(span(text, 'faint')));
  const head = ['version', 'date', 'commit', 'subject', 'asks', 'declared', ''];
  const cells = history.steps.map((one) => [
    one.version ?? '',
    one.date,
    one.commit.slice(0, 9),
    one.subject,
    one.asked,
    one.declared,
    one.undeclared ? span('undeclared', 'alarm') : span(''),
  ]);
  const widths = widthsOf([head, ...cells], size.columns - 2, [3]);
  return [
    line(span(history.module, 'strong'), `  ${history.steps.length} steps`),
    [
      span('  '),
      ...row(
        head.map((name) => span(name, 'faint')),
        widths,
      ),
    ],
    ...listLines(history.steps.length, state.inner, Math.max(3, size.rows - 2 - lineage.length), glyphs, (index) =>
      row(cells[index]!, widths),
    ),
    ...lineage,
  ];
}

function step(history: HistoryView, state: ScreenState): Line[] {
  const one: StepView | undefined = history.steps[state.inner];
  if (one === undefined) return [line('No such step.')];
  return [
    line(span(`${history.module}  ${one.version ?? ''}`, 'strong'), `  ${one.date}  ${one.author}`),
    line(`${one.commit}  ${one.subject}`),
    line(`asks for ${one.asked}, declared ${one.declared}  `, one.undeclared ? span('undeclared', 'alarm') : ''),
    line(''),
    ...one.changes.flatMap((change) => [
      line(span(change.says)),
      ...(change.before === '' ? [] : [line(span('  before  ', 'faint'), change.before)]),
      ...(change.after === '' ? [] : [line(span('  after   ', 'faint'), change.after)]),
    ]),
  ];
}
