/** Cases and findings as a test report: what CI servers of every make read. @source the JUnit XML schema as Ant and its successors write it (common practice) */
import { printableLines } from '../model/printable.ts';
import type { Report } from './report.ts';

export function reportJunit(report: Report): string {
  const names = [...new Set(report.deviations.map((one) => one.case))];
  const suites = names.map((name) => {
    const own = report.deviations.filter((one) => one.case === name);
    const tests = own.map((one) => {
      const bad = one.class === 'beyond tolerance' || one.class === 'not comparable';
      const says = `${one.class}${one.tolerances === null ? '' : `, ${Number(one.tolerances.toPrecision(3))} of 1 tolerance`}${one.why === undefined ? '' : `: ${one.why}`}`;
      return testcase(name, one.quantity, bad ? says : null);
    });
    return suite(
      name,
      tests,
      own.filter((one) => one.class === 'beyond tolerance' || one.class === 'not comparable').length,
    );
  });
  const findings = report.findings.map((one) =>
    testcase(
      one.kind,
      `${one.place.file}:${one.place.line} ${one.says}`,
      one.gravity === 'stop' ? `${one.says}\nNext: ${one.next}` : null,
    ),
  );
  const stops = report.findings.filter((one) => one.gravity === 'stop').length;
  return `<?xml version="1.0" encoding="UTF-8"?>\n<testsuites name="${xml(report.title)}">\n${[...suites, suite('findings', findings, stops)].join('\n')}\n</testsuites>\n`;
}

function suite(name: string, tests: readonly string[], failures: number): string {
  return `  <testsuite name="${xml(name)}" tests="${tests.length}" failures="${failures}" errors="0" skipped="0">\n${tests.join('\n')}\n  </testsuite>`;
}

function testcase(group: string, name: string, failure: string | null): string {
  const open = `    <testcase classname="${xml(group)}" name="${xml(name)}"`;
  return failure === null
    ? `${open}/>`
    : `${open}>\n      <failure message="${xml(failure.split('\n')[0]!)}">${xml(failure)}</failure>\n    </testcase>`;
}

/** Harmless in text and in quotes; control characters, which XML 1.0 has no spelling for, are already spelled out. */
function xml(text: string): string {
  return printableLines(text)
    .replace(/[\ufffe\uffff]/g, '?')
    .toWellFormed()
    .replace(/[&<>"']/g, (one) => `&#${one.charCodeAt(0)};`)
    .replaceAll('\n', '&#10;');
}
