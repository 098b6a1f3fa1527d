/** What only a whole file can decide: constants that rest on one another, the order of things, messages said once. */
import type { FileInterface, Incomplete, NamedConstant } from '../../model/interface.ts';
import type { Position } from '../../model/place.ts';
import { type ConstantValue, evaluate } from './evaluate.ts';

/** A reading of a unit, or of a file whose constants were not reckoned yet. */
export interface CUnitReading extends FileInterface {
  /** Names of the constants that macros give. */
  readonly macroConstants: readonly string[];
}

/** Messages of one kind beyond this many say nothing new. */
const MOST_MESSAGES = 50;

/** The interface of a file from what was read in it. Does not change the reading. */
export function settled(reading: CUnitReading): FileInterface {
  const { macroConstants, ...read } = reading;
  return {
    ...read,
    constants: reckoned([...read.constants].sort(byPlace), new Set(macroConstants)),
    claims: [...read.claims].sort(byPlace),
    incomplete: saidOnce([...read.incomplete].sort((a, b) => a.line - b.line)),
  };
}

function byPlace(a: Position, b: Position): number {
  return a.line - b.line || a.column - b.column;
}

function saidOnce(messages: readonly Incomplete[]): Incomplete[] {
  const said = new Set<string>();
  return messages.filter(({ why }) => {
    const key = why.replace(/\d+/g, '');
    if (said.has(key) || said.size >= MOST_MESSAGES) return false;
    said.add(key);
    return true;
  });
}

/** Values rest on one another in any order; each is reckoned once. */
function reckoned(constants: readonly NamedConstant[], macros: ReadonlySet<string>): NamedConstant[] {
  const byName = new Map<string, number>();
  constants.forEach((one, index) => {
    if (!byName.has(one.name)) byName.set(one.name, index);
  });
  const known = new Map<number, ConstantValue | null>();
  const busy = new Set<number>();
  const valueAt = (index: number): ConstantValue | null => {
    if (known.has(index)) return known.get(index)!;
    // Chains longer than this are no constants of physics, and would overflow the stack.
    if (busy.has(index) || busy.size > 64) return null;
    busy.add(index);
    const { text, type } = constants[index]!;
    const raw = evaluate(text, (name) => {
      const other = byName.get(name) ?? byName.get(name.slice(name.lastIndexOf(':') + 1));
      return other === undefined || other === index ? null : valueAt(other);
    });
    busy.delete(index);
    const value = raw === null || typeof raw.value !== 'number' ? raw : rounded(raw.value, raw, type);
    known.set(index, value);
    return value;
  };
  return constants
    .map((one, index): NamedConstant => {
      const value = valueAt(index);
      if (value === null) return one;
      const real = one.type === 'int' && typeof value.value === 'number' && !value.integer;
      return {
        ...one,
        value: one.type === 'bool' ? value.value !== 0 : value.value,
        ...(real ? { type: 'double' } : {}),
      };
    })
    .filter((one) => one.value !== null || one.type !== 'int' || one.parent !== null || !isName(one, macros));
}

function rounded(value: number, raw: ConstantValue, type: string): ConstantValue {
  if (type === 'float') return { value: Math.fround(value), integer: false, single: true };
  return /double|Real|real/.test(type) ? { value, integer: false } : raw;
}

/** A macro that names something else, or calls it, and comes to no value is no constant. */
function isName(one: NamedConstant, macros: ReadonlySet<string>): boolean {
  return /^[A-Za-z_]\w*$/.test(one.text) || (macros.has(one.name) && /\w\s*\(/.test(one.text));
}
