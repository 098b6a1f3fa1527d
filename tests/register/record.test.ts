import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { registerState } from '../../src/register/chain.ts';
import { plainYaml } from '../../src/register/plain-yaml.ts';
import { type ReadRecord, readRecord } from '../../src/register/read-record.ts';
import { type Entry, fileOf, nameFor, type RegisterRecord, type Seal, seal } from '../../src/register/record.ts';

const content: Entry = {
  result: { title: 'Figure 4', doi: '10.1000/182', figure: '4' },
  code: [{ commit: 'a'.repeat(40) }],
  modules: [{ module: 'eos', component: 'equation-of-state', version: '2.0.3' }],
  people: [{ name: 'R. Vale' }],
};

function entry(
  about: string,
  follows: readonly Seal[] = [],
  more: Partial<RegisterRecord<object>> = {},
): RegisterRecord {
  return seal({
    format: 'mortise record 1',
    kind: 'entry',
    about,
    follows,
    written: `2026-03-01T00:00:0${follows.length}.000Z`,
    by: { name: 'R. Vale' },
    content,
    ...more,
  } as never) as RegisterRecord;
}

const bytesOf = (record: object) => new TextEncoder().encode(plainYaml(JSON.parse(JSON.stringify(record))));
const kept = (record: RegisterRecord): ReadRecord => readRecord(fileOf(record), bytesOf(record));
const kinds = (findings: readonly { kind: string }[]) => findings.map((one) => one.kind);

describe('a record', () => {
  it('reads back as it was sealed', () => {
    const record = entry('one');
    expect(kept(record)).toEqual({ file: fileOf(record), record, findings: [] });
  });

  it('is known as altered when any value in it is another', () => {
    const text = plainYaml(JSON.parse(JSON.stringify(entry('one'))));
    for (const [from, to] of [
      ['2.0.3', '2.0.4'],
      ['R. Vale', 'R. Dale'],
      ['Figure 4', 'Figure 5'],
      ['follows: []', 'follows: ["sha256:00"]'],
    ] as const) {
      const read = readRecord('f.yaml', new TextEncoder().encode(text.replace(from, to)));
      expect(kinds(read.findings), from).toEqual(['record-altered']);
      expect(read.record).toBeDefined();
    }
  });

  it('is the same record when its YAML was only laid out otherwise', () => {
    const text = plainYaml(JSON.parse(JSON.stringify(entry('one'))));
    const relaid = `# kept by hand\n${text.replace('follows: []', 'follows:   []   # none')}`;
    expect(readRecord('f.yaml', new TextEncoder().encode(relaid)).findings).toEqual([]);
  });

  it.each([
    ['empty', new Uint8Array(), 1, 'empty'],
    ['not UTF-8', new Uint8Array([97, 58, 32, 98, 10, 0xff, 10]), 2, 'UTF-8'],
    [
      'merge-conflicted',
      new TextEncoder().encode('format: mortise record 1\n<<<<<<< ours\na: 1\n=======\n'),
      2,
      'merge conflict',
    ],
    ['truncated', bytesOf(entry('one')).slice(0, 60), 1, 'record'],
    ['no YAML', new TextEncoder().encode('a: 1\nb: [\n'), 3, 'no YAML'],
  ])('that is %s is reported by name and line', (_, bytes, line, words) => {
    const { findings, record } = readRecord('2026/f.yaml', bytes);
    expect(record).toBeUndefined();
    expect(findings).toMatchObject([
      { kind: 'record-unreadable', gravity: 'stop', place: { file: '2026/f.yaml', line } },
    ]);
    expect(findings[0]?.says).toContain(words);
  });

  it('never throws, whatever the bytes', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 200 }), (bytes) => {
        expect(readRecord('f.yaml', bytes).findings.length).toBe(1);
      }),
    );
    const good = bytesOf(entry('one'));
    fc.assert(
      fc.property(fc.nat(good.length - 1), fc.nat(255), (at, value) => {
        const bytes = good.slice();
        if (bytes[at] === value) return;
        bytes[at] = value;
        const read = readRecord('f.yaml', bytes);
        // A byte that leaves the content as it was (white space) is no alteration; any other is found.
        if (read.findings.length === 0) expect(read.record).toEqual(entry('one'));
      }),
      { numRuns: 500 },
    );
  });
});

describe('names', () => {
  it('hold the day, the words and something of the content, so that two branches choose different ones', () => {
    expect(nameFor('2026-03-01T10:00:00Z', 'Figure 4: Ionisation à l’équilibre!', 'x')).toMatch(
      /^2026-03-01-figure-4-ionisation-a-l-e-quilibre-[0-9a-f]{8}$/,
    );
    expect(nameFor('2026-03-01T10:00:00Z', 'a', 'x')).not.toBe(nameFor('2026-03-01T10:00:00Z', 'a', 'y'));
  });
});

describe('the register', () => {
  const first = entry('one');
  const second = entry('two', [first.seal]);
  const amended = entry('one', [second.seal], {
    kind: 'amendment',
    replaces: first.seal,
    written: '2026-03-02T00:00:00.000Z',
    content: { ...content, notes: 'outputs moved' },
  });

  it('shows each entry as its last amendment left it, and keeps every record', () => {
    const state = registerState([first, second, amended].map(kept));
    expect(state.findings).toEqual([]);
    expect(state.entries.get('one')?.content.notes).toBe('outputs moved');
    expect(state.entries.get('one')?.records).toHaveLength(2);
    expect(state.tips).toEqual([amended.seal]);
  });

  it('misses a record taken from the middle', () => {
    expect(kinds(registerState([first, amended].map(kept)).findings)).toEqual(['record-missing']);
    expect(kinds(registerState([second, amended].map(kept)).findings)).toEqual(['record-missing', 'record-missing']);
  });

  it('merges two branches that both added entries, and has both to follow', () => {
    const other = entry('three', [first.seal]);
    const state = registerState([first, second, other].map(kept));
    expect(state.findings).toEqual([]);
    expect(state.tips).toEqual([second.seal, other.seal].sort());
  });

  it('tells when an entry was amended on two branches', () => {
    const other = entry('one', [second.seal], {
      kind: 'amendment',
      replaces: first.seal,
      written: '2026-03-03T00:00:00.000Z',
    });
    expect(kinds(registerState([first, second, amended, other].map(kept)).findings)).toEqual(['record-forked']);
  });

  it('keeps the other records in sight when one can not be read', () => {
    const state = registerState([kept(first), readRecord('2026/bad.yaml', new Uint8Array([0xff])), kept(second)]);
    expect([...state.entries.keys()]).toEqual(['one', 'two']);
    expect(kinds(state.findings)).toEqual(['record-unreadable']);
  });

  it('tells of a file under another name and of a record kept twice', () => {
    const renamed = readRecord('2026/other.yaml', bytesOf(first));
    expect(kinds(registerState([renamed]).findings)).toEqual(['record-renamed']);
    expect(kinds(registerState([kept(first), renamed]).findings)).toEqual(['record-doubled']);
  });
});
