/** What changed about storage that several procedures share: COMMON blocks, derived types, module variables. Pure. */
import type { Change } from '../model/change.ts';
import type { CommonBlock, Declared, ModuleVariable, TypeDefinition } from '../model/interface.ts';
import { declaredText, sameBytes, sameExtents, sameRank, sameType } from './compare-declared.ts';
import { type Part, pair, placeIn, type SourceSide } from './source-side.ts';

export function compareCommons(before: readonly SourceSide[], after: readonly SourceSide[]): Change[] {
  const changes: Change[] = [];
  const told = new Set<string>();
  for (const { before: b, after: a } of pair(commons(before), commons(after)).pairs) {
    const difference = layoutDifference(b.it.members, a.it.members);
    if (difference === null) continue;
    const says = `COMMON ${blockName(a.it)}: ${difference}`;
    // The same block stands in every procedure that uses it, and changes in all of them at once.
    if (told.has(says)) continue;
    told.add(says);
    changes.push({ kind: 'common-layout', subject: blockName(a.it), says, before: members(b), after: members(a) });
  }
  return changes;
}

export function compareTypes(before: readonly SourceSide[], after: readonly SourceSide[]): Change[] {
  return pair(types(before), types(after)).pairs.flatMap(({ before: b, after: a }): Change[] => {
    if (a.side.code.language !== b.side.code.language || b.it.fields.length === 0 || a.it.fields.length === 0)
      return [];
    const difference = layoutDifference(b.it.fields, a.it.fields);
    if (difference === null) return [];
    const text = (it: TypeDefinition) => it.fields.map((field) => field.name).join(', ');
    return [
      {
        kind: 'type-layout',
        subject: a.name,
        says: `${a.it.kind} ${a.name}: ${difference}`,
        before: { text: text(b.it), place: placeIn(b.side, b.it) },
        after: { text: text(a.it), place: placeIn(a.side, a.it) },
      },
    ];
  });
}

/** Public variables of modules are arguments that no list shows: another type or rank breaks who uses them. */
export function compareVariables(before: readonly SourceSide[], after: readonly SourceSide[]): Change[] {
  return pair(variables(before), variables(after)).pairs.flatMap(({ before: b, after: a }): Change[] => {
    if (a.side.code.language !== b.side.code.language) return [];
    if (sameType(b.it, a.it) && sameBytes(b.it, a.it) && sameRank(b.it, a.it)) return [];
    return [
      {
        kind: 'type-layout',
        subject: a.name,
        says: `variable ${a.name} is ${declaredText(a.it)}, was ${declaredText(b.it)}`,
        before: { text: declaredText(b.it), place: placeIn(b.side, b.it) },
        after: { text: declaredText(a.it), place: placeIn(a.side, a.it) },
      },
    ];
  });
}

/**
 * The first difference that moves storage or meaning: a member gone, new, of another size, or in another place.
 * A member under a new name in the same place with the same size is none.
 */
function layoutDifference(was: readonly Declared[], is: readonly Declared[]): string | null {
  const names = (list: readonly Declared[]) => list.map((one) => one.name.toLowerCase());
  const [wasNames, isNames] = [names(was), names(is)];
  const gone = wasNames.filter((name) => !isNames.includes(name));
  const fresh = isNames.filter((name) => !wasNames.includes(name));
  if (was.length !== is.length) {
    const parts = [
      ...(gone.length > 0 ? [`${list(gone)} ${gone.length === 1 ? 'is' : 'are'} gone`] : []),
      ...(fresh.length > 0 ? [`${list(fresh)} ${fresh.length === 1 ? 'is' : 'are'} new`] : []),
    ];
    return parts.length > 0 ? parts.join(', ') : `${is.length} members, had ${was.length}`;
  }
  for (const [index, b] of was.entries()) {
    const a = is[index]!;
    const moved = wasNames[index] !== isNames[index] && isNames.includes(wasNames[index]!);
    if (moved) return `${b.name} stands in place ${isNames.indexOf(wasNames[index]!) + 1}, stood in place ${index + 1}`;
    if (!sameType(b, a)) return `${a.name} is ${a.type}, was ${b.type}`;
    if (!sameBytes(b, a)) return `${a.name} has ${a.bytes} bytes an element, had ${b.bytes}`;
    if (!sameRank(b, a)) return `${a.name} has rank ${a.rank}, had ${b.rank}`;
    if (!sameExtents(b, a)) return `${a.name} is ${a.name}(${a.bounds.join(',')}), was (${b.bounds.join(',')})`;
  }
  return null;
}

function list(names: readonly string[]): string {
  return names.length <= 4 ? names.join(', ') : `${names.slice(0, 3).join(', ')} and ${names.length - 3} more`;
}

function blockName(it: CommonBlock): string {
  return it.name === '' ? '//' : `/${it.name}/`;
}

function members({ side, it }: Part<CommonBlock>) {
  return { text: it.members.map((one) => one.name).join(', '), place: placeIn(side, it) };
}

function commons(sides: readonly SourceSide[]): Part<CommonBlock>[] {
  return sides.flatMap((side) => {
    // A block may be continued by a second statement: its members go on where the first ended.
    const joined = new Map<string, CommonBlock>();
    for (const it of side.code.commons) {
      const key = `${it.parent ?? ''}/${it.name}/${it.condition ?? ''}`;
      const first = joined.get(key);
      joined.set(key, first === undefined ? it : { ...first, members: [...first.members, ...it.members] });
    }
    return [...joined].map(([key, it]) => ({ side, it, key, name: `${it.parent ?? ''}/${it.name}` }));
  });
}

function types(sides: readonly SourceSide[]): Part<TypeDefinition>[] {
  return sides.flatMap((side) =>
    side.code.types.map((it) => ({ side, it, key: `${it.parent ?? ''}::${it.name}`, name: it.name })),
  );
}

function variables(sides: readonly SourceSide[]): Part<ModuleVariable>[] {
  return sides.flatMap((side) =>
    side.code.variables
      .filter((it) => it.visibility !== 'private')
      .map((it) => ({ side, it, key: `${it.parent ?? ''}::${it.name}`, name: it.name })),
  );
}
