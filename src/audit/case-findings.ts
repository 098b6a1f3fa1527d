/** What the outcome of each case means for a clearance. */

import type { Deviation } from '../model/deviation.ts';
import type { Evidence, Finding, Gravity } from '../model/finding.ts';
import type { FindingKind } from '../model/finding-kind.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { Place } from '../model/place.ts';
import { printableLines } from '../model/printable.ts';
import { shortNumber } from '../model/short-number.ts';
import type { CaseOutcome, CaseState } from '../runs/case-outcome.ts';

export function caseFindings(outcomes: readonly CaseOutcome[], manifests: ManifestSet): Finding[] {
  return outcomes.flatMap((outcome) => {
    const declaration = manifests.cases.get(outcome.case);
    const place = (path: readonly (string | number)[]): Place =>
      declaration?.placeOf(path) ?? { file: `manifests/cases/${outcome.case}.yaml`, line: 1, column: 1 };
    if (outcome.state === 'compared') return outcome.deviations.flatMap((one) => deviationFinding(one, outcome, place));
    const meaning = STATE_MEANINGS[outcome.state];
    if (meaning === null) return [];
    return [
      {
        kind: meaning.kind,
        gravity: meaning.gravity,
        place: place(['case']),
        says: `Case ${outcome.case}: ${outcome.why}`,
        evidence: logEvidence(outcome),
        next: meaning.next,
      },
    ];
  });
}

/** Every declared case that has no result: left out, or ended before it was done. What was not looked at can't be cleared. */
export function notRunFindings(outcomes: readonly CaseOutcome[], manifests: ManifestSet): Finding[] {
  return [...manifests.cases.values()].flatMap((declaration): Finding[] => {
    const name = declaration.value.case;
    const outcome = outcomes.find((one) => one.case === name);
    if (outcome !== undefined && outcome.state !== 'interrupted') return [];
    return [
      {
        kind: 'case-not-run',
        gravity: 'stop',
        place: declaration.placeOf(['case']),
        says: `Case ${name} was not run${outcome === undefined ? '' : ' to its end'}.`,
        evidence: [],
        next: 'run "mortise audit" without --no-run, and let it end.',
      },
    ];
  });
}

const STATE_MEANINGS: Readonly<Record<CaseState, { kind: FindingKind; gravity: Gravity; next: string } | null>> = {
  compared: null,
  interrupted: null,
  'no reference': {
    kind: 'never-validated',
    gravity: 'caution',
    next: 'look at the result; when it is right, record it: "mortise rerun CASE --record --reason TEXT".',
  },
  'not runnable': {
    kind: 'case-not-runnable',
    gravity: 'caution',
    next: 'install what it needs, or audit on a machine that has it.',
  },
  'not built': { kind: 'case-failed', gravity: 'stop', next: 'mend the build; its last lines stand above.' },
  failed: {
    kind: 'case-failed',
    gravity: 'stop',
    next: 'mend the case or the code; the last lines of its log stand above.',
  },
  'timed out': {
    kind: 'case-failed',
    gravity: 'stop',
    next: 'find out why it takes longer, or give it more time in its manifest.',
  },
  'out of memory': {
    kind: 'case-failed',
    gravity: 'stop',
    next: 'find out why it needs more, or give it more memory.',
  },
  mistaken: { kind: 'case-failed', gravity: 'stop', next: 'correct the manifest of the case.' },
};

function logEvidence(outcome: CaseOutcome): Evidence[] {
  const tail = printableLines(outcome.logTail).trimEnd();
  return tail === '' ? [] : [{ says: `last lines of its log:\n${tail.split('\n').slice(-6).join('\n')}` }];
}

function deviationFinding(
  one: Deviation,
  outcome: CaseOutcome,
  place: (path: readonly (string | number)[]) => Place,
): Finding[] {
  if (one.class !== 'beyond tolerance' && one.class !== 'not comparable') return [];
  const at = place(one.of === 'feature' ? ['features', one.quantity] : ['case']);
  if (one.class === 'not comparable') {
    return [
      {
        kind: 'result-not-comparable',
        gravity: 'stop',
        place: at,
        says: `${one.quantity} of case ${outcome.case} can not be compared with its reference: ${one.why ?? 'no reason is known'}.`,
        evidence: [],
        next: 'find out why the outputs differ in form; record a new reference only when the new form is right.',
      },
    ];
  }
  const worst = one.measures?.worst ?? null;
  const where = worst?.along === undefined ? '' : ` at ${shortNumber(worst.along.value)} ${worst.along.unit}`;
  return [
    {
      kind: 'result-beyond-tolerance',
      gravity: 'stop',
      place: at,
      says: `${one.quantity} of case ${outcome.case} is ${one.tolerances === null ? 'beyond' : `${shortNumber(one.tolerances)} times`} its tolerance from the reference.`,
      evidence: [
        ...(worst === null
          ? []
          : [
              {
                says: `worst${where}: ${shortNumber(worst.result)} against ${shortNumber(worst.reference)} ${one.unit}`,
              },
            ]),
        ...(one.why === undefined ? [] : [{ says: one.why }]),
      ],
      next: `find the change: "mortise trace ${outcome.case} ${one.quantity} GOOD..BAD"; record a new reference only when the new result is the right one.`,
    },
  ];
}
