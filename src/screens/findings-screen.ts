/** All that was found, gravest first: open one to read it whole, go to its line in an editor, accept it with a reason. */

import { printPlace } from '../model/place.ts';
import { printable } from '../model/printable.ts';
import { findingText } from '../report/finding-text.ts';
import { type Line, line, row, span } from './frame.ts';
import { listLines, matching } from './list.ts';
import { type App, ask, type Pressed, type Screen, type ScreenState, still } from './screen.ts';
import type { FindingView, Views } from './views.ts';

const STYLES = { stop: 'alarm', caution: 'warm', note: 'faint' } as const;

export const findingsScreen: Screen = {
  letter: 'f',
  count: (views, state) => (state.depth === 0 ? findings(views, state).length : 0),
  draw(views, state, size, glyphs) {
    const shown = findings(views, state);
    const one = shown[state.chosen];
    if (shown.length === 0)
      return [line(views.findings.length === 0 ? 'Nothing was found.' : 'Nothing found holds these words.')];
    if (state.depth > 0 && one !== undefined) return opened(one, size.columns);
    const widths = [8, 26, Math.max(10, size.columns - 38)];
    return listLines(shown.length, state.chosen, size.rows, glyphs, (index) => {
      const { finding, accepted } = shown[index]!;
      const gravity = accepted === null ? span(finding.gravity, STYLES[finding.gravity]) : span('accepted', 'faint');
      const where = finding.module === undefined ? printPlace(finding.place) : finding.module;
      return row([gravity, printable(where), printable(finding.says)], widths);
    });
  },
  keys: (_, state) => [
    ['O', 'open the file there'],
    ['G', 'give a reason to accept it'],
    ...(state.depth === 0 ? [['Enter', 'read it whole'] as const] : [['Esc', 'all findings'] as const]),
  ],
  press(app, state, key) {
    const one = findings(app.views, state)[state.chosen];
    if (one === undefined || !('character' in key)) return undefined;
    return pressLetter(app, one, key.character.toLowerCase());
  },
};

function pressLetter(app: App, one: FindingView, letter: string): Pressed | undefined {
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
    line(''),
    line(span(`"mortise help ${one.finding.kind}" explains it.`, 'faint')),
  ];
}
