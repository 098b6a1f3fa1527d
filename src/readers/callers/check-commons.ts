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

/** From this many layouts on a block is scratch storage: nobody means one layout. */
const SCRATCH_LAYOUTS = 4;

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
  return sortFindings([...byName].flatMap(([name, sites]) => checkBlock(name, sites)));
}

function checkBlock(name: string, sites: readonly Site[]): Finding[] {
  const layouts = groupBy(sites, ({ block }) => layoutOf(block));
  if (layouts.size < 2) return [];
  const groups = [...layouts.values()].sort((a, b) => b.length - a.length);
  if (layouts.size >= SCRATCH_LAYOUTS) {
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
  const [usual, ...others] = groups;
  return others.flatMap((group) => {
    const [site] = group;
    const why = difference(usual![0]!.block, site!.block);
    if (why === null) return [];
    return [
      {
        kind: 'common-differs' as const,
        gravity: why.grave ? ('stop' as const) : ('caution' as const),
        place: placeOf(site!),
        says: `COMMON /${name}/ differs here from ${usual!.length === 1 ? 'the other place' : `${usual!.length} other places`}: ${why.says}.`,
        evidence: [
          { says: `here ${membersText(site!.block)}` },
          { says: `there ${membersText(usual![0]!.block)}`, place: placeOf(usual![0]!) },
        ],
        next: 'bring both to one layout, in one include file.',
      },
    ];
  });
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
