/** Findings for tools that show them at their line. @source SARIF Version 2.1.0, OASIS Standard, 27 March 2020 */
import type { Finding, Gravity } from '../model/finding.ts';
import type { FindingKind } from '../model/finding-kind.ts';
import { printable, printableJson } from '../model/printable.ts';
import type { Explanation } from './explanations/explanation.ts';
import type { Report } from './report.ts';

const LEVELS: Readonly<Record<Gravity, string>> = { stop: 'error', caution: 'warning', note: 'note' };

export function reportSarif(
  report: Report,
  version: string,
  pages: Readonly<Record<FindingKind, Explanation>>,
): string {
  const all = [
    ...report.findings.map((finding) => ({ finding, reason: null })),
    ...report.accepted.map(({ finding, acceptance }) => ({ finding, reason: acceptance.reason })),
  ];
  const kinds = [...new Set(all.map(({ finding }) => finding.kind))].sort();
  const document = {
    $schema: 'https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json',
    version: '2.1.0',
    runs: [
      {
        tool: {
          driver: {
            name: 'mortise',
            version,
            rules: kinds.map((kind) => ({
              id: kind,
              shortDescription: { text: pages[kind].means },
              help: { text: `${pages[kind].arises}\n\n${pages[kind].mend}` },
            })),
          },
        },
        columnKind: 'unicodeCodePoints',
        results: all.map(({ finding, reason }) => ({
          ruleId: finding.kind,
          ruleIndex: kinds.indexOf(finding.kind),
          level: LEVELS[finding.gravity],
          message: { text: printable(`${finding.says} Next: ${finding.next}`) },
          locations: [locationOf(finding.place)],
          relatedLocations: finding.evidence.flatMap((one, index) =>
            one.place === undefined
              ? []
              : [{ id: index + 1, message: { text: printable(one.says) }, ...locationOf(one.place) }],
          ),
          ...(reason === null ? {} : { suppressions: [{ kind: 'external', justification: printable(reason) }] }),
        })),
      },
    ],
  };
  return printableJson(`${JSON.stringify(document, null, 2)}\n`);
}

function locationOf(place: Finding['place']) {
  return {
    physicalLocation: {
      artifactLocation: { uri: place.file.split('/').map(encodeURIComponent).join('/') },
      region: { startLine: Math.max(1, place.line), startColumn: Math.max(1, place.column) },
    },
  };
}
