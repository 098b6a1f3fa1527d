/** What reruns have to say beside deviations: references that can't be trusted, trees that were not whole. */
import { type Finding, sortFindings } from '../model/finding.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { CaseOutcome } from './case-outcome.ts';

/** @returns findings, sorted; empty when every reference stands and every tree was whole */
export function runFindings(outcomes: readonly CaseOutcome[], manifests: ManifestSet): Finding[] {
  const findings: Finding[] = [];
  const told = new Set<string>();
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
    // A run that succeeded without the file may still have taken another path for the want of it.
    for (const { path, why } of outcome.absent ?? []) {
      if (told.has(path)) continue;
      told.add(path);
      findings.push({
        kind: 'tree-incomplete',
        gravity: 'caution',
        place: { file: path, line: 1, column: 1 },
        says: `${path} was not there when the code was built and run: ${why}.`,
        evidence: [{ says: `first for the case ${outcome.case}`, place }],
        next: 'put the file itself into the repository, or fetch what the clone lacks.',
      });
    }
  }
  return sortFindings(findings);
}
