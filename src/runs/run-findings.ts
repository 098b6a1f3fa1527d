/** What reruns have to say beside deviations: references that can't be trusted, trees that were not whole. */
import { type Finding, sortFindings } from '../model/finding.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { CaseOutcome } from './case-outcome.ts';

/** Files named one by one. */
const MOST_NAMED = 8;

/** @returns findings, sorted; empty when every reference stands and every tree was whole */
export function runFindings(outcomes: readonly CaseOutcome[], manifests: ManifestSet): Finding[] {
  const findings: Finding[] = [];
  const absent = new Map<string, string>();
  for (const outcome of outcomes) {
    const declaration = manifests.cases.get(outcome.case);
    const place = declaration?.placeOf(['case']) ?? {
      file: `manifests/cases/${outcome.case}.yaml`,
      line: 1,
      column: 1,
    };
    if (outcome.damage !== undefined) {
      findings.push({
        kind: 'reference-altered',
        gravity: 'stop',
        place,
        says: `The reference of ${outcome.case} is not as it was recorded.`,
        evidence: [{ says: outcome.damage }],
        next: `bring its files back from git, or record it again with "mortise rerun ${outcome.case} --record --reason TEXT".`,
      });
    }
    for (const { path, why } of outcome.absent ?? []) if (!absent.has(path)) absent.set(path, why);
  }
  // One finding for them all: a partial clone may lack hundreds of figures that no run ever asks for.
  const [first] = absent;
  if (first !== undefined) {
    const evidence = [...absent].slice(0, MOST_NAMED).map(([path, why]) => ({ says: `${path}: ${why}` }));
    if (absent.size > MOST_NAMED) evidence.push({ says: `and ${absent.size - MOST_NAMED} more` });
    findings.push({
      kind: 'tree-incomplete',
      gravity: 'caution',
      place: { file: first[0], line: 1, column: 1 },
      says: `${absent.size === 1 ? 'One file of the repository was' : `${absent.size} files of the repository were`} not there when the code was built and run.`,
      evidence,
      next: 'put the files themselves into the repository, or fetch what the clone lacks, if a run needs them.',
    });
  }
  return sortFindings(findings);
}
