/** One quantity along its profile: result against reference, how much of the tolerance is used where, the norms beside it. */

import { shortNumber } from '../model/short-number.ts';
import { plotProfileSvg } from '../report/html/plot-profile.ts';
import { standaloneSvg } from '../report/html/standalone-svg.ts';
import { cellText, type Line, line, type Size, type Span, span, spread } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { matching } from './list.ts';
import { tolerancesText } from './numbers.ts';
import { plotProfile } from './plot.ts';
import { type App, type Key, type Pressed, type Screen, type ScreenState, still, withState } from './screen.ts';
import { tableLines } from './table-lines.ts';
import type { DeviationView, Views } from './views.ts';

const HEADS = ['case', 'quantity', 'class', 'tolerances'];

export const deviationScreen: Screen = {
  letter: 'd',
  count: (views, state) => (state.depth === 0 ? deviations(views, state).length : 0),
  draw(views, state, size, glyphs) {
    const shown = deviations(views, state);
    const one = shown[state.chosen];
    if (shown.length === 0) return [line('Nothing was compared yet. Run the cases first.')];
    if (state.depth > 0 && one !== undefined) return drawDeviation(one, state, size, glyphs);
    return tableLines(
      HEADS,
      shown.map(listCells),
      state.chosen,
      { columns: size.columns, room: size.rows },
      [1, 0],
      glyphs,
    );
  },
  table(views, state) {
    const one = deviations(views, state)[state.chosen];
    if (state.depth === 0 || one === undefined)
      return [HEADS, ...deviations(views, state).map((each) => listCells(each).map(cellText))];
    if (one.profile === null) return [HEADS, listCells(one).map(cellText)];
    const { along, reference, result, band } = one.profile;
    const unit = one.unit === '' ? '' : ` [${one.unit}]`;
    return [
      [
        `${along.name}${along.unit === '' ? '' : ` [${along.unit}]`}`,
        ...['reference', 'result', 'allowed'].map((name) => `${name}${unit}`),
      ],
      ...along.values.map((value, index) =>
        [value, reference[index], result[index], band[index]].map((each) => String(each ?? '')),
      ),
    ];
  },
  drawing(views, state) {
    const one = deviations(views, state)[state.chosen];
    if (state.depth === 0 || one === undefined || one.profile === null) return null;
    const { profile, ...deviation } = one;
    return standaloneSvg(plotProfileSvg(deviation, profile));
  },
  keys: (_, state) =>
    state.depth === 0
      ? [['Enter', 'draw it']]
      : [
          ['Up Down', 'nearer, farther'],
          ['Left Right', 'along'],
          ['L', 'log'],
          ['N', 'next quantity'],
          ['Esc', 'all'],
        ],
  press(app, state, key) {
    if (state.depth === 0) return undefined;
    if ('character' in key && key.character.toLowerCase() === 'n') {
      const count = Math.max(1, deviations(app.views, state).length);
      return still(withState(app, { chosen: (state.chosen + 1) % count, from: 0, to: 1 }));
    }
    return lookAlong(app, state, key);
  },
};

/** Nearer, farther and along the axis of a drawn deviation; its values as logarithms. */
export function lookAlong(app: App, state: ScreenState, key: Key): Pressed | undefined {
  const [width, middle] = [state.to - state.from, (state.to + state.from) / 2];
  const sight = (from: number, to: number) => {
    const shift = Math.max(0, -from) - Math.max(0, to - 1);
    return still(withState(app, { from: Math.max(0, from + shift), to: Math.min(1, to + shift) }));
  };
  if ('character' in key)
    return key.character.toLowerCase() === 'l' ? still(withState(app, { logValue: !state.logValue })) : undefined;
  switch (key.named) {
    case 'up':
      return sight(middle - width / 4, middle + width / 4);
    case 'down':
      return sight(middle - width, middle + width);
    case 'left':
      return sight(state.from - width / 4, state.to - width / 4);
    case 'right':
      return sight(state.from + width / 4, state.to + width / 4);
    default:
      return undefined;
  }
}

function deviations(views: Views, state: ScreenState): readonly DeviationView[] {
  return matching(views.deviations, state.typed, (one) => `${one.case} ${one.quantity}`);
}

function listCells(one: DeviationView): (string | Span)[] {
  return [one.case, quantityText(one), span(one.class, bad(one) ? 'alarm' : undefined), tolerancesText(one.tolerances)];
}

/** A total that should be conserved is told apart from the field of the same name. */
export function quantityText(one: Pick<DeviationView, 'quantity' | 'of'>): string {
  return one.of === 'conserved' ? `${one.quantity}, drift along the run` : one.quantity;
}

function bad(one: DeviationView): boolean {
  return one.class === 'beyond tolerance' || one.class === 'not comparable';
}

/** One deviation, drawn: also for what an exchange moved. */
export function drawDeviation(one: DeviationView, state: ScreenState, size: Size, glyphs: Glyphs): Line[] {
  const title = spread(
    line(span(`${one.case}  ${one.quantity}`, 'strong'), one.unit === '' ? '' : ` [${one.unit}]`),
    line(span(one.class, bad(one) ? 'alarm' : 'good'), `  ${tolerancesText(one.tolerances)}`),
    size.columns,
  );
  const norms = normLines(one);
  if (one.profile === null) return [title, ...norms, ...(one.why === '' ? [] : [line(one.why)])];
  const margin = 10;
  const width = Math.max(10, size.columns - margin);
  const height = Math.max(3, size.rows - norms.length - 5);
  const plot = plotProfile(
    one.profile,
    { from: state.from, to: state.to, logValue: state.logValue },
    width,
    height,
    glyphs,
  );
  const labels = (index: number) =>
    (index === 0 ? shortNumber(plot.high) : index === height - 1 ? shortNumber(plot.low) : '').padStart(margin - 1);
  const along = one.profile.along;
  return [
    title,
    line(' '.repeat(margin + plot.worstColumn), span(glyphs.worst, 'alarm')),
    ...plot.rows.map((text, index) => line(span(labels(index), 'faint'), ' ', text)),
    line(span('used'.padStart(margin - 1), 'faint'), ' ', ...usedSpans(plot.used, plot.beyond)),
    spread(
      line(' '.repeat(margin), shortNumber(plot.firstAlong)),
      line(`${along.name}${along.unit === '' ? '' : ` [${along.unit}]`}  ${shortNumber(plot.lastAlong)}`),
      size.columns,
    ),
    ...norms,
    ...(one.why === '' ? [] : [line(one.why)]),
  ];
}

function usedSpans(used: string, beyond: readonly boolean[]): Line {
  return [...used].map((character, index) => (beyond[index] ? span(character, 'alarm') : span(character)));
}

function normLines(one: DeviationView): Line[] {
  const { measures, tolerance } = one;
  if (measures === null) return [];
  const allowed = [
    tolerance?.relative === undefined ? '' : `relative ${shortNumber(tolerance.relative)}`,
    tolerance?.absolute === undefined ? '' : `absolute ${shortNumber(tolerance.absolute)}`,
    tolerance?.ulp === undefined ? '' : `${tolerance.ulp} ulp`,
  ].filter((text) => text !== '');
  const worst = measures.worst;
  return [
    line(
      `largest  absolute ${shortNumber(measures.maxAbsolute)}  relative ${shortNumber(measures.maxRelative)}  ulp ${shortNumber(measures.maxUlp)}  of ${measures.count} values, ${measures.identical} identical`,
    ),
    line(
      `norms    L1 ${shortNumber(measures.l1)}  L2 ${shortNumber(measures.l2)}  Linf ${shortNumber(measures.linf)}  allowed ${allowed.join(' + ') || 'nothing'}${tolerance === null ? '' : ` (${tolerance.norm})`}`,
    ),
    ...(worst === null
      ? []
      : [
          line(
            `worst    value ${worst.index + 1}: ${worst.result} against ${worst.reference}${worst.along === undefined ? '' : ` at ${shortNumber(worst.along.value)} ${worst.along.unit}`}`,
          ),
        ]),
  ];
}
