/** All that was found, gravest first: open one to read it whole, go to its line in an editor, accept it with a reason. */

import { printPlace } from '../model/place.ts';
import { printable } from '../model/printable.ts';
import { explanationText } from '../report/explanation-text.ts';
import { explanations } from '../report/explanations/all.ts';
import { findingText } from '../report/finding-text.ts';
import { type Line, line, row, span } from './frame.ts';
import { listLines, matching } from './list.ts';
import { type App, ask, type Pressed, type Screen, type ScreenState, still, withState } from './screen.ts';
import type { FindingView, Views } from './views.ts';

const STYLES = { stop: 'alarm', caution: 'warm', note: 'faint' } as const;

export const findingsScreen: Screen = {
  letter: 'f',
  count: (views, state) => (state.depth === 0 ? findings(views, state).length : 0),
  draw(views, state, size, glyphs) {
    const shown = findings(views, state);
    if (shown.length === 0)
      return [
        line(
          views.findings.length > 0
            ? 'Nothing found holds these words.'
            : views.assembly.outcome === null
              ? 'Nothing was found so far.'
              : 'Nothing was found.',
        ),
      ];
    const widths = [8, Math.min(26, Math.floor(size.columns / 4)), 0];
    widths[2] = Math.max(10, size.columns - widths[0]! - widths[1]! - 6);
    return listLines(shown.length, state.chosen, size.rows, glyphs, (index) => {
      const { finding, accepted } = shown[index]!;
      const gravity = accepted === null ? span(finding.gravity, STYLES[finding.gravity]) : span('accepted', 'faint');
      const where = finding.module ?? placeText(finding);
      return row([gravity, printable(where), printable(finding.says)], widths);
    });
  },
  page(views, state, columns) {
    const one = findings(views, state)[state.chosen];
    if (state.depth === 0 || one === undefined) return null;
    return state.depth === 2 ? explained(one, columns) : opened(one, columns);
  },
  table: (views, state) => [
    ['gravity', 'kind', 'module', 'place', 'says', 'next', 'accepted'],
    ...findings(views, state).map(({ finding, accepted }) => [
      finding.gravity,
      finding.kind,
      finding.module ?? '',
      printPlace(finding.place),
      finding.says,
      finding.next,
      accepted ?? '',
    ]),
  ],
  keys: (_, state) => [
    ['O', 'open the file'],
    ['G', 'accept it'],
    ['M', 'what it means'],
    ...(state.depth === 0 ? [['Enter', 'read it whole'] as const] : [['Esc', 'all findings'] as const]),
  ],
  press(app, state, key) {
    const one = findings(app.views, state)[state.chosen];
    if (one === undefined || !('character' in key)) return undefined;
    return pressLetter(app, one, key.character.toLowerCase());
  },
};

function pressLetter(app: App, one: FindingView, letter: string): Pressed | undefined {
  if (letter === 'm') return still(withState(app, { depth: 2, scroll: 0 }));
  if (letter === 'o') return { app, wishes: [{ do: 'edit', finding: one.finding }] };
  if (letter !== 'g') return undefined;
  if (one.accepted !== null) return still({ ...app, message: 'it is accepted already' });
  return ask(app, {
    asks: 'Why may this stand? (Esc: it may not)',
    answer: '',
    wants: 'words',
    wish: (reason) => ({ do: 'accept', finding: one.finding, reason }),
  });
}

/** Without its folders, which the opened finding tells. */
function placeText({ place }: FindingView['finding']): string {
  return `${place.file.slice(place.file.lastIndexOf('/') + 1)}:${place.line}`;
}

function findings(views: Views, state: ScreenState): readonly FindingView[] {
  return matching(
    views.findings,
    state.typed,
    ({ finding }) => `${finding.gravity} ${finding.kind} ${finding.module ?? ''} ${finding.place.file} ${finding.says}`,
  );
}

function opened(one: FindingView, columns: number): Line[] {
  const text = findingText(one.finding, { width: columns, colour: false });
  return [
    ...text
      .trimEnd()
      .split('\n')
      .map((each) => line(each)),
    ...(one.accepted === null ? [] : [line(''), line(span(`accepted: ${one.accepted}`, 'faint'))]),
  ];
}

function explained(one: FindingView, columns: number): Line[] {
  return explanationText(one.finding.kind, explanations[one.finding.kind], { width: columns, colour: false })
    .trimEnd()
    .split('\n')
    .map((each) => line(each));
}
