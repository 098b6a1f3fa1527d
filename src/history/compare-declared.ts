/** Whether two declarations say the same of a value. What a side leaves open (no intent, unknown bytes) is no difference. Pure. */
import type { Argument, Declared } from '../model/interface.ts';

/** `real*8 x(n,m), intent(in), optional`. */
export function declaredText(it: Declared | Argument): string {
  const size = it.bytes === null ? (it.kind === undefined ? '' : `(${it.kind})`) : `*${it.bytes}`;
  const bounds =
    it.rank === 0 ? '' : `(${it.bounds.length > 0 ? it.bounds.join(',') : Array(it.rank).fill(':').join(',')})`;
  const intent = 'intent' in it && it.intent !== null ? `, intent(${it.intent})` : '';
  const optional = 'optional' in it && it.optional ? ', optional' : '';
  return `${it.type}${size} ${it.name}${bounds}${intent}${optional}`;
}

/** The type without words that only order or spell it differently (`const double &` and `double const&`). */
export function sameType(before: Declared, after: Declared): boolean {
  if (before.type === 'unknown' || after.type === 'unknown' || before.type === '' || after.type === '') return true;
  return words(before.type) === words(after.type);
}

export function sameBytes(before: Declared, after: Declared): boolean {
  // A declared default may be promoted by the build, on both sides alike.
  if (before.bytes === null || after.bytes === null) return true;
  if (isText(before) && isText(after)) return true;
  return before.bytes === after.bytes;
}

/** `real a(1)`, `a(*)` and `a(n)` all pass a whole run of storage; assumed rank (`..`) takes every rank. */
export function sameRank(before: Declared, after: Declared): boolean {
  return before.rank === after.rank || before.bounds.includes('..') || after.bounds.includes('..');
}

/** Extents that are numbers on both sides and differ. */
export function sameExtents(before: Declared, after: Declared): boolean {
  return before.shape.every((extent, dimension) => {
    const other = after.shape[dimension];
    return extent === null || other === null || other === undefined || extent === other;
  });
}

function isText(it: Declared): boolean {
  return it.type === 'character';
}

const ALIASES: Readonly<Record<string, string>> = { 'double precision': 'real', 'double complex': 'complex' };

/** A type with and without its name space is one: `amrex::Real` where `using amrex::Real` was taken out. */
function words(type: string): string {
  const bare = type.replace(/\b\w+::/g, '').replace(/\s+/g, ' ');
  const plain = bare.replace(/ ?([&*()<>,]) ?/g, '$1').trim();
  const spelled = ALIASES[plain.toLowerCase()] ?? plain;
  return spelled.split(' ').sort().join(' ');
}
