/** What changed about the meaning that comments, docstrings and attributes claim: units, bases, signs, frames. Pure. */
import type { ChangeKind } from '../model/bump.ts';
import type { Change } from '../model/change.ts';
import type { Claim, Dataset } from '../model/interface.ts';
import { type Part, placeIn, type SourceSide } from './source-side.ts';

/**
 * A claim that comes or goes only documents; a claim that says something else is a change, wherever the thing now stands.
 *
 * @param sameUnit  whether two spellings mean the same unit: `g/cm3` and `g cm^-3`
 */
export function compareClaims(
  before: readonly SourceSide[],
  after: readonly SourceSide[],
  sameUnit: (a: string, b: string) => boolean,
): Change[] {
  const was = grouped(before);
  const changes: Change[] = [];
  const told = new Set<string>();
  for (const [key, fresh] of grouped(after)) {
    const old = was.get(key);
    if (old === undefined) continue;
    const { what } = fresh[0]!.it;
    const same = (a: string, b: string) => plain(a) === plain(b) || (what === 'unit' && sameUnit(a, b));
    // Of several claims (a table of comments, a name and its comment) one that is kept is enough.
    if (fresh.some((a) => old.some((b) => same(b.it.value, a.it.value)))) continue;
    const [b, a] = [old[0]!, fresh[0]!];
    const owner = a.it.parent === null ? '' : ` of ${a.it.parent.split('::').at(-1)}`;
    const says = `${WORDS[what]} of ${a.it.name}${owner} is ${a.it.value}, was ${b.it.value}`;
    if (told.has(says)) continue;
    told.add(says);
    changes.push({
      kind: KINDS[what],
      subject: a.it.parent === null ? a.it.name : `${a.it.parent.split('::').at(-1)}.${a.it.name}`,
      says,
      before: { text: b.it.text, place: placeIn(b.side, b.it) },
      after: { text: a.it.text, place: placeIn(a.side, a.it) },
    });
  }
  return changes;
}

const WORDS: Readonly<Record<Claim['what'], string>> = {
  unit: 'the unit',
  basis: 'the basis',
  sign: 'the sign',
  'log-base': 'the base of the logarithm',
  angle: 'the angle',
  'reference-state': 'the reference state',
  shape: 'the shape',
  'index-order': 'the order of indices',
  frame: 'the frame',
};

const KINDS: Readonly<Record<Claim['what'], ChangeKind>> = {
  unit: 'unit-changed',
  basis: 'convention-changed',
  sign: 'convention-changed',
  'log-base': 'convention-changed',
  angle: 'convention-changed',
  'reference-state': 'convention-changed',
  shape: 'claim-changed',
  'index-order': 'convention-changed',
  frame: 'convention-changed',
};

/** Data sets of tables: edges, spacing, units. */
export function compareDatasets(
  before: readonly SourceSide[],
  after: readonly SourceSide[],
  sameUnit: (a: string, b: string) => boolean,
): Change[] {
  const was = new Map(
    before.flatMap((side) => side.code.datasets.map((it) => [`${side.path}\0${it.name}`, { side, it }])),
  );
  return after.flatMap((side) =>
    side.code.datasets.flatMap((it): Change[] => {
      const old = was.get(`${side.path}\0${it.name}`);
      return old === undefined ? [] : compareDataset({ side: old.side, it: old.it }, { side, it }, sameUnit);
    }),
  );
}

function compareDataset(
  b: { side: SourceSide; it: Dataset },
  a: { side: SourceSide; it: Dataset },
  sameUnit: (x: string, y: string) => boolean,
): Change[] {
  const changes: Change[] = [];
  const start = { line: 1, column: 1 };
  const add = (kind: ChangeKind, says: string, was: string, is: string) => {
    changes.push({
      kind,
      subject: a.it.name,
      says,
      before: { text: was, place: placeIn(b.side, start) },
      after: { text: is, place: placeIn(a.side, start) },
    });
  };
  const edges = (it: Dataset) =>
    [Math.min(it.axis!.first, it.axis!.last), Math.max(it.axis!.first, it.axis!.last)] as const;
  const base = (it: Dataset) => it.axis?.logBase;
  if (b.it.axis !== undefined && a.it.axis !== undefined && base(b.it) !== base(a.it)) {
    const text = (it: Dataset) => (base(it) === undefined ? 'plain values' : `logarithms to base ${base(it)}`);
    add('convention-changed', `axis ${a.it.name} holds ${text(a.it)}, held ${text(b.it)}`, text(b.it), text(a.it));
  } else if (b.it.axis !== undefined && a.it.axis !== undefined) {
    const [was, is] = [edges(b.it), edges(a.it)];
    const text = (pair: readonly [number, number]) => `${pair[0]} to ${pair[1]}`;
    const says = `axis ${a.it.name} runs from ${text(is)}, ran from ${text(was)}`;
    if (is[0] > was[0] || is[1] < was[1]) add('table-edges-narrowed', says, text(was), text(is));
    else if (is[0] < was[0] || is[1] > was[1]) add('table-edges-widened', says, text(was), text(is));
  }
  if (
    b.it.unit !== undefined &&
    a.it.unit !== undefined &&
    plain(b.it.unit) !== plain(a.it.unit) &&
    !sameUnit(b.it.unit, a.it.unit)
  ) {
    add('unit-changed', `the unit of ${a.it.name} is ${a.it.unit}, was ${b.it.unit}`, b.it.unit, a.it.unit);
  }
  return changes;
}

function grouped(sides: readonly SourceSide[]): Map<string, Part<Claim>[]> {
  const map = new Map<string, Part<Claim>[]>();
  for (const side of sides) {
    for (const it of side.code.claims) {
      const key = `${it.parent?.split('::').at(-1) ?? ''}\0${it.name.toLowerCase()}\0${it.what}`;
      const list = map.get(key) ?? [];
      list.push({ side, it, key, name: it.name });
      map.set(key, list);
    }
  }
  return map;
}

function plain(text: string): string {
  return text.replace(/\s+/g, ' ').trim().toLowerCase();
}
