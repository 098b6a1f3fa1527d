/** Home: every component with the module in it and how it stands; answers whether the campaign can start. */
import { drawJoints } from '../report/html/draw-joints.ts';
import { standaloneSvg } from '../report/html/standalone-svg.ts';
import { cellText, type Line, line, type Span, span } from './frame.ts';
import { matching } from './list.ts';
import { goTo, type Screen, type ScreenState, still } from './screen.ts';
import { tableLines } from './table-lines.ts';
import type { AssemblyView, PartView, Views } from './views.ts';

const HEADS = ['component', 'module', 'version', 'validated', 'joints', 'drift'];

export const assemblyScreen: Screen = {
  letter: 'a',
  count: (views, state) => parts(views, state).length,
  draw(views, state, size, glyphs) {
    const { assembly } = views;
    const top = [...standing(views), line('')];
    const below = [
      line(''),
      ...cases(views),
      ...campaign(assembly),
      ...assembly.notices.map((notice) => line(span('notice ', 'warm'), notice)),
    ];
    const room = Math.max(4, size.rows - top.length - below.length);
    const cells = parts(views, state).map(partCells);
    const place = { columns: size.columns, room };
    return [...top, ...tableLines(HEADS, cells, state.chosen, place, [3, 1, 0], glyphs), ...below];
  },
  table: (views, state) => [HEADS, ...parts(views, state).map((part) => partCells(part).map(cellText))],
  drawing: (views) => standaloneSvg(drawJoints(jointDrawing(views))),
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

function standing({ assembly: view }: Views): Line[] {
  const changed = view.changed.length === 0 ? 'work tree clean' : `${view.changed.length} files changed since`;
  const asOf = view.asOf === null ? '' : `  as of ${view.asOf}, being read again`;
  return [
    line(`revision ${view.revision}  ${changed}`, span(asOf, 'faint')),
    line('Can the campaign start?  ', answer(view)),
    ...view.why.slice(0, 3).map((why) => line(`  - ${why}`)),
    ...(view.why.length > 3 ? [line(`  and ${view.why.length - 3} more, on the findings screen`)] : []),
  ];
}

function answer({ outcome, open, job }: AssemblyView): Span {
  if (outcome === null) return span(job === null ? 'not audited yet' : 'being audited', 'warm');
  if (open > 0) return span(`not known: ${open} ${open === 1 ? 'case is' : 'cases are'} not run (C, then A)`, 'warm');
  if (outcome === 'held') return span('No: held', 'alarm');
  return outcome === 'cleared' ? span('Yes: cleared', 'good') : span('Yes, with cautions', 'warm');
}

/** The joints between the modules of the assembly, for the drawing of the report. */
export function jointDrawing({
  assembly,
  joints,
}: Pick<Views, 'assembly' | 'joints'>): Parameters<typeof drawJoints>[0] {
  const states = { fits: 'fits', adapter: 'fits through an adapter', unfit: 'does not fit' } as const;
  return {
    draw: 'joints',
    title: `Joints of ${assembly.title}`,
    modules: assembly.parts.map(({ module, component }) => ({ module, component })),
    joints: joints.map((one) => ({
      from: one.expecting.module,
      to: one.offering.module,
      contract: one.contract,
      state: states[one.seam],
    })),
  };
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
