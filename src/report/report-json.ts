/** A report as one JSON document; its schema is manifests/schema/report.schema.json. */
import { printableJson } from '../model/printable.ts';
import type { Report } from './report.ts';

export function reportJson(report: Report, version: string): string {
  const { title, command, made, outcome, facts, sections, findings, accepted, deviations, caution } = report;
  const document = {
    mortise: version,
    command,
    title,
    made,
    ...(outcome === undefined ? {} : { outcome }),
    facts,
    sections,
    findings,
    accepted,
    deviations,
    ...(caution === null ? {} : { caution }),
  };
  // Infinity and NaN have no JSON text; as words they are at least not lost.
  return printableJson(
    `${JSON.stringify(document, (_, value) => (typeof value === 'number' && !Number.isFinite(value) ? String(value) : value), 2)}\n`,
  );
}
