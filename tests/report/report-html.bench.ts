/** Writing the HTML of 10,000 findings, against writing the same report as JSON. */
import { bench, describe } from 'vitest';
import { reportHtml } from '../../src/report/report-html.ts';
import { fullReport } from './full-report.ts';

const [finding] = fullReport.findings;
const many = {
  ...fullReport,
  findings: Array.from({ length: 10_000 }, (_, index) => ({
    ...finding!,
    says: `${finding!.says} Number ${index}.`,
  })),
};
const few = { iterations: 5, warmupIterations: 1, time: 0, warmupTime: 0 };

describe('a report of 10,000 findings', () => {
  bench('floor: as JSON', () => void JSON.stringify(many), few);
  bench('as HTML', () => void reportHtml(many), few);
});
