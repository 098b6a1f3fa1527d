/** One JSON text for one value, so that a digest of it can be made again anywhere. The register and clearances are sealed over it. */

export type Json = null | boolean | number | string | readonly Json[] | { readonly [key: string]: Json | undefined };

/**
 * Canonical JSON: no white space, keys in the order of their UTF-16 code units, numbers as ECMAScript prints them.
 * Members that are `undefined` are left out, as JSON.stringify does.
 *
 * @throws {TypeError} for NaN and infinities, and for strings with a lone surrogate: neither has a JSON text
 * @source RFC 8785, JSON Canonicalization Scheme, 3.2
 */
export function canonicalJson(value: Json): string {
  if (value === null || typeof value === 'boolean') return String(value);
  if (typeof value === 'number') return numberText(value);
  if (typeof value === 'string') return stringText(value);
  if (Array.isArray(value)) return `[${(value as readonly Json[]).map(canonicalJson).join(',')}]`;
  const members = Object.entries(value as { readonly [key: string]: Json | undefined })
    .filter((entry): entry is [string, Json] => entry[1] !== undefined)
    .sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
  return `{${members.map(([key, member]) => `${stringText(key)}:${canonicalJson(member)}`).join(',')}}`;
}

function numberText(value: number): string {
  if (!Number.isFinite(value)) throw new TypeError(`${value} has no JSON text`);
  return JSON.stringify(value);
}

function stringText(value: string): string {
  if (!value.isWellFormed()) throw new TypeError('a string with a lone surrogate has no JSON text');
  return JSON.stringify(value);
}
