/** Calls and literals in executable statements. Pure. */
import type { ActualArgument, CallSite } from '../../model/interface.ts';
import { closing, splitTop } from './kinds.ts';
import { positionIn, type Statement } from './statements.ts';

/** Names before a parenthesis that are no call of anyone's procedure: keywords, and intrinsics of Fortran 77 to 2018 that old and new codes use. */
const NOT_CALLED = new Set(
  `if else elseif where forall while do select case call write read print open close inquire rewind backspace return stop allocate deallocate nullify associate
  abs acos acosh adjustl adjustr aimag aint alog alog10 all allocated amax0 amax1 amin0 amin1 amod anint any asin asinh associated atan atan2 atanh bessel_j0 bessel_j1 bit_size btest
  cabs ccos ceiling cexp char clog cmplx command_argument_count conjg cos cosh count cpu_time cshift csin csqrt dabs dacos dasin datan datan2 dble dconjg dcmplx dcos dcosh ddim dexp
  digits dim dimag dint dlog dlog10 dmax1 dmin1 dmod dnint dot_product dprod dreal dsign dsin dsinh dsqrt dtan dtanh eoshift epsilon erf erfc exp exponent float floor fraction gamma
  huge iabs iachar iand ibclr ibits ibset ichar idim idint idnint ieor ifix index int ior ishft ishftc isign isnan kind lbound len len_trim lge lgt lle llt log log10 log_gamma logical loc
  matmul max max0 max1 maxexponent maxloc maxval merge min min0 min1 minexponent minloc minval mod modulo move_alloc nearest nint not null pack precision present product radix random_number
  range real repeat reshape rrspacing scale scan selected_int_kind selected_real_kind set_exponent shape sign sin sinh size sngl spacing spread sqrt sum tan tanh tiny transfer transpose trim
  ubound unpack verify zabs zexp zsqrt iargc getarg c_loc c_f_pointer c_funloc c_associated storage_size same_type_as extends_type_of is_contiguous findloc norm2 hypot
  integer character complex type class intent dimension format entry assign`.split(/\s+/),
);

/**
 * Calls in a statement: CALL, and names before a parenthesis that are no array, no keyword and no intrinsic.
 *
 * @param isArray  whether a name is declared as something that is indexed
 */
export function callsIn(
  statement: Statement,
  isArray: (name: string) => boolean,
  typeOf: (name: string) => KnownType | null = () => null,
): Omit<CallSite, 'caller'>[] {
  const { code } = statement;
  const calls: Omit<CallSite, 'caller'>[] = [];
  let nameOfCall = -1;
  const call = /(^|\))\s*call\s+([a-z_]\w*(?:\s*%\s*\w+)*)\s*(\(|$)/.exec(code);
  if (call !== null && (call[1] === '' || /^(if|where|else)/.test(code))) {
    const name = call[2]!.replace(/\s+/g, '');
    const nameAt = code.indexOf(call[2]!, call.index + (call[1]?.length ?? 0) + 4);
    const open = call[3] === '(' ? code.indexOf('(', nameAt + call[2]!.length) : -1;
    calls.push({
      callee: name.slice(name.lastIndexOf('%') + 1),
      how: name.includes('%') ? 'method' : 'subroutine',
      args: open < 0 ? [] : actualArguments(statement, open, isArray, typeOf),
      ...positionIn(statement, code.indexOf('call', call.index + (call[1]?.length ?? 0))),
    });
    nameOfCall = nameAt;
    if (open < 0) return calls;
  }
  const called = calls[0];
  // An assignment's left side is indexed, not called; a format has no calls.
  const assigned = /^([a-z_]\w*)\s*\(/.exec(code)?.[1];
  if (/^format\s*\(/.test(code) && statement.label !== null) return calls;
  const pattern = /(^|[^a-z0-9_%.'"])([a-z_]\w*)\s*\(/g;
  for (let match = pattern.exec(code); match !== null; match = pattern.exec(code)) {
    const name = match[2]!;
    const at = match.index + match[1]!.length;
    pattern.lastIndex = at + name.length;
    if (NOT_CALLED.has(name) || isArray(name) || (at === 0 && name === assigned)) continue;
    if (called !== undefined && at === nameOfCall) continue;
    const open = code.indexOf('(', at + name.length);
    const close = closing(code, open);
    if (close < 0) continue;
    calls.push({
      callee: name,
      how: 'function',
      args: actualArguments(statement, open, isArray, typeOf),
      ...positionIn(statement, at),
    });
  }
  return calls;
}

function actualArguments(
  statement: Statement,
  open: number,
  isArray: (name: string) => boolean,
  typeOf: (name: string) => KnownType | null,
): ActualArgument[] {
  const close = closing(statement.code, open);
  const inside = statement.code.slice(open + 1, close < 0 ? undefined : close);
  if (inside.trim() === '') return [];
  return splitTop(inside).map(({ text, offset }): ActualArgument => {
    const lead = text.search(/\S/);
    const begin = open + 1 + offset + Math.max(0, lead);
    const shown = statement.text
      .slice(begin, begin + text.trim().length)
      .replace(/\s+/g, ' ')
      .slice(0, 200);
    const keyword = /^\s*([a-z_]\w*)\s*=(?!=)\s*(.*)$/s.exec(text);
    const value = (keyword?.[2] ?? text).trim();
    return {
      text: shown,
      ...typedForm(formOf(value), isArray, typeOf),
      ...(keyword === null ? {} : { keyword: keyword[1]! }),
      ...positionIn(statement, begin),
    };
  });
}

/** What a declaration in sight says of a name. */
export interface KnownType {
  readonly type: string;
  readonly bytes: number | null;
  readonly rank: number;
  /** Its size is the build's default, which switches may promote. */
  readonly declaredDefault?: boolean;
}

function typedForm(
  form: ReturnType<typeof formOf>,
  isArray: (name: string) => boolean,
  typeOf: (name: string) => KnownType | null,
): ReturnType<typeof formOf> {
  if (form.name === undefined) return form;
  // What is indexed like an array and declared as none is the result of a function.
  if (form.form !== 'name' && !isArray(form.name)) return { form: 'expression' };
  const known = typeOf(form.name);
  if (known === null) return form;
  return { ...form, ...known, rank: form.form === 'element' ? 0 : known.rank };
}

function formOf(value: string): Pick<ActualArgument, 'form' | 'name' | 'type' | 'bytes' | 'rank' | 'declaredDefault'> {
  if (/^\*\s*\d+$/.test(value)) return { form: 'alternate-return' };
  if (/^[a-z_]\w*$/.test(value)) return { form: 'name', name: value };
  const element = /^([a-z_]\w*)\s*\(/.exec(value);
  if (element !== null && closing(value, value.indexOf('(')) === value.length - 1) {
    return { form: /:/.test(value) ? 'section' : 'element', name: element[1]! };
  }
  if (/^[+-]?\d+(_\w+)?$/.test(value))
    return { form: 'literal', type: 'integer', ...(value.includes('_') ? {} : { bytes: 4 }), rank: 0 };
  const real = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:([ed])[+-]?\d+)?(_\w+)?$/.exec(value);
  if (real !== null)
    return {
      form: 'literal',
      type: 'real',
      ...(real[1] === 'd' ? { bytes: 8 } : real[2] === undefined ? { bytes: 4, declaredDefault: true } : {}),
      rank: 0,
    };
  if (/^\.(true|false)\.$/.test(value)) return { form: 'literal', type: 'logical', bytes: 4, rank: 0 };
  if (/^['"]/.test(value)) return { form: 'literal', type: 'character', rank: 0 };
  return { form: 'expression' };
}

export interface FoundLiteral {
  readonly text: string;
  readonly value: number;
  /** `d`, a kind name, or empty for a plain one. */
  readonly kind: string;
  readonly offset: number;
  /** Nothing else stands in the expression. */
  readonly alone: boolean;
  readonly role?: 'exponent' | 'integer-division';
}

/** Real literals of an expression, and integer divisions such as `2/3`. */
export function literalsIn(text: string): FoundLiteral[] {
  const found: FoundLiteral[] = [];
  const pattern =
    /(^|[^\w.])((?:\d+\.\d*|\.\d+|\d+(?=[edED][+-]?\d))(?:([edED])([+-]?\d+))?(?:_([A-Za-z_]\w*|\d+))?)(?![\w])/g;
  const alone = /^\s*[+-]?\s*[\d.]+(?:[edED][+-]?\d+)?(?:_\w+)?\s*$/.test(text);
  for (let match = pattern.exec(text); match !== null; match = pattern.exec(text)) {
    // `1.eq.` is an integer before an operator.
    if (/\.$/.test(match[2]!) && /^[a-z]+\./i.test(text.slice(match.index + match[0].length))) continue;
    const [, lead = '', whole = '', letter, , kind] = match;
    const mantissa = whole.replace(/_\w+$/, '').replace(/[dD]/, 'e');
    const offset = match.index + lead.length;
    const exponent = /\*\*\s*\(?\s*[+-]?\s*$/.test(text.slice(0, offset));
    found.push({
      text: whole,
      value: Number(mantissa),
      kind: kind !== undefined ? kind.toLowerCase() : letter !== undefined && /d/i.test(letter) ? 'd' : '',
      offset,
      alone,
      ...(exponent ? { role: 'exponent' as const } : {}),
    });
    pattern.lastIndex = offset + whole.length;
  }
  const division = /(^|[^\w.])(\d+)\s*\/\s*(\d+)(?![\w.])/g;
  for (let match = division.exec(text); match !== null; match = division.exec(text)) {
    const [, lead = '', above = '', below = ''] = match;
    if (Number(below) !== 0 && Number(above) % Number(below) === 0) continue;
    found.push({
      text: `${above}/${below}`,
      value: Math.trunc(Number(above) / Number(below)),
      kind: '',
      offset: match.index + lead.length,
      alone: false,
      role: 'integer-division',
    });
  }
  return found;
}
