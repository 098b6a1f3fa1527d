/** Readings of the units of a file, in any language, to one reading with the lines of the file. */
import type { Expression, ReadStatement } from '../model/expression.ts';
import type { Argument, Declared, FileInterface, Language, Procedure } from '../model/interface.ts';

/**
 * What was read in the units, one after another, each with its lines moved to where the unit stands.
 * The readings are not changed: one reading may serve many files.
 *
 * @param units     in order; `line` is the line of the file that a unit begins with
 * @param readings  one for each, with lines counted from the unit's first
 */
export function joinReadings(
  language: Language,
  units: readonly { readonly line: number }[],
  readings: readonly FileInterface[],
): FileInterface {
  const joined = {
    procedures: [] as Procedure[],
    commons: [] as FileInterface['commons'][number][],
    types: [] as FileInterface['types'][number][],
    variables: [] as FileInterface['variables'][number][],
    constants: [] as FileInterface['constants'][number][],
    literals: [] as FileInterface['literals'][number][],
    uses: [] as FileInterface['uses'][number][],
    includes: [] as FileInterface['includes'][number][],
    generics: [] as FileInterface['generics'][number][],
    calls: [] as FileInterface['calls'][number][],
    claims: [] as FileInterface['claims'][number][],
    storage: [] as FileInterface['storage'][number][],
    externals: [] as FileInterface['externals'][number][],
    incomplete: [] as FileInterface['incomplete'][number][],
  };
  const statements: ReadStatement[] = [];
  units.forEach((unit, index) => {
    const read = readings[index]!;
    const by = unit.line - 1;
    for (const one of read.procedures) joined.procedures.push(movedProcedure(one, by));
    for (const one of read.commons)
      joined.commons.push({ ...moved(one, by), members: one.members.map((member) => moved(member, by)) });
    for (const one of read.types)
      joined.types.push({
        ...moved(one, by),
        fields: one.fields.map((field) => moved(field, by)),
        bindings: one.bindings.map((binding) => moved(binding, by)),
      });
    for (const one of read.calls) joined.calls.push({ ...moved(one, by), args: one.args.map((arg) => moved(arg, by)) });
    moveAll(read.variables, joined.variables, by);
    moveAll(read.constants, joined.constants, by);
    moveAll(read.literals, joined.literals, by);
    moveAll(read.uses, joined.uses, by);
    moveAll(read.includes, joined.includes, by);
    moveAll(read.generics, joined.generics, by);
    moveAll(read.claims, joined.claims, by);
    moveAll(read.storage, joined.storage, by);
    moveAll(read.externals, joined.externals, by);
    moveAll(read.incomplete, joined.incomplete, by);
    for (const one of read.statements ?? [])
      statements.push({ ...moved(one, by), parts: one.parts.map((part) => movedExpression(part, by)) });
  });
  return { language, ...joined, datasets: [], ...(statements.length === 0 ? {} : { statements }) };
}

function moved<T extends { readonly line: number }>(one: T, by: number): T {
  return by === 0 ? one : { ...one, line: one.line + by };
}

function moveAll<T extends { readonly line: number }>(from: readonly T[], to: T[], by: number): void {
  for (const one of from) to.push(moved(one, by));
}

function movedExpression(one: Expression, by: number): Expression {
  if (by === 0) return one;
  return { ...one, line: one.line + by, parts: one.parts.map((part) => movedExpression(part, by)) };
}

function movedProcedure(one: Procedure, by: number): Procedure {
  if (by === 0) return one;
  return {
    ...one,
    line: one.line + by,
    endLine: one.endLine + by,
    args: one.args.map((arg): Argument => moved(arg, by)),
    result: one.result === null ? null : moved<Declared>(one.result, by),
  };
}
