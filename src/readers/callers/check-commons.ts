/** COMMON blocks of one name held against each other. Storage that differs everywhere by design is told once. Pure. */

import { type Finding, sortFindings } from '../../model/finding.ts';
import { groupBy } from '../../model/group.ts';
import type { CommonBlock } from '../../model/interface.ts';
import type { Place } from '../../model/place.ts';
import type { LinkedCode } from '../link.ts';

interface Site {
  readonly file: string;
  readonly block: CommonBlock;
}

/** From this many layouts with few names in common on, a block is scratch storage: nobody means one layout. */
const SCRATCH_LAYOUTS = 3;
/** From this share of names in common on, two layouts mean one block. */
const ALIKE = 0.5;
/** What people call the storage that every routine uses as it likes; common practice. */
const SCRATCH_NAME = /^(?:scr|ctmp|tmp|temp\d|wrk|work|dummy|buf)/;

export function checkCommons(linked: LinkedCode): Finding[] {
  const byName = new Map<string, Site[]>();
  for (const [file, read] of linked.files) {
    for (const block of read.commons) {
      if (block.name === '') continue;
      const known = byName.get(block.name);
      if (known === undefined) byName.set(block.name, [{ file, block }]);
      else known.push({ file, block });
    }
  }
  const findings: Finding[] = [];
  for (const [name, sites] of byName) {
    const told = new Set<string>();
    for (const one of perProgram(linked, sites).flatMap((group) => checkBlock(name, group))) {
      const key = `${one.place.file}:${one.place.line}:${one.says}`;
      if (!told.has(key)) findings.push(one);
      told.add(key);
    }
  }
  return sortFindings(findings);
}

/** Sites of one main program, together with those that may be part of any: blocks of programs apart share a name only. */
function perProgram(linked: LinkedCode, sites: readonly Site[]): Site[][] {
  const homes = new Set(sites.map((one) => linked.homeOf(one.file)));
  homes.delete(null);
  if (homes.size < 2) return [[...sites]];
  return [...homes].map((home) =>
    sites.filter((one) => {
      const own = linked.homeOf(one.file);
      return own === null || own === home;
    }),
  );
}

function checkBlock(name: string, sites: readonly Site[]): Finding[] {
  const layouts = groupBy(sites, ({ block }) => layoutOf(block));
  if (layouts.size < 2) return [];
  const groups = [...layouts.values()].sort((a, b) => b.length - a.length);
  if (isScratch(name, groups)) {
    return [
      {
        kind: 'common-scratch',
        gravity: 'note',
        place: placeOf(sites[0]!),
        says: `COMMON /${name}/ has ${layouts.size} layouts at ${sites.length} places: scratch storage, it seems.`,
        evidence: groups.slice(0, 4).map(([site]) => ({ says: membersText(site!.block), place: placeOf(site!) })),
        next: 'nothing, where it is scratch storage that no called routine shares.',
      },
    ];
  }
  const [usual] = groups;
  const fitting = fittingLayouts(sites, layoutOf(usual![0]!.block));
  return groups.flatMap((group) => {
    const site = group.find((one) => !fitting.has(placeKey(one)));
    if (site === undefined) return [];
    const why = difference(usual![0]!.block, site.block);
    if (why === null) return [];
    return [
      {
        kind: 'common-differs' as const,
        gravity: why.grave ? ('stop' as const) : ('caution' as const),
        place: placeOf(site),
        says: `COMMON /${name}/ differs here from ${usual!.length === 1 ? 'the other place' : `${usual!.length} other places`}: ${why.says}.`,
        evidence: [
          { says: `here ${membersText(site.block)}` },
          { says: `there ${membersText(usual![0]!.block)}`, place: placeOf(usual![0]!) },
        ],
        next: 'bring both to one layout, in one include file.',
      },
    ];
  });
}

/**
 * Statements that fit the usual layout. The branches of a preprocessor condition are one statement: it fits when one branch
 * does, and what another branch of it says fits in its turn.
 */
function fittingLayouts(sites: readonly Site[], usual: string): ReadonlySet<string> {
  const statements = [...groupBy(sites, placeKey)];
  const layouts = new Set([usual]);
  for (const [, branches] of statements) {
    const own = branches.map(({ block }) => layoutOf(block));
    if (own.includes(usual)) for (const one of own) layouts.add(one);
  }
  return new Set(
    statements.flatMap(([key, branches]) => (branches.some(({ block }) => layouts.has(layoutOf(block))) ? [key] : [])),
  );
}

function placeKey({ file, block }: Site): string {
  return `${file}:${block.condition === undefined ? block.line : (block.parent ?? '')}`;
}

/** Layouts that hold other names under one block name: every routine puts its own there. */
function isScratch(name: string, groups: readonly (readonly Site[])[]): boolean {
  if (SCRATCH_NAME.test(name)) return true;
  if (groups.length < SCRATCH_LAYOUTS) return false;
  const names = groups.map(([site]) => new Set(site!.block.members.map((one) => one.name)));
  const [usual, ...others] = names;
  const unlike = others.filter((one) => sharedNames(usual!, one) < ALIKE);
  return unlike.length * 2 > others.length;
}

/** Names in both, as a share of the names in either. */
function sharedNames(a: ReadonlySet<string>, b: ReadonlySet<string>): number {
  return [...a].filter((name) => b.has(name)).length / Math.max(1, new Set([...a, ...b]).size);
}

/** Sizes and types in storage order; names do not matter for storage. */
function layoutOf(block: CommonBlock): string {
  return block.members.map((one) => `${one.name} ${one.type} ${one.bytes} ${one.bounds.join(',')}`).join(';');
}

/** The first thing that differs, and whether it puts other values under the names; null where only names differ. */
function difference(usual: CommonBlock, other: CommonBlock): { says: string; grave: boolean } | null {
  const names = (block: CommonBlock) => block.members.map((one) => one.name);
  const [a, b] = [names(usual), names(other)];
  if (a.join() !== b.join() && [...a].sort().join() === [...b].sort().join()) {
    const at = a.findIndex((name, index) => name !== b[index]);
    return { says: `the same members in another order, ${b[at]} where ${a[at]} is elsewhere`, grave: true };
  }
  for (let at = 0; at < Math.min(a.length, b.length); at++) {
    const [one, two] = [usual.members[at]!, other.members[at]!];
    if (one.type !== two.type && one.type !== 'unknown' && two.type !== 'unknown')
      return { says: `${two.name} is ${two.type} where ${one.name} is ${one.type}`, grave: one.name === two.name };
    if (one.bytes !== two.bytes && one.bytes !== null && two.bytes !== null)
      return { says: `${two.name} has ${two.bytes} bytes where ${one.name} has ${one.bytes}`, grave: true };
    if (
      one.bounds.join() !== two.bounds.join() &&
      one.shape.join() !== two.shape.join() &&
      !one.shape.includes(null) &&
      !two.shape.includes(null)
    ) {
      return {
        says: `${two.name} is (${two.bounds.join(', ')}) where ${one.name} is (${one.bounds.join(', ')})`,
        grave: at < Math.min(a.length, b.length) - 1,
      };
    }
  }
  if (a.length !== b.length) return { says: `${b.length} members where there are ${a.length} elsewhere`, grave: false };
  return null;
}

function membersText(block: CommonBlock): string {
  return (
    block.members
      .slice(0, 12)
      .map((one) => `${one.name}${one.rank === 0 ? '' : `(${one.bounds.join(',')})`}`)
      .join(', ') + (block.members.length > 12 ? ', …' : '')
  );
}

function placeOf({ file, block }: Site): Place {
  return { file, line: block.line, column: block.column };
}
