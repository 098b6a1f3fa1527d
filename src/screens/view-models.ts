/** An audit and a register turned into what the screens show. Pure. */

import type { Audit } from '../audit/audit.ts';
import type { GatheredCode } from '../audit/gather.ts';
import { adapterSource } from '../fit/adapter.ts';
import type { Half, Joint, JointState } from '../fit/joint.ts';
import { dayOf } from '../history/commit-text.ts';
import type { ModuleStep } from '../history/module-step.ts';
import { SAFETY_CAUTION } from '../model/caution.ts';
import type { Deviation } from '../model/deviation.ts';
import { groupBy } from '../model/group.ts';
import type { Domain, ManifestSet, Range } from '../model/manifest.ts';
import { printable } from '../model/printable.ts';
import { demandText, validatedText } from '../report/audit-report.ts';
import { effectLines } from '../report/effect-text.ts';
import type { CaseOutcome } from '../runs/case-outcome.ts';
import type { CaseSwap, SwapRun } from '../runs/swap.ts';
import type {
  AssemblyView,
  CaseView,
  DeviationView,
  HalfRow,
  HistoryView,
  JointView,
  PartView,
  RegisterView,
  Seam,
  SwapCell,
  SwapView,
  Views,
} from './views.ts';

export interface Known {
  readonly manifests: ManifestSet;
  /** What was audited; null before the first audit has ended. */
  readonly gathered: GatheredCode | null;
  readonly audit: Audit | null;
  /** False while only a first look was had, which answers nothing for certain. */
  readonly whole: boolean;
  /** Swaps made since the screens were opened. */
  readonly swaps: readonly CaseSwap[];
  readonly register: RegisterView | null;
  readonly job: AssemblyView['job'];
  /** Cases that are running or waiting now. */
  readonly running: ReadonlyMap<
    string,
    { readonly state: string; readonly seconds: number | null; readonly expectedSeconds: number | null }
  >;
}

export function viewsOf(known: Known): Views {
  return { ...settledViews(known), ...movingViews(known), register: known.register };
}

export type SettledViews = Pick<Views, 'joints' | 'histories' | 'deviations' | 'swap' | 'findings'>;
export type MovingViews = Pick<Views, 'assembly' | 'cases'>;

/** What an audit or a swap changes, and nothing while one is on its way. */
export function settledViews({ manifests, gathered, audit, swaps }: Known): SettledViews {
  const outcomes = gathered?.outcomes ?? [];
  return {
    joints: (gathered?.joints ?? []).filter((one) => one.offering !== null).map((one) => jointView(one, outcomes)),
    histories: historyViews(gathered?.steps ?? []),
    deviations: outcomes.flatMap((one) => one.deviations.map(deviationView)),
    swap: swapView(manifests, swaps),
    findings:
      audit === null
        ? []
        : [
            ...audit.open.map((finding) => ({ finding, accepted: null })),
            ...audit.accepted.map(({ finding, acceptance }) => ({ finding, accepted: acceptance.reason })),
          ],
  };
}

/** What follows a job as it runs. */
export function movingViews(known: Known): MovingViews {
  return { assembly: assemblyView(known), cases: caseViews(known) };
}

/** Exchanges that were run come first; then every module that could stand in for a plugged one, alone. */
function swapView(manifests: ManifestSet, swaps: readonly CaseSwap[]): SwapView {
  const cases = [...manifests.cases.keys()];
  const run = new Map<string, Map<string, SwapRun>>();
  const effects = new Map<string, string[]>();
  for (const swap of swaps) {
    for (const one of swap.runs) {
      const exchange = one.exchanges.join(' ');
      run.set(exchange, (run.get(exchange) ?? new Map()).set(swap.case, one));
    }
    const together = swap.runs.at(-1)?.exchanges ?? [];
    const told = swap.effects.flatMap((effect) => effectLines(effect, together)).map((text) => `${swap.case}: ${text}`);
    if (told.length > 0) effects.set(together.join(' '), [...(effects.get(together.join(' ')) ?? []), ...told]);
  }
  const others = exchangesOf(manifests).filter((one) => !run.has(one));
  return {
    cases,
    rows: [...run.keys(), ...others].map((exchange) => ({
      exchange,
      cells: cases.map((name) => swapCell(run.get(exchange)?.get(name))),
      effects: (effects.get(exchange) ?? []).map(printable),
    })),
  };
}

function exchangesOf(manifests: ManifestSet): string[] {
  const plugged = Object.entries(manifests.assembly?.value.plugged ?? {});
  return plugged.flatMap(([component, module]) =>
    [...manifests.modules.values()]
      .filter(({ value }) => value.component === component && value.module !== module)
      .map(({ value }) => `${component}=${value.module}`),
  );
}

function swapCell(run: SwapRun | undefined): SwapCell {
  if (run === undefined) return { class: null, tolerances: null, why: '', deviations: [] };
  const known = run.deviations.flatMap((one) => (one.tolerances === null ? [] : [one.tolerances]));
  return {
    class: run.class,
    tolerances: known.length === 0 ? null : Math.max(...known),
    why: run.class === null ? printable(run.why === '' ? run.state : run.why) : '',
    deviations: run.deviations.map(deviationView),
  };
}

function assemblyView(known: Known): AssemblyView {
  const { manifests, gathered, audit } = known;
  const assembly = manifests.assembly?.value;
  return {
    title: printable(assembly?.title ?? assembly?.assembly ?? 'no assembly'),
    revision: gathered?.revision?.slice(0, 10) ?? 'none',
    changed: gathered?.changed ?? [],
    outcome: known.whole ? (audit?.outcome ?? null) : null,
    open: openCases(audit),
    why: (audit?.open ?? []).filter((one) => one.gravity !== 'note').map((one) => printable(one.says)),
    parts: Object.entries(assembly?.plugged ?? {}).map(([component, module]) => partView(component, module, known)),
    campaign:
      audit?.campaign == null
        ? null
        : {
            rows: audit.campaign.demands.map((one) => ({
              name: one.what,
              asks: demandText(one.what, one.asks),
              has: demandText(one.what, one.has),
              over: one.over,
            })),
          },
    notices: known.register?.notices ?? [],
    caution: assembly?.consequence === 'safety-related' ? SAFETY_CAUTION : null,
    asOf: null,
    job: known.job,
  };
}

function openCases(audit: Audit | null): number {
  const stops = audit?.open.filter((one) => one.gravity === 'stop') ?? [];
  return stops.every((one) => one.kind === 'case-not-run') ? stops.length : 0;
}

function partView(component: string, module: string, { manifests, gathered, audit }: Known): PartView {
  const own = (gathered?.joints ?? []).filter(
    (one) => one.expecting.module === module || one.offering?.module === module,
  );
  const count = (state: JointState) => own.filter((one) => one.state === state).length;
  const validation = audit?.validations.find((one) => one.module === module);
  const steps = (gathered?.steps ?? []).filter((one) => one.module === module);
  const blocked = gathered?.outcomes.find((one) => one.state === 'not runnable' && one.why.includes(module));
  return {
    component,
    module,
    version: manifests.modules.get(module)?.value.version ?? '?',
    age: steps[0] === undefined ? '' : dayOf(steps[0].commit.authored).slice(0, 4),
    validated: validation === undefined ? '' : validatedText(validation.date, validation.changed.length),
    joints: { fits: count('fits'), adapter: count('fits through an adapter'), unfit: count('does not fit') },
    undeclared: steps.filter((one) => one.state === 'undeclared').length,
    notRunnable: blocked === undefined ? null : 'not runnable here',
  };
}

const SEAMS: Readonly<Record<JointState, Seam>> = {
  fits: 'fits',
  'fits through an adapter': 'adapter',
  'does not fit': 'unfit',
};

function jointView(joint: Joint, outcomes: readonly CaseOutcome[]): JointView {
  const offering = joint.offering!;
  const visited = visitedBy(offering.module, outcomes);
  return {
    contract: `${joint.contract} ${joint.contractVersion}`,
    expecting: joint.expecting,
    offering,
    seam: SEAMS[joint.state],
    rows: joint.rows.map((row) => ({
      quantity: row.quantity,
      left: halfRow(row.expecting),
      right: halfRow(row.offering),
      seam: SEAMS[row.state],
      says: printable([...row.differs, ...(row.differs.length === 0 ? [] : joint.differs)].join(' ')),
      footprint: visited[row.quantity] ?? null,
    })),
    adapter: joint.adapter === null ? null : adapterSource(joint.adapter),
  };
}

function halfRow(half: Half): HalfRow {
  const { carrier } = half;
  const position = carrier?.position == null ? '' : `${carrier.position} `;
  return {
    unit: half.unit,
    intent: half.intent,
    argument: carrier === null ? '' : printable(`${position}${carrier.name}`),
    conventions: Object.entries(half.conventions)
      .map(([name, choice]) => `${name} ${choice}`)
      .join(', '),
    domain: half.domain,
  };
}

/** The states that the cases with this module really visited. */
function visitedBy(module: string, outcomes: readonly CaseOutcome[]): Record<string, [number, number]> {
  const visited: Record<string, [number, number]> = {};
  for (const { footprint, produced } of outcomes) {
    if (footprint === null || produced === null) continue;
    if (!Object.values(produced.modules).some((one) => one.module === module)) continue;
    for (const [quantity, range] of Object.entries(footprint as Domain)) {
      const ends = finite(range);
      if (ends === null) continue;
      const known = visited[quantity];
      visited[quantity] = known === undefined ? ends : [Math.min(known[0], ends[0]), Math.max(known[1], ends[1])];
    }
  }
  return visited;
}

function finite([low, high]: Range): [number, number] | null {
  return low === null || high === null ? null : [low, high];
}

function caseViews({ manifests, gathered, running }: Known): CaseView[] {
  return [...manifests.cases.values()].map(({ value }): CaseView => {
    const outcome = gathered?.outcomes.find((one) => one.case === value.case);
    const now = running.get(value.case);
    const state =
      now?.state ?? (outcome === undefined ? 'not run' : outcome.kept ? `${outcome.state}, kept` : outcome.state);
    return {
      name: value.case,
      title: printable(value.title ?? ''),
      state,
      seconds: now === undefined ? (outcome?.seconds ?? null) : now.seconds,
      expectedSeconds: now?.expectedSeconds ?? null,
      worst: now === undefined ? (outcome?.class ?? null) : null,
      why: printable(outcome?.why ?? ''),
      quantities: (outcome?.deviations ?? []).map((one) => ({
        name: one.quantity,
        of: one.of,
        class: one.class,
        tolerances: one.tolerances,
        says: whereText(one),
      })),
    };
  });
}

function whereText({ measures, why }: Deviation): string {
  const along = measures?.worst?.along;
  return printable(
    [along === undefined ? '' : `worst at ${Number(along.value.toPrecision(4))} ${along.unit}`, why ?? '']
      .filter((text) => text !== '')
      .join('; '),
  );
}

function deviationView(one: Deviation): DeviationView {
  const { profile, why, ...rest } = one;
  return { ...rest, profile: profile ?? null, why: printable(why ?? '') };
}

/** Steps of all modules, a history a module, in the order in which modules came into being. */
export function historyViews(steps: readonly ModuleStep[]): HistoryView[] {
  const byModule = groupBy(steps, (step) => step.module);
  return [...byModule].map(([module, own]) => ({
    module,
    lineage: own.flatMap((step) => {
      if (step.event === null) return [];
      const word = { born: 'born', gone: 'gone', moved: `moved from ${step.movedFrom ?? 'elsewhere'}` }[step.event];
      return [printable(`${word} ${dayOf(step.commit.authored)} by ${step.commit.author}`)];
    }),
    steps: own.map((step) => ({
      commit: step.commit.id,
      date: dayOf(step.commit.authored),
      author: printable(step.commit.author),
      subject: printable(step.commit.subject),
      version: step.versionBefore,
      asked: step.asked,
      declared: step.declared,
      undeclared: step.state === 'undeclared',
      changes: step.changes.map((change) => ({
        says: printable(change.says),
        before: printable(change.before?.text ?? ''),
        after: printable(change.after?.text ?? ''),
      })),
    })),
  }));
}
