/** Findings that may stand for a reason: split from those that count, never hidden. Expired acceptances no longer hold. */
import type { Finding } from '../model/finding.ts';
import type { Acceptance, Accepted, Declaration } from '../model/manifest.ts';

export interface AcceptedFinding {
  readonly finding: Finding;
  readonly acceptance: Acceptance;
}

export interface Sifted {
  readonly open: readonly Finding[];
  readonly accepted: readonly AcceptedFinding[];
}

/**
 * Splits findings by the acceptances that hold on a day.
 * An acceptance holds through the whole of its last day.
 *
 * @param today  `YYYY-MM-DD`
 * @returns open findings, those accepted, and among the open ones a note for each acceptance that expired or meets nothing
 */
export function siftFindings(
  findings: readonly Finding[],
  accepted: Declaration<Accepted> | null | undefined,
  today: string,
): Sifted {
  const acceptances = accepted?.value.accepted ?? [];
  const used = new Set<Acceptance>();
  const open: Finding[] = [];
  const standing: AcceptedFinding[] = [];
  for (const finding of findings) {
    const meeting = acceptances.filter((one) => isMetBy(one, finding));
    for (const one of meeting) used.add(one);
    const holding = meeting.find((one) => one.until === undefined || one.until >= today);
    if (holding === undefined) open.push(finding);
    else standing.push({ finding, acceptance: holding });
  }
  acceptances.forEach((acceptance, index) => {
    const expired = used.has(acceptance) && acceptance.until !== undefined && acceptance.until < today;
    if (used.has(acceptance) && !expired) return;
    open.push({
      kind: expired ? 'acceptance-expired' : 'acceptance-unused',
      gravity: 'note',
      place: accepted!.placeOf(['accepted', index]),
      says: expired
        ? `The acceptance of ${acceptance.finding} ended on ${acceptance.until}: what it accepted counts again.`
        : `This acceptance of ${acceptance.finding} meets no finding.`,
      evidence: [{ says: `reason given: ${acceptance.reason}` }],
      next: expired
        ? 'mend the finding, or give a new last day with a reason.'
        : 'remove it, or correct what it names.',
    });
  });
  return { open, accepted: standing };
}

function isMetBy(acceptance: Acceptance, finding: Finding): boolean {
  return (
    acceptance.finding === finding.kind &&
    (acceptance.module === undefined || acceptance.module === finding.module) &&
    (acceptance.file === undefined || acceptance.file === finding.place.file) &&
    (acceptance.says === undefined || finding.says.includes(acceptance.says)) &&
    (acceptance.revision === undefined || (finding.place.revision ?? '').startsWith(acceptance.revision))
  );
}
