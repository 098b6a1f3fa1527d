/** Turns steps of modules into findings. Pure. */

import type { Change } from '../model/change.ts';
import type { Evidence, Finding, Gravity } from '../model/finding.ts';
import type { Place } from '../model/place.ts';
import { versionAfter } from './bumps.ts';
import type { CommitRecord } from './commit-record.ts';
import { commitText } from './commit-text.ts';
import type { ModuleStep } from './module-step.ts';

/** Places shown of callers left behind; their number is always told. */
const MOST_CALLERS = 8;

/** A step that some version should have declared and none did. */
export function undeclaredFinding(step: ModuleStep): Finding {
  const gravest = step.changes[0]!;
  const others = step.changes.filter(({ kind }) => kind !== 'implementation').length - 1;
  const more = others === 0 ? '' : `, and ${others} more ${others === 1 ? 'change' : 'changes'}`;
  const stayed =
    step.declared === 'none'
      ? `the version stayed at ${step.versionBefore}`
      : `the version went from ${step.versionBefore} to ${step.versionAfter}, a ${step.declared} bump`;
  const asked = versionAfter(step.versionBefore!, step.asked);
  const evidence: Evidence[] = [
    { says: commitText(step.commit) },
    ...step.changes.filter(({ kind }) => kind !== 'implementation').flatMap(changeEvidence),
    ...step.callers
      .slice(0, MOST_CALLERS)
      .map((place) => ({ says: 'still called as before, in a file this commit left alone', place })),
  ];
  if (step.callers.length > MOST_CALLERS)
    evidence.push({ says: `${step.callers.length - MOST_CALLERS} more calls in files left alone` });
  return {
    kind: 'drift-undeclared',
    gravity:
      step.declaredBy === 'manifest'
        ? step.asked === 'major'
          ? 'stop'
          : 'caution'
        : step.asked === 'major'
          ? 'caution'
          : 'note',
    module: step.module,
    place: placeOf(gravest, step.commit.id),
    says: `${gravest.says}${more}; ${stayed}.`,
    evidence,
    next: `${step.declaredBy === 'manifest' ? `declare ${asked} in the manifest of ${step.module}` : `name ${asked} as the version where it first differs`}, or take the change back${step.callers.length > 0 ? '; look at the calls listed' : ''}.`,
  };
}

export function eventFinding(
  kind: 'reference-renewed' | 'tolerance-widened',
  gravity: Gravity,
  commit: Omit<CommitRecord, 'files'>,
  change: Change,
  module: string | undefined,
  next: string,
): Finding {
  return {
    kind,
    gravity,
    ...(module === undefined ? {} : { module }),
    place: placeOf(change, commit.id),
    says: `${change.says}.`,
    evidence: [{ says: commitText(commit) }, ...changeEvidence(change)],
    next,
  };
}

export function changeEvidence(change: Change): Evidence[] {
  const { before, after } = change;
  return [
    ...(before === undefined
      ? []
      : [{ says: `before: ${before.text}`, ...(before.place === undefined ? {} : { place: before.place }) }]),
    ...(after === undefined
      ? []
      : [{ says: `after: ${after.text}`, ...(after.place === undefined ? {} : { place: after.place }) }]),
  ];
}

/** Always at the commit that made the change: what is gone has its line from before. */
function placeOf(change: Change, commit: string): Place {
  const place = change.after?.place ?? change.before?.place ?? { file: change.subject, line: 1, column: 1 };
  return { ...place, revision: commit };
}
