/** Preprocessor branches: under which conditions a line stands, which branches exclude each other, which ones given names rule out. */

/** One branch of an `#if` group. Branches nest: `outer` is the one it stands in. */
export interface Branch {
  readonly outer: Branch | null;
  readonly group: BranchGroup;
  /** Its place in the group. */
  readonly index: number;
  readonly depth: number;
  /** Its own condition, those of the branches before it negated. */
  readonly own: string;
  /** With all outer conditions. */
  readonly whole: string;
}

export interface BranchGroup {
  /** Branches met so far. */
  readonly branches: Branch[];
  /** Conditions as written, one a branch; `null` for `#else`. */
  readonly written: (string | null)[];
  hasElse: boolean;
}

/** The open groups at some line, as plain data: what a part of a file must be told when it is read alone. */
export interface ConditionState {
  readonly groups: readonly { readonly written: readonly (string | null)[] }[];
  /** Macros defined above in the file. */
  readonly macros: Readonly<Record<string, string>>;
}

export const NO_CONDITIONS: ConditionState = { groups: [], macros: {} };

/** Bounds that no code comes near; without them hostile files would take time and memory beyond their size. */
const DEEPEST = 40;
const MOST_BRANCHES = 40;
const MOST_MACROS = 200;
const LONGEST_CONDITION = 500;

export class Conditions {
  /** The branch that the present line stands in; null outside all groups. */
  branch: Branch | null = null;
  /** The names given rule the present line out. */
  off = false;
  private readonly stack: {
    group: BranchGroup;
    outer: Branch | null;
    outerOff: boolean;
    /** A branch of the group is the one that is compiled. */
    taken: boolean;
    /** Whether an earlier branch is compiled can not be told. */
    doubtful: boolean;
  }[] = [];
  private readonly define: Readonly<Record<string, string>> | undefined;
  readonly macros: Map<string, string>;
  private kept: ConditionState | null = null;

  constructor(define: Readonly<Record<string, string>> | undefined, state: ConditionState = NO_CONDITIONS) {
    this.define = define;
    this.macros = new Map(Object.entries(state.macros));
    for (const { written } of state.groups) {
      written.forEach((text, index) => {
        if (index === 0) this.open(text ?? '1');
        else this.next(text);
      });
    }
  }

  /** Takes a directive line; false when it is none of those that choose branches. */
  take(text: string): boolean {
    const match = /^#\s*(\w+)\s*(.*)$/s.exec(text);
    const word = match?.[1] ?? '';
    const before = this.macros.size;
    if (word !== 'define' && word !== 'undef') this.kept = null;
    const rest = (match?.[2] ?? '')
      .replace(/\/\*.*?\*\/|\/\/.*$/gs, '')
      .replace(/\s+/g, ' ')
      .trim();
    switch (word) {
      case 'if':
        this.open(rest);
        return true;
      case 'ifdef':
        this.open(`defined(${rest})`);
        return true;
      case 'ifndef':
        this.open(`!defined(${rest})`);
        return true;
      case 'elif':
        this.next(rest);
        return true;
      case 'else':
        this.next(null);
        return true;
      case 'endif': {
        const last = this.stack.pop();
        if (last !== undefined) {
          this.branch = last.outer;
          this.off = last.outerOff;
        }
        return true;
      }
      default:
        if (!this.off && (word === 'define' || word === 'undef')) {
          const macro = /^([A-Za-z_]\w*)(?!\()\s*(.*)$/s.exec(rest);
          if (macro !== null) {
            if (word === 'undef') this.macros.delete(macro[1]!);
            else if (before < MOST_MACROS) this.macros.set(macro[1]!, macro[2]!.slice(0, LONGEST_CONDITION).trim());
            if (word === 'undef' || before < MOST_MACROS) this.kept = null;
          }
        }
        return false;
    }
  }

  /** The open groups and the macros; the same object as long as they are. */
  state(): ConditionState {
    this.kept ??= {
      groups: this.stack.map(({ group }) => ({ written: [...group.written] })),
      macros: Object.fromEntries(this.macros),
    };
    return this.kept;
  }

  private open(text: string): void {
    const condition = text.slice(0, LONGEST_CONDITION);
    const group: BranchGroup = { branches: [], written: [condition], hasElse: false };
    const entry = { group, outer: this.branch, outerOff: this.off, taken: false, doubtful: false };
    this.stack.push(entry);
    this.enter(entry, condition, condition);
  }

  private next(condition: string | null): void {
    const entry = this.stack.at(-1);
    if (entry === undefined) return;
    const { group } = entry;
    const earlier = group.written.filter((one) => one !== null).map(negated);
    if (group.written.length < MOST_BRANCHES) group.written.push(condition);
    if (condition === null) group.hasElse = true;
    this.enter(entry, [...earlier, ...(condition === null ? [] : [grouped(condition)])].join(' && '), condition);
  }

  private enter(entry: (typeof this.stack)[number], own: string, condition: string | null): void {
    const { group, outer } = entry;
    if (outer !== null && outer.depth >= DEEPEST) return;
    const branch = branchOf(outer, group, group.branches.length, own);
    group.branches.push(branch);
    this.branch = branch;
    if (this.define === undefined) return;
    const said = condition === null ? true : conditionHolds(condition, (name) => this.macroValue(name));
    this.off = entry.outerOff || entry.taken || said === false;
    if (said === null) entry.doubtful = true;
    if (said !== true || entry.taken) return;
    // What is certain to be compiled stands under no condition any more.
    if (!entry.doubtful) this.branch = outer;
    entry.taken = true;
  }

  private macroValue(name: string): string | null {
    const { define } = this;
    if (define !== undefined && Object.hasOwn(define, name)) return define[name]!;
    return this.macros.get(name) ?? null;
  }
}

function branchOf(outer: Branch | null, group: BranchGroup, index: number, own: string): Branch {
  const depth = outer === null ? 1 : outer.depth + 1;
  return { outer, group, index, depth, own, whole: outer === null ? own : `${outer.whole} && ${grouped(own)}` };
}

/** Two lines that no build compiles together. */
export function exclude(one: Branch | null, other: Branch | null): boolean {
  if (one === other) return false;
  for (let at = one; at !== null; at = at.outer)
    for (let to = other; to !== null; to = to.outer) if (at.group === to.group && at.index !== to.index) return true;
  return false;
}

/** More ways of compiling one statement are not told apart. */
const MOST_ALTERNATIVES = 8;
const MOST_GROUPS = 12;

/**
 * The ways in which lines of one statement can be chosen, each as a branch that stands for all the choices.
 *
 * @param base  the branch that the statement as a whole stands in
 */
export function alternativesOf(
  base: Branch | null,
  lines: readonly (Branch | null)[],
): { branch: Branch; holds: (line: Branch | null) => boolean }[] {
  const groups: { group: BranchGroup; outer: Branch | null }[] = [];
  const known = new Set<BranchGroup>();
  for (const line of lines) {
    const chain: { group: BranchGroup; outer: Branch | null }[] = [];
    for (let at = line; at !== null && at !== base; at = at.outer) chain.unshift({ group: at.group, outer: at.outer });
    for (const one of chain) {
      if (known.has(one.group) || known.size >= MOST_GROUPS) continue;
      known.add(one.group);
      groups.push(one);
    }
  }
  const ways: { branch: Branch | null; chosen: ReadonlySet<Branch> }[] = [];
  const choose = (at: number, branch: Branch | null, chosen: ReadonlySet<Branch>): void => {
    if (ways.length >= MOST_ALTERNATIVES) return;
    const next = groups[at];
    if (next === undefined) {
      ways.push({ branch, chosen });
      return;
    }
    const { group, outer } = next;
    if (outer !== null && outer !== base && !isWithin(base, outer) && !chosen.has(outer)) {
      choose(at + 1, branch, chosen);
      return;
    }
    for (const one of group.branches)
      choose(at + 1, branchOf(branch, group, one.index, one.own), new Set([...chosen, one]));
    if (!group.hasElse) {
      const own = group.written.map((text) => negated(text ?? '1')).join(' && ');
      choose(at + 1, branchOf(branch, group, group.branches.length, own), chosen);
    }
  };
  choose(0, base, new Set());
  return ways.flatMap(({ branch, chosen }) =>
    branch === null
      ? []
      : [
          {
            branch,
            holds: (line: Branch | null) => {
              for (let at = line; at !== null && at !== base; at = at.outer)
                if (known.has(at.group) && !chosen.has(at) && !isWithin(base, at)) return false;
              return true;
            },
          },
        ],
  );
}

/** Whether a line of branch `inner` is always compiled where one of `outer` is. */
export function isWithin(inner: Branch | null, outer: Branch | null): boolean {
  if (outer === null) return true;
  for (let at = inner; at !== null; at = at.outer) if (at === outer) return true;
  return false;
}

function negated(condition: string): string {
  const simple = /^(!?)(defined\s*\(?\s*\w+\s*\)?)$/.exec(condition);
  if (simple !== null) return simple[1] === '!' ? simple[2]! : `!${simple[2]}`;
  return `!(${condition})`;
}

/** In parentheses where it would be read otherwise beside `&&`. */
function grouped(condition: string): string {
  return condition.includes('||') && !isEnclosed(condition) ? `(${condition})` : condition;
}

function isEnclosed(condition: string): boolean {
  let depth = 0;
  for (let at = 0; at < condition.length; at++) {
    if (condition[at] === '(') depth++;
    else if (condition[at] === ')') depth--;
    if (depth === 0 && at < condition.length - 1) return false;
  }
  return true;
}

/**
 * Whether an `#if` expression holds: integers, `defined`, `! && || == != < > <= >= + - * / %` and parentheses.
 * A name that is not defined counts as 0 (ISO C, 6.10.1).
 *
 * @returns null when the expression can not be read
 */
export function conditionHolds(text: string, macroValue: (name: string) => string | null): boolean | null {
  const tokens = text.match(/[A-Za-z_]\w*|\d[\w]*|&&|\|\||[=!<>]=|[!<>()+*/%-]|\S/g) ?? [];
  if (tokens.length > 400) return null;
  let at = 0;
  let depth = 0;
  let sound = true;
  const primary = (): number => {
    const token = tokens[at++];
    if (token === undefined || ++depth > 200) {
      sound = false;
      return 0;
    }
    try {
      if (token === '!') return primary() === 0 ? 1 : 0;
      if (token === '-') return -primary();
      if (token === '+') return primary();
      if (token === '(') {
        const value = binary(0);
        if (tokens[at++] !== ')') sound = false;
        return value;
      }
      if (token === 'defined') {
        const open = tokens[at] === '(';
        const name = tokens[open ? at + 1 : at] ?? '';
        at += open ? 3 : 1;
        return macroValue(name) === null ? 0 : 1;
      }
      if (/^\d/.test(token)) return Number.parseInt(token, token.startsWith('0x') ? 16 : 10);
      if (/^[A-Za-z_]/.test(token)) {
        const value = macroValue(token);
        if (value === null || value.trim() === '') return 0;
        const number = Number.parseInt(value, 10);
        if (Number.isNaN(number)) sound = false;
        return Number.isNaN(number) ? 0 : number;
      }
      sound = false;
      return 0;
    } finally {
      depth--;
    }
  };
  const binary = (least: number): number => {
    let left = primary();
    for (;;) {
      const operator = tokens[at] ?? '';
      const rank = RANK[operator];
      if (rank === undefined || rank < least) return left;
      at++;
      const right = binary(rank + 1);
      left = apply(operator, left, right);
    }
  };
  const value = binary(0);
  return sound && at === tokens.length ? value !== 0 : null;
}

const RANK: Readonly<Record<string, number>> = {
  '||': 1,
  '&&': 2,
  '==': 3,
  '!=': 3,
  '<': 4,
  '>': 4,
  '<=': 4,
  '>=': 4,
  '+': 5,
  '-': 5,
  '*': 6,
  '/': 6,
  '%': 6,
};

function apply(operator: string, left: number, right: number): number {
  switch (operator) {
    case '||':
      return left !== 0 || right !== 0 ? 1 : 0;
    case '&&':
      return left !== 0 && right !== 0 ? 1 : 0;
    case '==':
      return left === right ? 1 : 0;
    case '!=':
      return left !== right ? 1 : 0;
    case '<':
      return left < right ? 1 : 0;
    case '>':
      return left > right ? 1 : 0;
    case '<=':
      return left <= right ? 1 : 0;
    case '>=':
      return left >= right ? 1 : 0;
    case '+':
      return left + right;
    case '-':
      return left - right;
    case '*':
      return left * right;
    case '/':
      return right === 0 ? 0 : Math.trunc(left / right);
    default:
      return right === 0 ? 0 : left % right;
  }
}
