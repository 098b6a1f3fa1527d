/** What machines read, held against what was published for it. */
import { readFileSync } from 'node:fs';
import { Ajv } from 'ajv';
import { Ajv2020 } from 'ajv/dist/2020.js';
import addFormats from 'ajv-formats';
import { describe, expect, it } from 'vitest';
import { explanations } from '../../src/report/explanations/all.ts';
import { reportJson } from '../../src/report/report-json.ts';
import { reportJunit } from '../../src/report/report-junit.ts';
import { reportSarif } from '../../src/report/report-sarif.ts';
import { mortise } from '../support/run-mortise.ts';
import { laySmallCode, writeFiles } from '../support/small-code.ts';
import { sampleReport } from './sample-report.ts';

const read = (file: string) => JSON.parse(readFileSync(new URL(`../../${file}`, import.meta.url), 'utf8'));

/**
 * tests/checks/sarif-schema-2.1.0.json is sarif-2.1/schema/sarif-schema-2.1.0.json of github.com/oasis-tcs/sarif-spec, unchanged:
 * the schema of SARIF Version 2.1.0 Plus Errata 01, OASIS Standard.
 */
function sarifValidator() {
  const { $schema: _, id, ...schema } = read('tests/checks/sarif-schema-2.1.0.json');
  // Draft 4 and draft 7 differ in the name of the id and in exclusive bounds, of which this schema has none.
  const ajv = new Ajv({ strict: false, allErrors: true });
  addFormats.default(ajv);
  return ajv.compile({ ...schema, $id: id });
}

function reportValidator() {
  const ajv = new Ajv2020({ strict: true, strictTypes: false, allErrors: true });
  addFormats.default(ajv);
  return ajv.compile(read('manifests/schema/report.schema.json'));
}

describe('SARIF', () => {
  const validate = sarifValidator();
  const text = reportSarif(sampleReport, '1.0.0', explanations);

  it('is sound by the published schema', () => {
    validate(JSON.parse(text));
    expect(validate.errors ?? []).toEqual([]);
  });

  it('is refused by the schema where it is broken, so that soundness says something', () => {
    expect(validate(JSON.parse(text.replace('"level": "error"', '"level": "stop"')))).toBe(false);
  });

  it('tells gravity as level, the place, and accepted findings as suppressed', () => {
    const [run] = JSON.parse(text).runs;
    expect(run.results.map((one: { level: string }) => one.level)).toEqual(['error', 'note', 'warning']);
    expect(run.results[0].locations[0].physicalLocation).toEqual({
      artifactLocation: { uri: 'manifests/modules/eos%20%C3%A9.yaml' },
      region: { startLine: 11, startColumn: 30 },
    });
    expect(run.results[2].suppressions[0].kind).toBe('external');
  });
});

describe('JSON', () => {
  const validate = reportValidator();

  it('is sound by the schema that is published with it', () => {
    validate(JSON.parse(reportJson(sampleReport, '1.0.0')));
    expect(validate.errors ?? []).toEqual([]);
  });

  it('keeps numbers that JSON has no text for, as words', () => {
    const [deviation] = sampleReport.deviations;
    const endless = { ...sampleReport, deviations: [{ ...deviation!, tolerances: Number.POSITIVE_INFINITY }] };
    const document = JSON.parse(reportJson(endless, '1.0.0'));
    expect(document.deviations[0].tolerances).toBe('Infinity');
    validate(document);
    expect(validate.errors ?? []).toEqual([]);
  });

  it.each([
    ['review', ['review', '--no-run', '--json']],
    ['audit', ['audit', '--json']],
  ])('of mortise %s is sound', async (_, words) => {
    const root = laySmallCode();
    writeFiles(root, { 'src/cool.ts': 'export function cool(temp: number): number { return temp; }\n' });
    validate(JSON.parse((await mortise(root, ...words)).out));
    expect(validate.errors ?? []).toEqual([]);
  });
});

describe('JUnit', () => {
  it('is one well-formed document whose counts are those of its parts', () => {
    const text = reportJunit(sampleReport);
    const names = elements(text);
    expect(names.filter((name) => name === 'testcase')).toHaveLength(3);
    expect([...text.matchAll(/ tests="(\d+)"/g)].reduce((sum, [, count]) => sum + Number(count), 0)).toBe(3);
    expect([...text.matchAll(/ failures="(\d+)"/g)].reduce((sum, [, count]) => sum + Number(count), 0)).toBe(
      names.filter((name) => name === 'failure').length,
    );
  });
});

/** Names of the elements of an XML text, in order. @throws where tags do not match or a character stands that XML 1.0 has not */
function elements(text: string): string[] {
  if (/[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\u{10000}-\u{10ffff}]/u.test(text))
    throw new Error('a character that XML 1.0 has not');
  const names: string[] = [];
  const open: string[] = [];
  const rest = text
    .replace(/^<\?xml[^?]*\?>\s*/, '')
    .replace(
      /<(\/?)([a-z]+)((?:\s+[a-z]+="[^"<]*")*)\s*(\/?)>/g,
      (_, closes: string, name: string, __, empty: string) => {
        if (closes === '/') {
          if (open.pop() !== name) throw new Error(`</${name}> closes another element`);
        } else {
          names.push(name);
          if (empty === '') open.push(name);
        }
        return '';
      },
    );
  if (open.length > 0 || rest.includes('<')) throw new Error(`not well-formed: ${open.join(' ')} ${rest}`);
  return names;
}
