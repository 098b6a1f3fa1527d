import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { type JsonObject, plainYaml, readPlainYaml } from '../../src/register/plain-yaml.ts';

const anyObject = fc
  .dictionary(fc.string({ minLength: 1 }), fc.jsonValue())
  .map((value) => JSON.parse(JSON.stringify(value)) as JsonObject)
  .filter((value) => !JSON.stringify(value).includes('__proto__'));

describe('the spelling of records', () => {
  it('reads by eye', () => {
    expect(
      plainYaml({
        entry: '2026-figure-4',
        result: { doi: '10.1000/182', figure: 4, titles: [] },
        people: [{ name: 'R. Vale', role: 'author' }, { name: 'no' }],
        environment: {},
        seen: true,
      }),
    ).toBe(
      [
        'entry: "2026-figure-4"',
        'result:',
        '  doi: "10.1000/182"',
        '  figure: 4',
        '  titles: []',
        'people:',
        '  - name: R. Vale',
        '    role: author',
        '  - name: "no"',
        'environment: {}',
        'seen: true',
        '',
      ].join('\n'),
    );
  });

  it('is read back as it was by the quick reader', () => {
    fc.assert(
      fc.property(anyObject, (value) => {
        expect(readPlainYaml(plainYaml(value)) ?? {}).toEqual(value);
      }),
      { numRuns: 1000 },
    );
  });

  it('is YAML 1.2: the general reader gives the same', () => {
    fc.assert(
      fc.property(anyObject, (value) => {
        expect(parse(plainYaml(value)) ?? {}).toEqual(value);
      }),
      { numRuns: 500 },
    );
  });

  it('is left to the general reader when it has any other form', () => {
    for (const text of [
      'a: 1',
      "a: 'x'\n",
      'a: 1 # why\n',
      'a:\n    b: 1\n',
      'a: 1\na: 2\n',
      'a: 1.0\n',
      'a: {b: 1}\n',
      '- a\n',
      'a: yes\n',
      '\n',
    ]) {
      expect(readPlainYaml(text), text).toBeNull();
    }
  });

  it('never throws, whatever the text, and never reads what the general reader reads otherwise', () => {
    const line = fc.stringMatching(/^ {0,4}(- )?[a-z":{}[\]0-9.#' -]{0,12}$/);
    fc.assert(
      fc.property(fc.array(line, { maxLength: 6 }), (lines) => {
        const text = `${lines.join('\n')}\n`;
        const quick = readPlainYaml(text);
        if (quick !== null) expect(parse(text)).toEqual(quick);
      }),
      { numRuns: 3000 },
    );
  });
});
