import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { canonicalJson, type Json } from '../../src/model/canonical-json.ts';

describe('canonical JSON', () => {
  it('gives the text printed in RFC 8785, 3.2.2 to 3.2.4', () => {
    // RFC 8785, figure of 3.2.2 and its canonical form in 3.2.4.
    const value = JSON.parse(
      '{"numbers":[333333333.33333329,1E30,4.50,2e-3,0.000000000000000000000000001],"string":"\\u20ac$\\u000F\\u000aA\'\\u0042\\u0022\\u005c\\\\\\"\\/","literals":[null,true,false]}',
    );
    expect(canonicalJson(value)).toBe(
      '{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}',
    );
  });

  it('sorts keys by UTF-16 code units, as in RFC 8785, 3.2.3', () => {
    const value = {
      '\u20ac': 'Euro Sign',
      '\r': 'Carriage Return',
      '\ufb33': 'Hebrew Letter Dalet With Dagesh',
      '1': 'One',
      '\ud83d\ude00': 'Emoji: Grinning Face',
      '\u0080': 'Control',
      '\u00f6': 'Latin Small Letter O With Diaeresis',
    };
    expect(Object.values(JSON.parse(canonicalJson(value)))).toHaveLength(7);
    expect([...canonicalJson(value).matchAll(/:"([A-Z][^"]*)"/g)].map((match) => match[1])).toEqual([
      'Carriage Return',
      'One',
      'Control',
      'Latin Small Letter O With Diaeresis',
      'Euro Sign',
      'Emoji: Grinning Face',
      'Hebrew Letter Dalet With Dagesh',
    ]);
  });

  it('reads back as the same value, and does not depend on the order in which keys were added', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (value) => {
        const text = canonicalJson(value as Json);
        expect(canonicalJson(JSON.parse(text))).toBe(text);
        expect(JSON.parse(text)).toEqual(JSON.parse(JSON.stringify(value)));
      }),
    );
  });

  it.each([[Number.NaN], [Number.POSITIVE_INFINITY], ['\ud800']])('refuses %s', (value) => {
    expect(() => canonicalJson(value)).toThrow(TypeError);
  });
});
