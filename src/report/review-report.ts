/** The report of a review: what a change does, in the order in which a reviewer asks. Nothing is computed here, only laid out. */
import { versionAfter } from '../history/bumps.ts';
import type { ModuleStep } from '../history/module-step.ts';
import type { ChangeKind } from '../model/bump.ts';
import { SAFETY_CAUTION } from '../model/caution.ts';
import type { Change } from '../model/change.ts';
import type { ManifestSet } from '../model/manifest.ts';
import { type Place, printPlace } from '../model/place.ts';
import { procedureOf } from '../review/find-callers.ts';
import type { Review } from '../review/review.ts';
import { isBad } from '../runs/case-outcome.ts';
import type { Cell, Report, Section } from './report.ts';

export interface ReviewNames {
  /** As the reader knows them: `v1.2 (4f1c2ab90d)`, `the work tree`. */
  readonly base: string;
  readonly head: string;
  readonly parted: string;
  readonly now: string;
  readonly ran: boolean;
  readonly commandsFrom: 'base' | 'head';
}

/** Calls named in the table; their number is always told. */
const MOST_CALLS = 4;

/** What says what a value means, and not how it is passed. */
const MEANING: ReadonlySet<ChangeKind> = new Set([
  'unit-changed',
  'convention-changed',
  'claim-changed',
  'domain-narrowed',
  'domain-widened',
  'constant-value',
  'literal-value',
  'literal-kind',
  'table-content',
  'table-edges-narrowed',
  'table-edges-widened',
  'reference-renewed',
  'tolerance-widened',
]);

export function reviewReport(review: Review, manifests: ManifestSet, names: ReviewNames): Report {
  return {
    title: `Review of ${names.base}..${names.head}`,
    command: 'review',
    made: names.now,
    facts: [
      { name: 'base', value: names.base },
      { name: 'head', value: names.head },
      ...(names.parted === names.base ? [] : [{ name: 'parted at', value: names.parted }]),
      { name: 'files that differ', value: String(review.files.length) },
      { name: 'modules', value: review.declared ? 'as declared' : 'drafted, one a source file' },
      ...(names.ran
        ? [{ name: 'commands', value: `of the ${names.commandsFrom}` }]
        : [{ name: 'cases', value: 'not run' }]),
    ],
    sections: [
      changesSection(
        'Interfaces and contracts',
        review,
        (kind) => !MEANING.has(kind) && kind !== 'implementation',
        true,
      ),
      changesSection('Units, conventions, constants, domains, tables', review, (kind) => MEANING.has(kind), false),
      ...bodiesSection(review),
      versionsSection(review, manifests),
      casesSection(review, names.ran),
      movedSection(review),
      resultsSection(review),
      { title: 'To look at by eye', head: [], rows: [], lines: review.byEye.map((one) => `- ${one}.`) },
      { title: 'Limits of this review', head: [], rows: [], lines: review.notes.map((one) => `- ${one}.`) },
    ].filter((one) => one.rows.length > 0 || (one.lines ?? []).length > 0),
    findings: review.findings,
    accepted: [],
    deviations: review.outcomes.flatMap((one) => one.deviations),
    caution: manifests.assembly?.value.consequence === 'safety-related' ? SAFETY_CAUTION : null,
  };
}

function changesSection(
  title: string,
  review: Review,
  wanted: (kind: ChangeKind) => boolean,
  withCalls: boolean,
): Section {
  const rows = review.steps.flatMap((step) => [
    ...(withCalls && step.event !== null ? [eventRow(step)] : []),
    ...step.changes
      .filter((change) => wanted(change.kind))
      .map((change): Cell[] => [
        step.module,
        change.says,
        placeText(change),
        ...(withCalls ? [callsText(review.callers.get(procedureOf(change)))] : []),
      ]),
  ]);
  return { title, head: ['module', 'change', 'at', ...(withCalls ? ['called from'] : [])], rows };
}

function eventRow(step: ModuleStep): Cell[] {
  const says = { born: 'is new', gone: 'is gone', moved: `moved from ${step.movedFrom ?? 'elsewhere'}` }[step.event!];
  return [step.module, says, '', ''];
}

function placeText({ before, after }: Change): string {
  const place = after?.place ?? before?.place;
  return place === undefined ? '' : `${place.file}:${place.line}`;
}

function callsText(calls: readonly Place[] | undefined): string {
  if (calls === undefined) return '';
  if (calls.length === 0) return 'nowhere here';
  const shown = calls
    .slice(0, MOST_CALLS)
    .map((place) => printPlace({ file: place.file, line: place.line, column: place.column }));
  return `${shown.join(', ')}${calls.length > MOST_CALLS ? ` and ${calls.length - MOST_CALLS} more` : ''}`;
}

function bodiesSection({ steps }: Review): Section[] {
  const rows = steps.flatMap((step) =>
    step.changes.filter(({ kind }) => kind === 'implementation').map((change): Cell[] => [step.module, change.says]),
  );
  return [{ title: 'Inside procedures', head: ['module', 'change'], rows }];
}

/** The one-line fix stands in the last column. */
function versionsSection({ steps }: Review, manifests: ManifestSet): Section {
  const rows = steps
    .filter((step) => step.asked !== 'none')
    .map((step): Cell[] => {
      const file = step.module.startsWith('contract ')
        ? manifests.contracts.get(step.module.slice('contract '.length))?.file
        : manifests.modules.get(step.module)?.file;
      const asked = step.versionBefore === null ? null : versionAfter(step.versionBefore, step.asked);
      const covered = step.state === 'declared';
      return [
        step.module,
        step.asked,
        step.declaredBy === null ? 'nothing declares one' : { text: step.declared, mood: covered ? 'good' : 'alarm' },
        step.versionBefore === null
          ? ''
          : `${step.versionBefore}${step.versionAfter === null || step.versionAfter === step.versionBefore ? '' : ` to ${step.versionAfter}`}`,
        covered || asked === null ? '' : `version: ${asked}${file === undefined ? '' : ` in ${file}`}`,
      ];
    });
  return { title: 'Versions', head: ['module', 'least bump asked', 'declared', 'version', 'write'], rows };
}

function casesSection({ sees, outcomes }: Review, ran: boolean): Section {
  return {
    title: 'Cases',
    head: ['case', 'can see it', 'because', ...(ran ? ['outcome'] : [])],
    rows: sees.map((one): Cell[] => {
      const outcome = outcomes.find(({ case: name }) => name === one.case);
      const cell: Cell =
        outcome === undefined
          ? 'not run'
          : isBad(outcome)
            ? { text: outcome.class ?? outcome.state, mood: 'alarm' }
            : (outcome.class ?? outcome.state);
      return [one.case, one.sees ? 'yes' : 'no', one.because, ...(ran ? [cell] : [])];
    }),
  };
}

function movedSection({ outcomes }: Review): Section {
  const rows = outcomes.flatMap((outcome) =>
    outcome.deviations
      .filter((one) => one.class !== 'bit-for-bit')
      .map((one): Cell[] => {
        const bad = one.class === 'beyond tolerance' || one.class === 'not comparable';
        return [
          outcome.case,
          one.quantity,
          bad ? { text: one.class, mood: 'alarm' } : one.class,
          one.tolerances === null ? (one.why ?? '') : `${Number(one.tolerances.toPrecision(3))} of 1 tolerance`,
        ];
      }),
  );
  const still = outcomes.filter((one) => one.class === 'bit-for-bit').map((one) => one.case);
  return {
    title: 'Quantities that moved',
    head: ['case', 'quantity', 'class', 'size'],
    rows,
    lines: still.length === 0 ? [] : [`Bit for bit as the reference: ${still.join(', ')}.`],
  };
}

function resultsSection({ results }: Review): Section {
  return {
    title: 'Published results that rest on what changes',
    head: ['module', 'result'],
    rows: [...results].flatMap(([module, entries]) => entries.map((one): Cell[] => [module, one])),
  };
}
