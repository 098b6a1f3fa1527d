/** A tree and the shape that it should have come in; the plain value and everything that is wrong with it go out, all at once. */
import { nearest } from '../model/nearest.ts';
import { readUnit } from '../units/read-unit.ts';
import type { Span } from './manifest-text.ts';
import { anyOf, type Problem, quoted } from './problem.ts';
import type { RecordShape, Shape } from './shape.ts';
import { checkText, type FormName, TEXT_FORMS, type TextForm } from './text-form.ts';
import type { MapNode, ScalarNode, TreeNode } from './yaml-tree.ts';

/** What a whole validation carries along: where problems go, and a check of units that a later stage of the build hands in. */
export interface Validation {
  readonly problems: Problem[];
}

const FAILED = Symbol('failed');
type Checked = unknown | typeof FAILED;

/**
 * Checks a tree against a shape.
 *
 * @param validation  problems are added to it; it begins without any
 * @returns the value, with the maps that are keyed by name free of inherited properties; undefined when any problem is a stop
 */
export function validate(node: TreeNode, shape: Shape, validation: Validation): unknown {
  const value = check(node, shape, '', validation);
  // A caution is said, and what it is about is taken all the same.
  const stops = validation.problems.some((problem) => (problem.gravity ?? 'stop') === 'stop');
  return stops || value === FAILED ? undefined : value;
}

/** `where` is the key that holds the value, for messages; empty for the whole manifest. */
function check(node: TreeNode, shape: Shape, where: string, validation: Validation): Checked {
  switch (shape.is) {
    case 'record':
      return checkRecord(node, shape, where, validation);
    case 'map':
      return checkMap(node, shape, where, validation);
    case 'list':
      return checkList(node, shape, where, validation);
    case 'range':
      return checkRange(node, where, validation);
    case 'either':
      return check(node, shape.of.find((one) => sortOf(one) === node.is) ?? shape.of[0]!, where, validation);
    default:
      return checkScalar(node, shape, where, validation);
  }
}

function sortOf(shape: Shape): TreeNode['is'] {
  if (shape.is === 'record' || shape.is === 'map') return 'map';
  return shape.is === 'list' || shape.is === 'range' ? 'list' : 'scalar';
}

function checkRecord(node: TreeNode, shape: RecordShape, where: string, validation: Validation): Checked {
  if (node.is !== 'map')
    return wrongSort(node, where, `${shape.title}, a map with the keys ${keysText(shape)}`, validation);
  const value: Record<string, unknown> = {};
  const meant = new Set<string | null>();
  for (const [name, entry] of node.entries) {
    const key = Object.hasOwn(shape.keys, name) ? shape.keys[name] : undefined;
    if (key === undefined) {
      meant.add(unknownKey(name, entry.key, shape, node, validation));
      continue;
    }
    const checked = check(entry.node, key.shape, name, validation);
    if (checked !== FAILED) value[name] = checked;
  }
  // A required key that is only misspelt was already named in the suggestion for the key that is not known.
  const missing = Object.keys(shape.keys).filter(
    (name) => shape.keys[name]!.required && !node.entries.has(name) && !meant.has(name),
  );
  for (const name of missing) {
    validation.problems.push({
      kind: 'manifest-invalid',
      span: firstKey(node),
      says: `${capital(shape.title)} must say "${name}", and this one does not.`,
      next: `add "${name}:" here: ${lowerFirst(shape.keys[name]!.says)}`,
    });
  }
  return value;
}

function unknownKey(
  name: string,
  span: Span,
  shape: RecordShape,
  node: MapNode,
  validation: Validation,
): string | null {
  const free = Object.keys(shape.keys).filter((key) => !node.entries.has(key));
  const meant = nearest(name, free);
  validation.problems.push({
    kind: 'manifest-unknown-key',
    span,
    says:
      name === '<<'
        ? 'Merge keys (<<) are not part of YAML 1.2.'
        : `${capital(shape.title)} has no key ${quoted(name)}.`,
    next:
      meant !== null
        ? `write "${meant}", or remove it.`
        : free.length === 0
          ? 'remove it.'
          : `remove it, or write one of ${anyOf(free)}.`,
  });
  return meant;
}

function checkMap(node: TreeNode, shape: Shape & { is: 'map' }, where: string, validation: Validation): Checked {
  if (node.is !== 'map') return wrongSort(node, where, 'a map, such as {name: value}', validation);
  if (node.entries.size < (shape.atLeast ?? 0)) {
    return problem(validation, node.span, `"${where}" is empty.`, 'give at least one entry.');
  }
  // Without a prototype, so that a quantity called "constructor" finds only what the manifest says.
  const value: Record<string, unknown> = Object.create(null);
  let sound = true;
  for (const [name, entry] of node.entries) {
    if (!checkKey(name, entry.key, shape.key, where, validation)) sound = false;
    const checked = check(entry.node, shape.of, name, validation);
    if (checked === FAILED) sound = false;
    else value[name] = checked;
  }
  return sound ? value : FAILED;
}

function checkKey(
  name: string,
  span: Span,
  key: FormName | readonly string[],
  where: string,
  validation: Validation,
): boolean {
  if (typeof key !== 'string') {
    if (key.includes(name)) return true;
    const meant = nearest(name, key);
    validation.problems.push({
      kind: 'manifest-unknown-key',
      span,
      says: `"${where}" has no key ${quoted(name)}.`,
      next: meant === null ? `write one of ${anyOf(key)}.` : `write "${meant}".`,
    });
    return false;
  }
  const wrong = checkText(key, name);
  if (wrong !== null) validation.problems.push({ kind: 'manifest-invalid', span, ...wrong });
  return wrong === null;
}

function checkList(node: TreeNode, shape: Shape & { is: 'list' }, where: string, validation: Validation): Checked {
  if (node.is !== 'list') return wrongSort(node, where, 'a list, such as [first, second]', validation);
  if (node.items.length < (shape.atLeast ?? 0)) {
    return problem(validation, node.span, `"${where}" is empty.`, 'give at least one entry.');
  }
  const values = node.items.map((item) => check(item, shape.of, where, validation));
  return values.includes(FAILED) ? FAILED : values;
}

function checkRange(node: TreeNode, where: string, validation: Validation): Checked {
  const example = 'write two numbers, [1e-26, 1e-14], with null for an end that has no bound.';
  if (node.is !== 'list')
    return problem(validation, node.span, `A range has two ends; this is ${what(node)}.`, example);
  if (node.items.length !== 2) {
    return problem(validation, node.span, `A range has two ends; this one has ${node.items.length}.`, example);
  }
  const ends = node.items.map((item) =>
    item.is === 'scalar' && item.value === null && item.written !== ''
      ? null
      : check(item, { is: 'number' }, where, validation),
  );
  if (ends.includes(FAILED)) return FAILED;
  const [low, high] = ends as (number | null)[];
  if (low !== null && high !== null && low! > high!) {
    return problem(validation, node.span, 'The range ends below its beginning.', `write [${high}, ${low}].`);
  }
  return [low, high];
}

function checkScalar(
  node: TreeNode,
  shape: Exclude<Shape, { is: 'record' | 'map' | 'list' | 'range' | 'either' }>,
  where: string,
  validation: Validation,
): Checked {
  if (node.is !== 'scalar') return wrongSort(node, where, wanted(shape), validation);
  if (node.value === null) {
    return problem(validation, node.span, `"${where}" is empty.`, `write ${wanted(shape)}, or remove the key.`);
  }
  if (shape.is === 'number') return checkNumber(node, shape, where, validation);
  if (shape.is === 'flag') {
    if (typeof node.value === 'boolean') return node.value;
    return problem(validation, node.span, `"${where}" is yes or no; this is ${what(node)}.`, 'write true or false.');
  }
  if (shape.is === 'scalar') return checkPlain(node, shape.asText === true, validation);
  const value = asText(node, shape);
  if (value === null) {
    return problem(
      validation,
      node.span,
      `"${where}" is a text, and YAML reads ${node.written} as ${typeof node.value === 'number' ? 'a number' : 'true or false'}.`,
      shape.is === 'text' ? instead(shape.form, node) : `write one of ${anyOf(shape.of)}.`,
    );
  }
  if (shape.is === 'choice') {
    if (shape.of.includes(value)) return value;
    const meant = nearest(value, shape.of);
    const others = shape.of.length > 8 && meant !== null ? `write "${meant}".` : `write ${anyOf(shape.of)}.`;
    return problem(validation, node.span, `${quoted(value)} is no choice for "${where}".`, others);
  }
  const wrong = checkText(shape.form, value);
  if (wrong !== null) {
    validation.problems.push({
      kind: shape.form === 'path' && /leads/.test(wrong.says) ? 'manifest-outside' : 'manifest-invalid',
      span: node.span,
      ...wrong,
    });
    return FAILED;
  }
  if (shape.form === 'unit' && unitProblem(node, value, validation)) return FAILED;
  return value;
}

/** @returns true when the text is no unit; a unit that can be read in several ways is only a caution */
function unitProblem(node: ScalarNode, text: string, validation: Validation): boolean {
  const reading = readUnit(text);
  if (!('error' in reading)) {
    const readings = reading.readings ?? [];
    if (readings.length > 1) {
      validation.problems.push({
        kind: 'unit-ambiguous',
        gravity: 'caution',
        span: node.span,
        says: `${quoted(text)} can be read as ${readings.map((one) => one.says).join(', or as ')}; it is taken as the first.`,
        next: 'write the unit so that it can be read in one way only.',
      });
    }
    return false;
  }
  const { says, column, width, suggestion } = reading.error;
  // Inside quotes the text begins one later; with escapes in it only the whole value can be pointed at.
  const start = node.span.start + (node.plain ? 0 : 1) + column - 1;
  const exact = node.written === text && start + width <= node.span.end;
  validation.problems.push({
    kind: 'unit-unknown',
    span: exact ? { start, end: start + width } : node.span,
    says: `${says.charAt(0).toUpperCase()}${says.slice(1)}${/[.!?]$/.test(says) ? '' : '.'}`,
    next: suggestion === undefined ? 'write a unit such as g/cm3, or 1 for a pure number.' : nextText(suggestion),
  });
  return true;
}

/** A suggestion is a unit, or an instruction of several words. */
function nextText(suggestion: string): string {
  return suggestion.includes(' ') ? `${suggestion.replace(/\.$/, '')}.` : `write "${suggestion}".`;
}

function asText(node: ScalarNode, shape: Shape): string | null {
  if (typeof node.value === 'string') return node.value;
  const form: TextForm | null = shape.is === 'text' ? TEXT_FORMS[shape.form] : null;
  return form?.numberToo === true && typeof node.value === 'number' ? node.written : null;
}

function instead(form: FormName, node: ScalarNode): string {
  return checkText(form, node.written) === null
    ? `write "${node.written}", in quotes.`
    : TEXT_FORMS[form].mend(node.written);
}

function checkPlain(node: ScalarNode, asText: boolean, validation: Validation): Checked {
  if (asText && typeof node.value !== 'string') return node.written;
  if (typeof node.value === 'number' && !Number.isFinite(node.value)) {
    return problem(
      validation,
      node.span,
      `${node.written} is no finite number.`,
      'write a number, or put it in quotes.',
    );
  }
  const wrong = typeof node.value === 'string' ? checkText('prose', node.value) : null;
  return wrong === null ? node.value : problem(validation, node.span, wrong.says, wrong.next);
}

function checkNumber(
  node: ScalarNode,
  shape: Shape & { is: 'number' },
  where: string,
  validation: Validation,
): Checked {
  const { value } = node;
  if (typeof value !== 'number') {
    const number = typeof value === 'string' ? numberMeant(value) : null;
    return problem(
      validation,
      node.span,
      `"${where}" is a number; YAML reads ${quoted(node.written)} as ${what(node)}.`,
      number === null ? 'write a number such as 1e-6, without a unit and without quotes.' : `write ${number}.`,
    );
  }
  if (!Number.isFinite(value)) {
    return problem(
      validation,
      node.span,
      `${node.written} is no finite number.`,
      'write a finite number, or null in a range for "no bound".',
    );
  }
  if (shape.whole === true && !Number.isSafeInteger(value)) {
    return problem(
      validation,
      node.span,
      `"${where}" is a whole number; this is ${node.written}.`,
      `write ${Math.max(shape.least ?? 0, Math.round(Math.min(Math.abs(value), 2 ** 53 - 1)))}.`,
    );
  }
  if (shape.least !== undefined && value < shape.least) {
    return problem(
      validation,
      node.span,
      `"${where}" is at least ${shape.least}; this is ${node.written}.`,
      `write ${shape.least} or more.`,
    );
  }
  if (shape.above !== undefined && value <= shape.above) {
    return problem(
      validation,
      node.span,
      `"${where}" is above ${shape.above}; this is ${node.written}.`,
      `write a number above ${shape.above}.`,
    );
  }
  return value;
}

/** The number that a text most likely means: `1d-26` and `1.5_8` of Fortran, `1,5`, `"3"`, `1_000`. */
function numberMeant(text: string): string | null {
  const plain = text
    .trim()
    .replace(/_(4|8|16|[a-z]\w*)$/i, '')
    .replace(/(?<=[0-9.])[dDqQ](?=[-+0-9])/, 'e')
    .replace(/(?<=[0-9])_(?=[0-9])/g, '')
    .replace(/^([-+]?[0-9]+),([0-9]+)$/, '$1.$2');
  return plain !== '' && /^[-+]?[0-9.]+(e[-+]?[0-9]+)?$/i.test(plain) && Number.isFinite(Number(plain)) ? plain : null;
}

function wrongSort(node: TreeNode, where: string, want: string, validation: Validation): Checked {
  const subject = where === '' ? 'A manifest' : `"${where}"`;
  return problem(validation, headOf(node), `${subject} is ${want}; this is ${what(node)}.`, `write ${want}.`);
}

function problem(validation: Validation, span: Span, says: string, next: string): typeof FAILED {
  validation.problems.push({ kind: 'manifest-invalid', span, says, next });
  return FAILED;
}

function wanted(shape: Shape): string {
  switch (shape.is) {
    case 'text':
      return TEXT_FORMS[shape.form].title;
    case 'choice':
      return anyOf(shape.of);
    case 'number':
      return shape.whole === true ? 'a whole number' : 'a number';
    case 'flag':
      return 'true or false';
    default:
      return 'a value';
  }
}

function what(node: TreeNode): string {
  if (node.is === 'map') return 'a map';
  if (node.is === 'list') return 'a list';
  if (node.value === null) return 'empty';
  return typeof node.value === 'string' ? 'a text' : typeof node.value === 'number' ? 'a number' : 'true or false';
}

function keysText(shape: RecordShape): string {
  return anyOf(Object.keys(shape.keys).filter((key) => shape.keys[key]!.required)).replace(' or ', ' and ');
}

/** The first key of a map: the place to point at when a whole map is meant. */
function firstKey(node: MapNode): Span {
  return node.entries.values().next().value?.key ?? headOf(node);
}

function headOf(node: TreeNode): Span {
  return node.is === 'scalar' ? node.span : { start: node.span.start, end: node.span.start + 1 };
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

function lowerFirst(text: string): string {
  return /^[A-Z][a-z]/.test(text) ? text.charAt(0).toLowerCase() + text.slice(1) : text;
}
