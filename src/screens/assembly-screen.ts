/** Home: every component with the module in it and how it stands; answers whether the campaign can start. */
import { type Line, line, row, type Span, span, widthsOf } from './frame.ts';
import { listLines, matching } from './list.ts';
import { goTo, type Screen, type ScreenState, still } from './screen.ts';
import type { AssemblyView, PartView, Views } from './views.ts';

export const assemblyScreen: Screen = {
  letter: 'a',
  count: (views, state) => parts(views, state).length,
  draw(views, state, size, glyphs) {
    const { assembly } = views;
    const top = [...standing(assembly), line('')];
    const below = [
      line(''),
      ...cases(views),
      ...campaign(assembly),
      ...assembly.notices.map((notice) => line(span('notice ', 'warm'), notice)),
    ];
    const shown = parts(views, state);
    const head = ['component', 'module', 'version', 'validated', 'joints', 'undeclared'];
    const cells = shown.map(partCells);
    const widths = widthsOf([head, ...cells], size.columns - 2, [0, 1, 3]);
    const room = Math.max(3, size.rows - top.length - below.length - 1);
    return [
      ...top,
      [
        span('  '),
        ...row(
          head.map((name) => span(name, 'faint')),
          widths,
        ),
      ],
      ...listLines(shown.length, state.chosen, room, glyphs, (index) => row(cells[index]!, widths)),
      ...below,
    ];
  },
  keys: () => [
    ['Enter', 'history of the module'],
    ['J', 'its joints'],
    ['F', 'findings'],
  ],
  press(app, state, key) {
    if (!('named' in key) || (key.named !== 'enter' && key.named !== 'right')) return undefined;
    const part = parts(app.views, state)[state.chosen];
    const index = app.views.histories.findIndex((history) => history.module === part?.module);
    return still(
      index < 0
        ? { ...app, message: 'no history was read for this module' }
        : goTo(app, 'history', { chosen: index, depth: 1, inner: 0 }),
    );
  },
};

function parts(views: Views, state: ScreenState): readonly PartView[] {
  return matching(views.assembly.parts, state.typed, (part) => `${part.component} ${part.module}`);
}

function standing(view: AssemblyView): Line[] {
  const changed = view.changed.length === 0 ? 'work tree clean' : `${view.changed.length} files changed since`;
  const question = 'Can the campaign start?  ';
  const answer =
    view.outcome === null
      ? span('not audited yet', 'warm')
      : view.outcome === 'held'
        ? span('No: held', 'alarm')
        : span(
            view.outcome === 'cleared' ? 'Yes: cleared' : 'Yes, with cautions',
            view.outcome === 'cleared' ? 'good' : 'warm',
          );
  return [
    line(`revision ${view.revision}  ${changed}`),
    line(question, answer),
    ...view.why.slice(0, 3).map((why) => line(`  - ${why}`)),
    ...(view.why.length > 3 ? [line(`  and ${view.why.length - 3} more, on the findings screen`)] : []),
  ];
}

function partCells(part: PartView): (string | Span)[] {
  const { fits, adapter, unfit } = part.joints;
  const joints =
    unfit > 0
      ? span(`${unfit} unfit`, 'alarm')
      : adapter > 0
        ? span(`${adapter} adapter`, 'warm')
        : span(fits === 0 ? 'none' : `${fits} fit`);
  const drift = part.undeclared > 0 ? span(String(part.undeclared), 'alarm') : span('0');
  const validated = part.notRunnable === null ? part.validated : part.notRunnable;
  return [part.component, part.module, part.version, validated, joints, drift];
}

function cases(views: Views): Line[] {
  if (views.cases.length === 0) return [line('cases      none declared')];
  return views.cases.slice(0, 5).map((one, index) => {
    const style = one.worst === 'beyond tolerance' || one.worst === 'not comparable' ? 'alarm' : undefined;
    return line(index === 0 ? 'cases      ' : '           ', `${one.name}  `, span(one.worst ?? one.state, style));
  });
}

function campaign(view: AssemblyView): Line[] {
  return (view.campaign?.rows ?? []).map((one, index) =>
    line(
      index === 0 ? 'campaign   ' : '           ',
      `${one.name.padEnd(11)} ${one.asks.padEnd(14)} of ${one.has.padEnd(14)} `,
      span(one.over ? 'over' : 'within', one.over ? 'alarm' : undefined),
    ),
  );
}
