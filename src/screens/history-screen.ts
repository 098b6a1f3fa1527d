/** A module through time: its commits and versions on a line, what changed at each, the bump asked against the bump declared. */
import { drawVersions } from '../report/html/draw-versions.ts';
import { standaloneSvg } from '../report/html/standalone-svg.ts';
import { cellText, type Line, line, type Size, type Span, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { matching } from './list.ts';
import { type Screen, type ScreenState, still, withState } from './screen.ts';
import { tableLines } from './table-lines.ts';
import { CROSSES_THE_JOINT, timeLines } from './time-lines.ts';
import type { HistoryView, StepView, Views } from './views.ts';

export const historyScreen: Screen = {
  letter: 'h',
  count: (views, state) =>
    state.depth === 0
      ? histories(views, state).length
      : stepsShown(histories(views, state)[state.chosen], state).length,
  draw(views, state, size, glyphs) {
    const shown = histories(views, state);
    const history = shown[state.chosen];
    if (state.depth > 0 && history !== undefined) return steps(history, state, size, glyphs);
    if (shown.length === 0)
      return [
        line(
          views.assembly.job === null ? 'No history: this code is in no git repository.' : 'The history is being read.',
        ),
      ];
    const cells = shown.map((one) => listCells(one));
    return tableLines(LIST_HEADS, cells, state.chosen, { columns: size.columns, room: size.rows }, [5, 0], glyphs);
  },
  page(views, state) {
    const history = histories(views, state)[state.chosen];
    return state.depth === 2 && history !== undefined ? step(history, state) : null;
  },
  table(views, state) {
    const shown = histories(views, state);
    const history = shown[state.chosen];
    return state.depth > 0 && history !== undefined
      ? [STEP_HEADS, ...stepsShown(history, state).map((one) => stepCells(one).map(cellText))]
      : [LIST_HEADS, ...shown.map((one) => listCells(one).map(cellText))];
  },
  drawing(views, state) {
    const history = histories(views, state)[state.chosen];
    if (history === undefined || state.depth === 0) return null;
    const steps = history.steps.map((one) => ({ ...one, says: one.changes[0]?.says ?? one.subject }));
    return standaloneSvg(drawVersions({ draw: 'versions', title: history.module, steps }));
  },
  keys: (_, state) =>
    state.depth === 0
      ? [['Enter', 'open the module']]
      : state.depth === 1
        ? [
            ['Enter', 'open the step'],
            ['I', state.narrow ? 'all steps' : 'interface steps only'],
            ['Esc', 'all modules'],
          ]
        : [['Esc', 'all steps']],
  press(app, state, key) {
    if ('character' in key && key.character.toLowerCase() === 'i' && state.depth === 1)
      return still(withState(app, { narrow: !state.narrow, inner: 0 }));
    if ('named' in key && (key.named === 'enter' || key.named === 'right') && state.depth === 1)
      return still(withState(app, { depth: 2, scroll: 0 }));
    return undefined;
  },
};

function histories(views: Views, state: ScreenState): readonly HistoryView[] {
  return matching(views.histories, state.typed, (one) => one.module);
}

const LIST_HEADS = ['module', 'version', 'steps', 'undeclared', 'last step', ''];

function listCells(one: HistoryView): (string | Span)[] {
  const undeclared = one.steps.filter((each) => each.undeclared).length;
  const last = one.steps.at(-1);
  return [
    one.module,
    one.steps.findLast((each) => each.version !== null)?.version ?? '',
    String(one.steps.length),
    undeclared === 0 ? span('0') : span(String(undeclared), 'alarm'),
    last?.date ?? '',
    last?.subject ?? '',
  ];
}

const STEP_HEADS = ['version', 'date', 'commit', 'subject', 'asks', 'declared', ''];

function stepCells(one: StepView): (string | Span)[] {
  return [
    one.version ?? '',
    one.date,
    one.commit.slice(0, 9),
    one.subject,
    one.asked,
    one.declared,
    one.undeclared ? span('undeclared', 'alarm') : span(''),
  ];
}

/** All steps, or those that whoever is plugged to the module can notice. */
function stepsShown(history: HistoryView | undefined, state: ScreenState): readonly StepView[] {
  const all = history?.steps ?? [];
  return state.narrow ? all.filter((one) => one.undeclared || CROSSES_THE_JOINT.has(one.asked)) : all;
}

function steps(history: HistoryView, state: ScreenState, size: Size, glyphs: Glyphs): Line[] {
  const lineage = history.lineage.slice(0, 3).map((text) => line(span(text, 'faint')));
  const all = stepsShown(history, state);
  const through = timeLines(all, state.inner, size.columns, glyphs);
  const room = Math.max(4, size.rows - 2 - through.length - lineage.length);
  const cells = all.map(stepCells);
  return [
    line(span(history.module, 'strong'), `  ${all.length} of ${history.steps.length} steps`),
    ...through,
    line(''),
    ...tableLines(STEP_HEADS, cells, state.inner, { columns: size.columns, room }, [3], glyphs),
    ...lineage,
  ];
}

function step(history: HistoryView, state: ScreenState): Line[] {
  const one: StepView | undefined = stepsShown(history, state)[state.inner];
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
