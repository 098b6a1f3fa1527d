/**
 * Programs drawn at random: declarations and calls as a model, written out in free or fixed form in the ways that people write.
 * Names never collide with intrinsics, so that the compiler takes nearly all of them.
 */
import fc from 'fast-check';

interface Drawn {
  readonly path: string;
  readonly text: string;
}

interface ArgumentModel {
  readonly type: string;
  readonly bounds: string;
  readonly intent: string;
  readonly optional: boolean;
  /** How the declaration is put: attributes on one line, or statements of their own, or none at all. */
  readonly how: 'attributes' | 'statements' | 'implicit';
}

interface UnitModel {
  readonly kind: 'subroutine' | 'function';
  readonly args: readonly ArgumentModel[];
  readonly result: 'prefix' | 'declared' | 'clause' | 'implicit';
  readonly common: readonly { readonly type: string; readonly extent: string }[];
  readonly split: boolean;
  readonly parameter: boolean;
  readonly prototype: boolean;
  readonly calls: readonly number[];
  readonly functionCalls: readonly number[];
  readonly internal: boolean;
  readonly entry: boolean;
}

interface ProgramModel {
  readonly inModule: readonly UnitModel[];
  readonly external: readonly UnitModel[];
  readonly kinds: boolean;
}

interface Style {
  readonly upper: boolean;
  readonly continueEvery: number;
  readonly comments: boolean;
  /** Fixed form only. */
  readonly tabs: boolean;
  readonly blanksInNames: boolean;
  readonly sequence: boolean;
  readonly mark: string;
  readonly semicolons: boolean;
}

const FREE_TYPES = [
  'real',
  'integer',
  'logical',
  'complex',
  'double precision',
  'real(8)',
  'real(kind=8)',
  'real(wp)',
  'real(kind=wp)',
  'integer(8)',
  'integer(ik)',
  'integer*2',
  'real*8',
  'complex(8)',
  'complex*16',
  'logical(1)',
  'character(len=8)',
  'character(*)',
  'character*4',
] as const;
const FIXED_TYPES = FREE_TYPES.filter((one) => !/wp|ik/.test(one));
const COMMON_TYPES = ['real*8', 'integer*4', 'double precision', 'integer*8', 'complex*16'] as const;

function argument(types: readonly string[], explicit: boolean): fc.Arbitrary<ArgumentModel> {
  return fc.record({
    type: fc.constantFrom(...types),
    bounds: fc.constantFrom(
      '',
      '',
      '',
      '(3)',
      '(2,0:4)',
      '(*)',
      '(nn)',
      '(nn,*)',
      ...(explicit ? ['(:)', '(:,:)', '(0:)'] : []),
    ),
    intent: fc.constantFrom('', 'in', 'out', 'inout', 'in out'),
    optional: explicit ? fc.boolean() : fc.constant(false),
    how: fc.constantFrom('attributes' as const, 'statements' as const, 'implicit' as const),
  });
}

function unit(types: readonly string[], explicit: boolean): fc.Arbitrary<UnitModel> {
  return fc.record({
    kind: fc.constantFrom('subroutine' as const, 'function' as const),
    args: fc.array(argument(types, explicit), { maxLength: 6 }),
    result: fc.constantFrom('prefix' as const, 'declared' as const, 'clause' as const, 'implicit' as const),
    common: fc.array(
      fc.record({ type: fc.constantFrom(...COMMON_TYPES), extent: fc.constantFrom('', '(2)', '(np,2)', '(0:3)') }),
      { maxLength: 4 },
    ),
    split: fc.boolean(),
    parameter: fc.boolean(),
    prototype: fc.boolean(),
    calls: fc.array(fc.nat(4), { maxLength: 3 }),
    functionCalls: fc.array(fc.nat(3), { maxLength: 2 }),
    internal: fc.boolean(),
    entry: fc.boolean(),
  });
}

const STYLE: fc.Arbitrary<Style> = fc.record({
  upper: fc.boolean(),
  continueEvery: fc.constantFrom(18, 30, 200),
  comments: fc.boolean(),
  tabs: fc.constant(false),
  blanksInNames: fc.boolean(),
  sequence: fc.boolean(),
  mark: fc.constantFrom('&', '$', '1', '+', 'i', '*'),
  semicolons: fc.boolean(),
});

/** A file in free form: a module with procedures, and external procedures behind it. */
export const freeProgram: fc.Arbitrary<Drawn> = fc
  .record({
    program: fc.record({
      inModule: fc.array(unit(FREE_TYPES, true), { maxLength: 3 }),
      external: fc.array(unit(FREE_TYPES, false), { minLength: 1, maxLength: 3 }),
      kinds: fc.constant(true),
    }),
    style: STYLE,
  })
  .map(({ program, style }) => ({ path: 'drawn.f90', text: freeText(statementsOf(program), style) }));

/** A file in fixed form: external procedures. */
export const fixedProgram: fc.Arbitrary<Drawn> = fc
  .record({
    program: fc.record({
      inModule: fc.constant([]),
      external: fc.array(unit(FIXED_TYPES, false), { minLength: 1, maxLength: 4 }),
      kinds: fc.constant(false),
    }),
    style: STYLE,
  })
  .map(({ program, style }) => ({ path: 'drawn.f', text: fixedText(statementsOf(program), style) }));

/** The program as statements without layout. */
function statementsOf({ inModule, external, kinds }: ProgramModel): string[] {
  const lines: string[] = [];
  if (kinds) {
    lines.push('module kinds_m', 'implicit none', 'integer, parameter :: wp = selected_real_kind(12)');
    lines.push('integer, parameter :: ik = selected_int_kind(15)', 'end module kinds_m');
  }
  if (inModule.length > 0) {
    lines.push('module work_m', 'use kinds_m, only: wp, ik', 'contains');
    for (const [index, one] of inModule.entries()) lines.push(...unitLines(one, `inner${index}`, kinds, true));
    lines.push('end module');
  }
  for (const [index, one] of external.entries()) lines.push(...unitLines(one, `outer${index}`, kinds, false));
  return lines;
}

function unitLines(one: UnitModel, name: string, kinds: boolean, inModule: boolean): string[] {
  const names = one.args.map((arg, index) => `${/^integer/.test(arg.type) ? 'ka' : 'xa'}${index}${name.at(-1)}`);
  const needsExtent = one.args.some((arg) => arg.bounds.includes('nn'));
  const formals = [...(needsExtent ? ['nn'] : []), ...names];
  const lines: string[] = [];
  const isFunction = one.kind === 'function';
  const clause = one.result === 'clause' ? ' result(res)' : '';
  const prefix = isFunction && one.result === 'prefix' ? 'real*8 ' : '';
  lines.push(`${prefix}${one.kind} ${name}(${formals.join(', ')})${isFunction ? clause : ''}`);
  if (kinds && !inModule) lines.push('use kinds_m');
  const result = clause === '' ? name : 'res';
  if (isFunction && one.result === 'clause') lines.push('integer*8 res');
  if (isFunction && one.result === 'declared') lines.push(`double precision ${name}`);
  if (needsExtent) lines.push('integer nn');
  if (one.parameter || one.common.some((member) => member.extent.includes('np')))
    lines.push('integer np', 'parameter (np = 2*3)');
  for (const [index, arg] of one.args.entries()) lines.push(...declaration(arg, names[index]!));
  const members = one.common.map((_, index) => `cm${index}`);
  for (const [index, member] of one.common.entries()) lines.push(`${member.type} ${members[index]}`);
  if (members.length > 0) {
    const half = one.split ? Math.ceil(members.length / 2) : members.length;
    const texts = members.map((member, index) => `${member}${one.common[index]!.extent}`);
    lines.push(`common /blk${name}/ ${texts.slice(0, half).join(', ')}`);
    if (half < texts.length) lines.push(`common /blk${name}/ ${texts.slice(half).join(', ')}`);
  }
  if (one.prototype) {
    lines.push(
      'interface',
      `subroutine far${name}(fa, fb)`,
      'real*8 fa(*)',
      'integer fb',
      'end subroutine',
      'end interface',
    );
  }
  lines.push('integer loc');
  for (const [index, count] of one.calls.entries()) {
    const given = Array.from({ length: count }, (_, at) => (at % 2 === 0 ? 'loc' : "'it''s, ('"));
    const call = `call sub${index}${name}${count === 0 && index === 0 ? '' : `(${given.join(', ')})`}`;
    lines.push(index === 1 ? `if (loc .gt. 3) ${call}` : call);
  }
  for (const [index, count] of one.functionCalls.entries())
    lines.push(`zz${index} = 2.0*fun${index}${name}(${Array.from({ length: count }, () => 'loc').join(', ')})`);
  if (isFunction && one.result !== 'prefix' && one.result !== 'declared' && one.result !== 'clause')
    lines.push(`${result} = 1`);
  else if (isFunction) lines.push(`${result} = 2`);
  if (one.entry && !inModule && !isFunction) lines.push(`entry late${name}(loc2)`);
  if (one.internal && kinds) {
    lines.push('contains', `subroutine own${name}(ia, ib)`, 'integer, intent(in) :: ia', 'logical, optional :: ib(:)');
    lines.push(`end subroutine own${name}`);
  }
  lines.push(inModule || one.internal ? `end ${one.kind} ${name}` : 'end');
  return lines;
}

function declaration(arg: ArgumentModel, name: string): string[] {
  // A default of the implicit rule: only where nothing more is said of it.
  const isText = arg.type.startsWith('character');
  if (arg.how === 'implicit') return arg.bounds.includes(':)') ? [`${arg.type} :: ${name}${arg.bounds}`] : [];
  const attributes = [...(arg.intent === '' ? [] : [`intent(${arg.intent})`]), ...(arg.optional ? ['optional'] : [])];
  if (arg.how === 'attributes') {
    const dimension = arg.bounds !== '' && !isText ? [`dimension${arg.bounds}`] : [];
    return [
      `${[arg.type, ...dimension, ...attributes].join(', ')} :: ${name}${dimension.length > 0 ? '' : arg.bounds}`,
    ];
  }
  return [
    `${arg.type} ${name}`,
    ...(arg.bounds === '' ? [] : [`dimension ${name}${arg.bounds}`]),
    ...attributes.map((one) => `${one} ${name}`),
  ];
}

/** Places where a statement may be cut: after a comma or an opening bracket, outside of text constants. */
function pieces(statement: string, every: number): string[] {
  const cut: string[] = [];
  let from = 0;
  let quoted = false;
  for (let at = 0; at < statement.length; at++) {
    if (statement[at] === "'") quoted = !quoted;
    if (!quoted && at - from >= every && /[,(]/.test(statement[at]!)) {
      cut.push(statement.slice(from, at + 1));
      from = at + 1;
    }
  }
  cut.push(statement.slice(from));
  return cut.filter((one) => one.trim() !== '');
}

/** Upper case outside of text constants. */
function cased(text: string, style: Style): string {
  return style.upper
    ? text.replace(/'(?:[^']|'')*'|[^']+/g, (part) => (part.startsWith("'") ? part : part.toUpperCase()))
    : text;
}

function freeText(statements: readonly string[], style: Style): string {
  const lines: string[] = [];
  for (const [index, statement] of statements.entries()) {
    const parts = pieces(cased(statement, style), style.continueEvery);
    for (const [at, part] of parts.entries()) {
      const last = at === parts.length - 1;
      const comment = style.comments && (index + at) % 3 === 0 ? ' ! call nothing(x), end' : '';
      lines.push(`  ${at > 0 && index % 2 === 0 ? '& ' : ''}${part}${last ? '' : ' &'}${comment}`);
      if (!last && style.comments) lines.push('', '! a comment line & between');
    }
  }
  return `${lines.join('\n')}\n`;
}

function fixedText(statements: readonly string[], style: Style): string {
  const lines: string[] = [];
  for (const [index, statement] of statements.entries()) {
    const spaced = style.blanksInNames ? withBlanks(statement) : statement;
    // 66 columns are there, and the compiler cuts what is longer.
    const parts = pieces(cased(spaced, style), Math.min(style.continueEvery, 40));
    for (const [at, part] of parts.entries()) {
      const first = style.tabs ? '\t' : '      ';
      const next = style.tabs ? '\t1' : `     ${style.mark}`;
      let line = `${at === 0 ? first : next}${part.trim()}`;
      if (style.sequence && !style.tabs && line.length <= 72)
        line = `${line.padEnd(72)}SEQ${String(index).padStart(5, '0')}`;
      else if (style.comments && (index + at) % 4 === 0) line += ' ! call nothing(x)';
      lines.push(line);
      if (style.comments && at < parts.length - 1) lines.push('* a comment between', 'c      call nothing(x)');
    }
  }
  return `${lines.join('\n')}\n`;
}

/** Blanks mean nothing in fixed form: some inside of words, outside of text constants. */
function withBlanks(statement: string): string {
  return statement.replace(
    /'(?:[^']|'')*'|\b(call|common|subroutine|integer|double precision)\b/g,
    (found, word?: string) => (word === undefined ? found : `${word.slice(0, 3)} ${word.slice(3)}`),
  );
}
