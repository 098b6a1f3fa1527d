/** How one call differs from one definition: number, keywords, types, kinds, ranks, constants for outputs. Pure. */
import type { ActualArgument, Argument, CallSite, Procedure } from '../../model/interface.ts';

export interface Misfit {
  readonly kind:
    | 'call-count'
    | 'call-keyword'
    | 'call-kind'
    | 'call-type'
    | 'call-rank'
    | 'call-order'
    | 'call-constant-out';
  readonly says: string;
  /** What old codes do on purpose: told once a callee, at low gravity. */
  readonly grouped: boolean;
  /** The dummy argument it is about. */
  readonly formal?: Argument;
}

/** Most calls fit: one empty list for all of them. */
const NONE: Misfit[] = [];

export interface Languages {
  readonly from: string;
  readonly to: string;
}

/**
 * The arguments that a call can give. A Fortran compiler passes the length of each character argument behind the others;
 * C may take the lengths or leave them where they are.
 */
export function takenArguments(call: CallSite, procedure: Procedure, { from, to }: Languages): readonly Argument[] {
  const { args } = procedure;
  if (from !== 'fortran' || to !== 'c' || call.args.length === args.length) return args;
  const hidden = call.args.filter((one) => one.type === 'character').length;
  return hidden === 0 ? args : args.slice(0, Math.max(0, args.length - hidden));
}

/** The dummy argument that an actual one at a position is passed for. */
export function formalOf(actual: ActualArgument, index: number, formals: readonly Argument[]): Argument | undefined {
  return actual.keyword === undefined ? formals[index] : formals.find((one) => one.name === actual.keyword);
}

export function misfitsOf(call: CallSite, procedure: Procedure, languages: Languages): Misfit[] {
  const formals = takenArguments(call, procedure, languages);
  if (call.args.some((one) => one.form === 'absent' || isUnpacked(one, languages.from))) return NONE;
  const wrong = countMisfit(call, procedure, formals, languages);
  if (wrong !== null) return [wrong];
  if (languages.from !== languages.to) return NONE;
  let found: Misfit[] = NONE;
  for (let index = 0; index < call.args.length; index++) {
    const actual = call.args[index]!;
    const formal = formalOf(actual, index, formals);
    if (formal === undefined) continue;
    const misfits = argumentMisfit(call, formals, procedure, actual, formal, languages);
    if (misfits.length > 0) found = [...found, ...misfits];
  }
  return found;
}

/** `*values` and `**options` of Python: how many they are nobody can say. */
function isUnpacked(actual: ActualArgument, language: string): boolean {
  return language === 'python' && actual.text.startsWith('*');
}

function countMisfit(
  call: CallSite,
  procedure: Procedure,
  formals: readonly Argument[],
  languages: Languages,
): Misfit | null {
  const variadic = formals.some((one) => one.passing === 'variadic' || one.passing === 'variadic-keyword');
  const keywords = call.args.filter((one) => one.keyword !== undefined);
  const unknown = keywords.find((one) => !formals.some((formal) => formal.name === one.keyword));
  if (unknown !== undefined && !variadic)
    return {
      kind: 'call-keyword',
      grouped: false,
      says: `passes ${unknown.keyword}, which ${procedure.name} does not take`,
    };
  if (variadic) return null;
  const required = formals.filter((one) => !one.optional && one.default === undefined);
  const given = call.args.length;
  const positional = given - keywords.length;
  const missing = required.filter(
    (formal) => formals.indexOf(formal) >= positional && !keywords.some((one) => one.keyword === formal.name),
  );
  // C that calls Fortran passes the lengths of character arguments, or leaves them out.
  const hidden =
    languages.from !== 'fortran' && languages.to === 'fortran'
      ? formals.filter((one) => one.type === 'character').length
      : 0;
  if (missing.length === 0 && (given <= formals.length || given === formals.length + hidden)) return null;
  const takes = required.length === formals.length ? String(formals.length) : `${required.length} to ${formals.length}`;
  return {
    kind: 'call-count',
    grouped: false,
    says: `passes ${given} ${given === 1 ? 'argument' : 'arguments'} where ${procedure.name} takes ${takes}`,
  };
}

function argumentMisfit(
  call: CallSite,
  formals: readonly Argument[],
  procedure: Procedure,
  actual: ActualArgument,
  formal: Argument,
  { from: language }: Languages,
): Misfit[] {
  const written = formal.intent === 'out' || formal.intent === 'inout';
  if (language === 'fortran' && written && formal.passing !== 'alternate-return') {
    if (actual.form === 'literal' || (actual.form === 'expression' && isComputed(actual.text)))
      return [
        {
          kind: 'call-constant-out',
          grouped: false,
          formal,
          says: `passes the ${actual.form === 'literal' ? 'constant' : 'expression'} ${actual.text} for ${formal.name}, which is written to`,
        },
      ];
  }
  const [given, taken] = [classOf(actual.type), classOf(formal.type)];
  if (given === null || taken === null) return NONE;
  if (given !== taken) {
    // Scratch storage of another type is passed on purpose in old codes.
    const scratch = actual.form === 'name' || actual.form === 'element';
    return [
      {
        kind: 'call-type',
        grouped: scratch,
        formal,
        says: `passes ${actual.text} (${actual.type}) for ${formal.name} (${formal.type})`,
      },
    ];
  }
  const kind = kindMisfit(call, formals, actual, formal, given);
  const rank = rankMisfit(call, procedure, actual, formal, given);
  return kind.length === 0 ? rank : rank.length === 0 ? kind : [...kind, ...rank];
}

function kindMisfit(
  call: CallSite,
  formals: readonly Argument[],
  actual: ActualArgument,
  formal: Argument,
  type: string,
): Misfit[] {
  if (actual.bytes == null || formal.bytes === null || actual.bytes === formal.bytes) return NONE;
  if (type === 'character' || type === 'logical') return NONE;
  // Whether a default real is as wide as one of 8 bytes is for the build to say.
  const open = type !== 'integer' && (actual.declaredDefault === true) !== (formal.kind === undefined);
  // One variable passed both for the short and for the long form: the callee takes the one that fits.
  const both = call.args.some(
    (other, index) =>
      other !== actual && other.text === actual.text && formalOf(other, index, formals)?.bytes === actual.bytes,
  );
  return [
    {
      kind: 'call-kind',
      grouped: open || both,
      formal,
      says: `passes ${actual.text} of ${actual.bytes} bytes for ${formal.name} of ${formal.bytes}`,
    },
  ];
}

/** A scalar for an array or the reverse; an element for an array is sequence association, and legal. */
function rankMisfit(
  call: CallSite,
  procedure: Procedure,
  actual: ActualArgument,
  formal: Argument,
  type: string,
): Misfit[] {
  // In sight of an explicit interface it would not compile; characters are arrays and texts by turns.
  if (procedure.parent !== null || type === 'character' || call.how === 'method') return NONE;
  if (actual.form !== 'name' || actual.rank === undefined || formal.rank < 0) return NONE;
  if (actual.rank === 0 && formal.rank > 0)
    return [
      {
        kind: 'call-rank',
        grouped: true,
        formal,
        says: `passes the scalar ${actual.text} for the array ${formal.name}`,
      },
    ];
  if (actual.rank > 0 && formal.rank === 0)
    return [
      {
        kind: 'call-rank',
        grouped: true,
        formal,
        says: `passes the array ${actual.text} for the scalar ${formal.name}`,
      },
    ];
  return NONE;
}

/** True for an expression that leaves no variable behind: an operator outside of every bracket, or brackets around the whole. */
function isComputed(text: string): boolean {
  if (/^[+-]/.test(text) || /^\((?!\/)/.test(text)) return true;
  let depth = 0;
  for (let at = 0; at < text.length; at++) {
    const letter = text[at]!;
    // A text constant may hold anything.
    if (letter === "'" || letter === '"') return false;
    if (letter === '(' || letter === '[') depth++;
    else if (letter === ')' || letter === ']') depth--;
    else if (depth === 0 && /[+\-*/]/.test(letter) && !/[deq]/i.test(text[at - 1] ?? '')) return true;
  }
  return false;
}

export function classOf(type: string | undefined): 'integer' | 'real' | 'complex' | 'logical' | 'character' | null {
  switch (type) {
    case 'integer':
    case 'real':
    case 'complex':
    case 'logical':
    case 'character':
      return type;
    default:
      return null;
  }
}
