/** A change before it is merged: what it does to interfaces and versions, which cases can see it, what moved, which results rest on it. Pure. */

import { caseFindings } from '../audit/case-findings.ts';
import type { DriftReport } from '../history/drift.ts';
import type { ModuleStep } from '../history/module-step.ts';
import type { ChangeKind } from '../model/bump.ts';
import type { Change } from '../model/change.ts';
import type { Finding } from '../model/finding.ts';
import { sortFindings } from '../model/finding.ts';
import type { Case, ManifestSet } from '../model/manifest.ts';
import type { Place } from '../model/place.ts';
import type { CaseOutcome } from '../runs/case-outcome.ts';
import { configurationOf, NotDeclared } from '../runs/configuration.ts';

/** What was gathered about a change. Manifests are those of the base: what comes from outside decides nothing about itself. */
export interface ReviewInput {
  readonly base: string;
  readonly head: string;
  readonly manifests: ManifestSet;
  /** The whole change as one step a module. */
  readonly drift: DriftReport;
  /** Every file that differs. */
  readonly files: readonly string[];
  /** Those that are new or gone. */
  readonly appeared: readonly string[];
  /** Places of the calls of each procedure whose interface changed, at the head; by its name in lower case. */
  readonly callers: ReadonlyMap<string, readonly Place[]>;
  /** Files that each case's build and run read, where a kept run tells; null where none does. */
  readonly filesRead: ReadonlyMap<string, ReadonlySet<string> | null>;
  /** Of the cases that were run at the head; empty when none were. */
  readonly outcomes: readonly CaseOutcome[];
  /** Entries of the register that used a changed module, by module. */
  readonly results: ReadonlyMap<string, readonly string[]>;
  /** Findings about manifests, joints and the change as a whole that the base has not. */
  readonly fresh: readonly Finding[];
  /** What limits this review, one sentence each. */
  readonly notes?: readonly string[];
}

export interface Review {
  readonly base: string;
  readonly head: string;
  readonly steps: readonly ModuleStep[];
  /** False when modules were drafted, one a source file. */
  readonly declared: boolean;
  readonly files: readonly string[];
  readonly callers: ReviewInput['callers'];
  readonly sees: readonly CaseSight[];
  readonly outcomes: readonly CaseOutcome[];
  readonly results: ReviewInput['results'];
  /** Things that no machine here can judge, one sentence each. */
  readonly byEye: readonly string[];
  readonly findings: readonly Finding[];
  readonly notes: readonly string[];
}

/** Whether a case can see the change. */
export interface CaseSight {
  readonly case: string;
  readonly sees: boolean;
  readonly because: string;
}

export function review(input: ReviewInput): Review {
  const { drift, manifests } = input;
  const changedModules = new Set(drift.steps.map((step) => step.module));
  const sees = [...manifests.cases.values()].map(({ value }) => sightOf(value, input, changedModules));
  return {
    base: input.base,
    head: input.head,
    steps: drift.steps,
    declared: drift.manifests,
    files: input.files,
    callers: input.callers,
    sees,
    outcomes: input.outcomes,
    results: input.results,
    byEye: byEye(input, sees),
    findings: sortFindings([...drift.findings, ...input.fresh, ...caseFindings(input.outcomes, manifests)]),
    notes: [...(input.notes ?? []), ...drift.notes],
  };
}

function sightOf(theCase: Case, input: ReviewInput, changed: ReadonlySet<string>): CaseSight {
  const read = input.filesRead.get(theCase.case) ?? null;
  if (read !== null) {
    const seen = input.files.filter((file) => read.has(file));
    if (seen.length > 0) return { case: theCase.case, sees: true, because: `its build and run read ${few(seen)}` };
    // A build that takes every file of a folder would read a new one.
    const code = input.appeared.filter((file) => !/^manifests\/|\.(md|txt|rst)$/i.test(file));
    if (code.length > 0)
      return { case: theCase.case, sees: true, because: `${few(code)} came or went, and its build may notice` };
    return { case: theCase.case, sees: false, because: 'its build and run read none of the changed files' };
  }
  const modules = pluggedIn(input.manifests, theCase);
  const touched = modules.filter((module) => changed.has(module));
  if (touched.length > 0) return { case: theCase.case, sees: true, because: `it plugs in ${few(touched)}` };
  const owned = new Set(
    [...input.manifests.modules.values()].flatMap((one) => [
      ...one.value.source.files,
      ...(one.value.tables ?? []).map((table) => table.file),
    ]),
  );
  const shared = input.files.filter((file) => !owned.has(file) && !/^manifests\/|\.(md|txt|rst)$/i.test(file));
  if (shared.length > 0)
    return {
      case: theCase.case,
      sees: true,
      because: `no kept run tells what it reads, and ${few(shared)} may be part of its build`,
    };
  return { case: theCase.case, sees: false, because: `it plugs in none of the changed modules` };
}

const EYE: Partial<Record<ChangeKind, string>> = {
  'claim-changed': 'see that the code does what the comment now says, or did what it said before',
  'constant-value': 'see that tables and fits made with the old value still hold',
  'literal-value': 'see where the new number comes from',
  'table-content': 'see what the table was made with, and that its edges are what they were',
  'reference-renewed': 'see that the reason for the new reference holds',
  'tolerance-widened': 'see that the reason for the wider tolerance holds',
  'argument-reordered':
    'see every caller, also those in other repositories: no compiler tells arguments of one type apart',
  'convention-changed': 'see that everyone who takes this quantity knows of the new convention',
};

function byEye({ drift, outcomes, manifests }: ReviewInput, sees: readonly CaseSight[]): string[] {
  const asked = drift.steps.flatMap((step) => step.changes.flatMap((change) => eyeFor(step.module, change)));
  const unseen = drift.steps.filter(
    (step) =>
      step.asked !== 'none' &&
      !casesOf(step.module, manifests).some((name) => sees.find((one) => one.case === name)?.sees),
  );
  const blind =
    manifests.cases.size === 0
      ? unseen.length === 0
        ? []
        : ['no case is declared, so nothing here tells whether a result moves']
      : [...new Set(unseen.map((step) => step.module))].map(
          (module) => `${module}: no case can see this change; nothing here tells whether a result moves`,
        );
  const moved = outcomes
    .filter((one) => one.class === 'within tolerance')
    .map((one) => `case ${one.case}: results moved within tolerance; see that this is meant`);
  return [...new Set([...asked, ...blind, ...moved])];
}

function eyeFor(module: string, change: Change): string[] {
  const look = EYE[change.kind];
  return look === undefined ? [] : [`${module}: ${change.says}; ${look}`];
}

function casesOf(module: string, manifests: ManifestSet): string[] {
  return [...manifests.cases.values()]
    .filter(({ value }) => pluggedIn(manifests, value).includes(module))
    .map(({ value }) => value.case);
}

/** A case that plugs in what nothing declares has its finding already; here it plugs in nothing. */
function pluggedIn(manifests: ManifestSet, theCase: Case): string[] {
  try {
    return Object.values(configurationOf(manifests, theCase).plugged);
  } catch (error) {
    if (!(error instanceof NotDeclared)) throw error;
    return [];
  }
}

function few(names: readonly string[]): string {
  return names.length <= 3 ? names.join(', ') : `${names.slice(0, 3).join(', ')} and ${names.length - 3} more`;
}
