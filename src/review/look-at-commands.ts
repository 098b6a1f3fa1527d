/** What the head would have built and run otherwise than the base. Pure. */
import type { Finding } from '../model/finding.ts';
import type { ManifestSet } from '../model/manifest.ts';

/** One finding for each command that the head declares otherwise; what it says depends on whose commands were taken. */
export function commandFindings(base: ManifestSet, head: ManifestSet, takenFrom: 'base' | 'head'): Finding[] {
  const findings: Finding[] = [];
  const differ = (what: string, before: string | undefined, after: string | undefined, place: Finding['place']) => {
    if (before === after || after === undefined) return;
    findings.push({
      kind: 'commands-differ',
      gravity: 'caution',
      place,
      says: `The change declares another ${what}: "${after}".`,
      evidence: [{ says: before === undefined ? 'the base declares none' : `the base declares "${before}"` }],
      next:
        takenFrom === 'base'
          ? 'read it; it was not run. Give --run-head-commands once you trust it.'
          : 'read it; --run-head-commands was given, so it was taken.',
    });
  };
  const [before, after] = [base.assembly, head.assembly];
  if (after !== null) {
    const at = (key: string) => after.placeOf([key]);
    differ('build', before?.value.build?.run, after.value.build?.run, at('build'));
    const text = (value: unknown) => (value === undefined ? undefined : JSON.stringify(value));
    differ('environment', text(before?.value.environment), text(after.value.environment), at('environment'));
    differ('executor', text(before?.value.executors), text(after.value.executors), at('executors'));
  }
  for (const [name, declaration] of head.cases) {
    const old = base.cases.get(name)?.value.run;
    differ(`command for case ${name}`, old, declaration.value.run, declaration.placeOf(['run']));
  }
  return findings;
}
