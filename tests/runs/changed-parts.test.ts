import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ChangedText, type ProcedureSpan } from '../../src/runs/changed-parts.ts';

/** A text of procedures, each a heading, a body and an end, with text between them; and where they stand. */
function textOf(procedures: readonly (readonly [string, string])[], between = '! between\n') {
  const spans: ProcedureSpan[] = [];
  let text = between;
  for (const [name, body] of procedures) {
    const line = text.split('\n').length;
    text += `subroutine ${name}\n${body}\nend\n${between}`;
    spans.push({ name, line, endLine: line + 2 });
  }
  return { text, spans };
}

describe('ChangedText', () => {
  const before = textOf([
    ['a', 'x = 1'],
    ['b', 'y = 1'],
    ['c', 'z = 1'],
  ]);
  const after = textOf([
    ['a', 'x = 2'],
    ['b', 'y = 1'],
    ['c', 'z = 2'],
    ['d', 'new'],
  ]);
  const changed = new ChangedText('f', before, after);

  it('names the procedures whose text changed, and the rest of the file when that did', () => {
    expect(changed.parts.map((part) => part.procedure)).toEqual(['a', 'c', null]);
  });

  it('takes back one procedure and nothing else', () => {
    const { text } = textOf([
      ['a', 'x = 1'],
      ['b', 'y = 1'],
      ['c', 'z = 2'],
      ['d', 'new'],
    ]);
    expect(changed.takenBack([{ file: 'f', procedure: 'a' }])).toBe(text);
  });

  it('takes back what stands outside the procedures and keeps those that are not taken back', () => {
    const { text } = textOf([
      ['a', 'x = 2'],
      ['b', 'y = 1'],
      ['c', 'z = 2'],
    ]);
    expect(changed.takenBack([{ file: 'f', procedure: null }])).toBe(text);
  });

  it('is the new text with nothing taken back, and the old one with everything', () => {
    const names = fc.uniqueArray(fc.constantFrom('a', 'b', 'c', 'd', 'e'));
    const side = names.chain((list) =>
      fc.record({
        procedures: fc.tuple(...list.map((name) => fc.tuple(fc.constant(name), fc.constantFrom('x', 'y', 'z')))),
        between: fc.constantFrom('', '! one\n', '! two\n\n'),
      }),
    );
    fc.assert(
      fc.property(side, side, (one, two) => {
        const old = textOf(one.procedures as [string, string][], one.between);
        const now = textOf(two.procedures as [string, string][], two.between);
        const text = new ChangedText('f', old, now);
        expect(text.takenBack([])).toBe(now.text);
        expect(text.takenBack(text.parts)).toBe(old.text);
      }),
    );
  });
});
