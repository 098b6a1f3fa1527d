/**
 * Where two modules meet: the expectation on the left half, the offer on the right, a row a quantity, cut to match.
 * What does not match stands in the seam between the halves.
 */

import { shortNumber } from '../model/short-number.ts';
import { drawJoints } from '../report/html/draw-joints.ts';
import { standaloneSvg } from '../report/html/standalone-svg.ts';
import textWidth, { cutToWidth } from '../report/text-width.ts';
import { jointDrawing } from './assembly-screen.ts';
import { axisOf, bar } from './axis.ts';
import { fitLine, type Line, line, lineText, type Size, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { listLines, matching } from './list.ts';

import { type Screen, type ScreenState, still, withState } from './screen.ts';
import type { HalfRow, JointRow, JointView, Seam, Views } from './views.ts';

const SEAM_WORDS: Readonly<Record<Seam, string>> = { fits: 'fits', adapter: 'adapter', unfit: 'does not fit' };
const SEAM_STYLES = { fits: undefined, adapter: 'warm', unfit: 'alarm' } as const;

export const jointScreen: Screen = {
  letter: 'j',
  count: (views, state) =>
    state.depth === 0 ? joints(views, state).length : (joints(views, state)[state.chosen]?.rows.length ?? 0),
  draw(views, state, size, glyphs) {
    const shown = joints(views, state);
    const joint = shown[state.chosen];
    if (state.depth > 0 && joint !== undefined) return opened(joint, state, size, glyphs);
    if (shown.length === 0) return [line('No joint: no module here expects what another offers.')];
    const words = Math.max(...shown.map((one) => one.contract.length)) + 18;
    const half = Math.max(8, Math.floor((size.columns - 2 - SEAM_WIDTH - words) / 2));
    return listLines(shown.length, state.chosen, size.rows, glyphs, (index) => {
      const one = shown[index]!;
      const left = cutToWidth(one.expecting.module, half);
      return [
        span(' '.repeat(half - textWidth(left))),
        ...halves([span(left)], seamOf(one.seam, glyphs), [span(one.offering.module)], textWidth(left), half),
        span(`  ${one.contract}  `, 'faint'),
        span(SEAM_WORDS[one.seam], SEAM_STYLES[one.seam]),
      ];
    });
  },
  table: (views, state) => [
    ['expects', 'seam', 'offers', 'contract', 'quantity', 'says'],
    ...joints(views, state)
      .filter((_, index) => state.depth === 0 || index === state.chosen)
      .flatMap((one) =>
        one.rows.map((each) => [
          one.expecting.module,
          SEAM_WORDS[each.seam],
          one.offering.module,
          one.contract,
          each.quantity,
          each.says,
        ]),
      ),
  ],
  drawing: (views) => standaloneSvg(drawJoints(jointDrawing(views))),
  keys: (_, state) =>
    state.depth === 0
      ? [['Enter', 'open the joint']]
      : [
          ['W', 'write the adapter'],
          ['Esc', 'all joints'],
        ],
  press(app, state, key) {
    const joint = joints(app.views, state)[state.chosen];
    if (
      state.depth === 0 &&
      joint !== undefined &&
      'named' in key &&
      (key.named === 'enter' || key.named === 'right')
    ) {
      const first = joint.rows.findIndex((one) => one.seam !== 'fits');
      return still(withState(app, { depth: 1, inner: Math.max(0, first) }));
    }
    if (state.depth === 0 || joint === undefined || !('character' in key) || key.character.toLowerCase() !== 'w')
      return undefined;
    if (joint.adapter === null)
      return still({
        ...app,
        message: joint.seam === 'fits' ? 'it fits: no adapter is needed' : 'no adapter can mend this joint',
      });
    return { app, wishes: [{ do: 'write file', name: joint.adapter.file, text: joint.adapter.text }] };
  },
};

function joints(views: Views, state: ScreenState): readonly JointView[] {
  return matching(views.joints, state.typed, (one) => `${one.contract} ${one.expecting.module} ${one.offering.module}`);
}

function opened(joint: JointView, state: ScreenState, size: Size, glyphs: Glyphs): Line[] {
  const half = Math.floor((size.columns - 2 - SEAM_WIDTH) / 2);
  const head = halves(
    [span(`${joint.expecting.module} ${joint.expecting.version} expects`, 'strong')],
    [],
    [span(`${joint.offering.module} ${joint.offering.version} offers`, 'strong')],
    half,
  );
  const chosen = joint.rows[state.inner];
  const detail = chosen === undefined ? [] : rowDetail(chosen, size, glyphs);
  const room = Math.max(3, size.rows - 3 - detail.length);
  return [
    line(span(`contract ${joint.contract}`, 'faint'), '  ', span(SEAM_WORDS[joint.seam], SEAM_STYLES[joint.seam])),
    [span('  '), ...head],
    ...listLines(joint.rows.length, state.inner, room, glyphs, (index) => {
      const one = joint.rows[index]!;
      return halves(
        [span(`${one.quantity}  ${halfText(one.left)}`)],
        seamOf(one.seam, glyphs),
        [span(halfText(one.right), SEAM_STYLES[one.seam])],
        half,
      );
    }),
    line(''),
    ...detail,
  ];
}

const SEAM_WIDTH = 7;

function seamOf(seam: Seam, glyphs: Glyphs): Line {
  return [span(glyphs.seam[seam], SEAM_STYLES[seam])];
}

/** The left half ends at the seam and the right half begins there, each cut to its width, so that the seams stand in one column. */
function halves(left: Line, middle: Line, right: Line, leftWidth: number, rightWidth = leftWidth): Line {
  const sign = lineText(middle).length;
  const before = Math.max(0, Math.floor((SEAM_WIDTH - sign) / 2));
  return [
    ...fitLine(left, leftWidth),
    span(' '.repeat(before)),
    ...middle,
    span(' '.repeat(Math.max(0, SEAM_WIDTH - before - sign))),
    ...fitLine(right, rightWidth),
  ];
}

function halfText(half: HalfRow): string {
  return [half.unit, half.intent, half.argument].filter((text) => text !== '').join('  ');
}

function rowDetail(one: JointRow, size: Size, glyphs: Glyphs): Line[] {
  const lines: Line[] = [
    line(
      span(`${one.quantity}: ${SEAM_WORDS[one.seam]}`, SEAM_STYLES[one.seam] ?? 'strong'),
      one.says === '' ? '' : `  ${one.says}`,
    ),
  ];
  if (one.left.conventions !== '' || one.right.conventions !== '') {
    lines.push(
      line(`conventions  expects ${one.left.conventions || 'none'}  offers ${one.right.conventions || 'none'}`),
    );
  }
  const axis = axisOf([one.left.domain, one.right.domain, one.footprint]);
  if (axis === null) return lines;
  const width = Math.max(10, size.columns - 34);
  const draw = (name: string, range: readonly [number | null, number | null] | null, fill: string) =>
    range === null
      ? []
      : [
          line(
            name.padEnd(10),
            bar(axis, range, width, fill, glyphs.unbounded),
            `  ${shortNumber(range[0])} to ${shortNumber(range[1])}`,
          ),
        ];
  lines.push(
    ...draw('expects', one.left.domain, glyphs.barExpect),
    ...draw('offers', one.right.domain, glyphs.barOffer),
    ...draw('visited', one.footprint, glyphs.barFootprint),
  );
  return lines;
}
