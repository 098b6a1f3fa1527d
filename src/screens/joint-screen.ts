/**
 * Where two modules meet: the expectation on the left half, the offer on the right, a row a quantity, cut to match.
 * What does not match stands in the seam between the halves.
 */

import { shortNumber } from '../model/short-number.ts';
import { axisOf, bar } from './axis.ts';
import { fitLine, type Line, line, type Size, span } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import { listLines, matching } from './list.ts';

import { type Screen, type ScreenState, still } from './screen.ts';
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
    return listLines(shown.length, state.chosen, size.rows, glyphs, (index) => {
      const one = shown[index]!;
      return line(
        `${one.expecting.module} `,
        span(glyphs.seam[one.seam], SEAM_STYLES[one.seam]),
        ` ${one.offering.module}  ${one.contract}  `,
        span(SEAM_WORDS[one.seam], SEAM_STYLES[one.seam]),
      );
    });
  },
  keys: (_, state) =>
    state.depth === 0
      ? [['Enter', 'open the joint']]
      : [
          ['W', 'write the adapter'],
          ['Esc', 'all joints'],
        ],
  press(app, state, key) {
    const joint = joints(app.views, state)[state.chosen];
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
  const seam = 7;
  const half = Math.floor((size.columns - 2 - seam) / 2);
  const head = halves(
    [span(`${joint.expecting.module} ${joint.expecting.version} expects`, 'strong')],
    [],
    [span(`${joint.offering.module} ${joint.offering.version} offers`, 'strong')],
    half,
    seam,
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
        [span(glyphs.seam[one.seam], SEAM_STYLES[one.seam])],
        [span(halfText(one.right), SEAM_STYLES[one.seam])],
        half,
        seam,
      );
    }),
    line(''),
    ...detail,
  ];
}

/** Left half set to the right against the seam, right half to the left, so that equal halves meet. */
function halves(left: Line, middle: Line, right: Line, half: number, seam: number): Line {
  const text = fitLine(left, half);
  const sign = middle.map((one) => one.text).join('');
  const before = Math.max(0, Math.floor((seam - sign.length) / 2));
  return [
    ...text,
    span(' '.repeat(before)),
    ...middle,
    span(' '.repeat(Math.max(0, seam - before - sign.length))),
    ...fitLine(right, half),
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
