/** Tuples that a caller unpacks held against the tuples that are returned: the same names in another order. Pure. */
import { type Finding, sortFindings } from '../../model/finding.ts';
import type { LinkedCode } from '../link.ts';

export function checkResults(linked: LinkedCode): Finding[] {
  const findings: Finding[] = [];
  for (const [file, read] of linked.files) {
    for (const call of read.calls) {
      if (call.unpacked === undefined || call.unpacked.length < 2) continue;
      const providers = linked.resolve(file, call);
      const [provider] = providers;
      const returns = provider?.procedure.returns;
      if (providers.length !== 1 || returns === undefined || returns.length < 2) continue;
      const place = { file, line: call.line, column: call.column };
      const evidence = [
        {
          says: `returns ${returns.join(', ')}`,
          place: { file: provider!.file, line: provider!.procedure.line, column: provider!.procedure.column },
        },
      ];
      const exchanged = exchangedNames(call.unpacked, returns);
      if (exchanged !== null)
        findings.push({
          kind: 'result-order',
          gravity: 'caution',
          place,
          says: `What ${call.callee} returns is unpacked in another order here: ${exchanged[0]} where it returns ${exchanged[1]}.`,
          evidence,
          next: 'unpack in the order in which it is returned.',
        });
    }
  }
  return sortFindings(findings);
}

/** A name that stands at another place than the one of that name in what is returned, whose place is taken by the other. */
function exchangedNames(unpacked: readonly string[], returns: readonly string[]): [string, string] | null {
  if (unpacked.length !== returns.length) return null;
  const [given, known] = [unpacked, returns].map((names) => names.map((one) => one.toLowerCase().replace(/^_+/, '')));
  for (let i = 0; i < given!.length; i++) {
    const j = known!.indexOf(given![i]!);
    if (j < 0 || j === i || known![i] === given![i]) continue;
    if (given![j] === known![i]) return [unpacked[i]!, returns[i]!];
  }
  return null;
}
