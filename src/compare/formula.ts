/**
 * Expressions over the quantities of a case in ordinary notation: `maximum(pressure / density)`,
 * `integral(energy) / final(mass)`. Fields are worked element by element; a feature is a single number in the end.
 */
import { takeFeature } from './features.ts';
import type { Series } from './series.ts';
import { unitFactor } from './unit-factor.ts';

/** A number or a field, with the unit it is in. */
interface Value {
  readonly values: Float64Array;
  readonly isField: boolean;
  readonly unit: string;
  readonly series: Series | null;
}

export type FormulaOutcome = { readonly value: number; readonly unit: string } | { readonly why: string };

class FormulaError extends Error {
  override readonly name = 'FormulaError';
}

const REDUCTIONS = [
  'maximum',
  'minimum',
  'mean',
  'final',
  'integral',
  'where-maximum',
  'half-width',
  'slope',
  'period',
] as const;
const FUNCTIONS: Readonly<Record<string, (x: number) => number>> = {
  exp: Math.exp,
  log: Math.log,
  log10: Math.log10,
  sin: Math.sin,
  cos: Math.cos,
  tan: Math.tan,
};

/**
 * @param formula    numbers (with a unit in brackets where they have one: `3 [K]`), quantities, + - * / ^, parentheses,
 *   sqrt, abs, exp, log, log10, sin, cos, tan, first, sum and the features of a field (`maximum(x)`)
 * @param quantities by name, as the case declares them
 * @returns the number and its unit, or why there is none: at which character, and what was expected
 */
export function evaluateFormula(formula: string, quantities: ReadonlyMap<string, Series>): FormulaOutcome {
  if (formula.length > 4000) return { why: `a formula of ${formula.length} characters is too long: 4000 at most` };
  try {
    const parser = new Parser(formula, quantities);
    const value = parser.whole();
    if (value.isField)
      return {
        why: `"${formula}" is a field of ${value.values.length} elements, not one number: take its maximum, mean, ...`,
      };
    return { value: value.values[0]!, unit: value.unit };
  } catch (error) {
    if (error instanceof FormulaError) return { why: error.message };
    throw error;
  }
}

const number = (value: number, unit = ''): Value => ({
  values: Float64Array.of(value),
  isField: false,
  unit,
  series: null,
});

class Parser {
  private at = 0;
  private depth = 0;
  private readonly text: string;
  private readonly quantities: ReadonlyMap<string, Series>;

  constructor(text: string, quantities: ReadonlyMap<string, Series>) {
    this.text = text;
    this.quantities = quantities;
  }

  whole(): Value {
    const value = this.sum();
    if (this.peek() !== '') this.fail('expected an operator or the end');
    return value;
  }

  private sum(): Value {
    let left = this.product();
    for (let operator = this.take('+', '-'); operator !== null; operator = this.take('+', '-')) {
      const right = this.product();
      const factor = this.sameUnit(left, right);
      const sign = operator === '+' ? factor : -factor;
      left = this.combine(left, right, left.unit || right.unit, (a, b) => a + sign * b);
    }
    return left;
  }

  private product(): Value {
    let left = this.power();
    for (let operator = this.take('*', '/'); operator !== null; operator = this.take('*', '/')) {
      const right = this.power();
      left =
        operator === '*'
          ? this.combine(left, right, times(left.unit, right.unit), (a, b) => a * b)
          : this.combine(left, right, over(left.unit, right.unit), (a, b) => a / b);
    }
    return left;
  }

  private power(): Value {
    if (this.take('-') !== null) {
      const value = this.power();
      return this.map(value, value.unit, (x) => -x);
    }
    if (this.take('+') !== null) return this.power();
    const base = this.atom();
    if (this.take('**', '^') === null) return base;
    const exponent = this.power();
    if (exponent.isField || exponent.unit !== '') this.fail('an exponent is a plain number');
    const n = exponent.values[0]!;
    return this.map(base, raised(base.unit, n), (x) => x ** n);
  }

  private atom(): Value {
    if (this.take('(') !== null) {
      if (++this.depth > 100) this.fail('nested too deeply');
      const value = this.sum();
      this.expect(')');
      this.depth--;
      return value;
    }
    const digits = /^(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?/.exec(this.rest());
    if (digits !== null) {
      this.at += digits[0].length;
      const unit = /^\s*\[([^\]]*)\]/.exec(this.rest());
      this.at += unit?.[0].length ?? 0;
      return number(Number(digits[0]), unit?.[1]?.trim() ?? '');
    }
    const name = this.name();
    if (name === null) return this.fail('expected a number, a quantity or a function');
    return this.take('(') === null ? this.quantity(name) : this.call(name);
  }

  /** Names may hold hyphens, as those of manifests do: the longest one that is known is taken, so that `a-b` subtracts when it is not. */
  private name(): string | null {
    const match = /^[A-Za-z_][\w.]*(?:-[A-Za-z_][\w.]*)*/.exec(this.rest());
    if (match === null) return null;
    let name = match[0];
    const isKnown = () => this.quantities.has(name) || (REDUCTIONS as readonly string[]).includes(name);
    while (!isKnown() && name.includes('-')) name = name.slice(0, name.lastIndexOf('-'));
    this.at += name.length;
    return name;
  }

  private quantity(name: string): Value {
    const series = this.quantities.get(name);
    if (series === undefined) {
      return this.fail(`there is no quantity "${name}"; the case has ${[...this.quantities.keys()].join(', ')}`);
    }
    return { values: series.values, isField: series.values.length !== 1, unit: series.unit, series };
  }

  private call(name: string): Value {
    if (++this.depth > 100) this.fail('nested too deeply');
    const value = this.sum();
    this.expect(')');
    this.depth--;
    if (name === 'sqrt') return this.map(value, raised(value.unit, 0.5), Math.sqrt);
    if (name === 'abs') return this.map(value, value.unit, Math.abs);
    if (name === 'sum')
      return number(
        value.values.reduce((sum, x) => sum + x, 0),
        value.unit,
      );
    if (name === 'first') return number(value.values[0]!, value.unit);
    const plain = FUNCTIONS[name];
    if (plain !== undefined) {
      if (typeof unitFactor(value.unit || '1', '1') === 'string')
        this.fail(`${name} takes a plain number, not one in ${value.unit}`);
      return this.map(value, '', plain);
    }
    const take = REDUCTIONS.find((one) => one === name);
    if (take === undefined) return this.fail(`there is no function "${name}"`);
    const along = value.series?.along ?? null;
    const taken = takeFeature(
      { take },
      { name, unit: value.unit, values: value.values, shape: [], type: 'float64', along },
    );
    if ('why' in taken) return this.fail(taken.why);
    const axisUnit = along?.unit ?? '';
    const unit =
      take === 'integral'
        ? times(value.unit, axisUnit)
        : take === 'slope'
          ? over(value.unit, axisUnit)
          : ['where-maximum', 'half-width', 'period'].includes(take)
            ? axisUnit
            : value.unit;
    return number(taken.value, unit);
  }

  private combine(a: Value, b: Value, unit: string, operate: (x: number, y: number) => number): Value {
    if (a.isField && b.isField && a.values.length !== b.values.length) {
      this.fail(`fields of ${a.values.length} and ${b.values.length} elements cannot be worked together`);
    }
    const values = (a.isField ? a : b).values.map((_, i) =>
      operate(a.values[a.isField ? i : 0]!, b.values[b.isField ? i : 0]!),
    );
    return { values, isField: a.isField || b.isField, unit, series: a.isField ? a.series : b.series };
  }

  private map(value: Value, unit: string, operate: (x: number) => number): Value {
    return { ...value, values: value.values.map(operate), unit };
  }

  /** What the right side is multiplied by to be in the left side's unit. */
  private sameUnit(left: Value, right: Value): number {
    if (left.unit === '' || right.unit === '') {
      if (left.unit === right.unit) return 1;
      // A bare 0 has every unit.
      const bare = left.unit === '' ? left : right;
      if (!bare.isField && bare.values[0] === 0) return 1;
    }
    const factor = unitFactor(right.unit || '1', left.unit || '1');
    return typeof factor === 'number'
      ? factor
      : this.fail(`${left.unit || 'a plain number'} and ${right.unit || 'a plain number'} cannot be added`);
  }

  private rest(): string {
    this.peek();
    return this.text.slice(this.at);
  }

  private peek(): string {
    while (/\s/.test(this.text[this.at] ?? '')) this.at++;
    return this.text[this.at] ?? '';
  }

  private take(...operators: readonly string[]): string | null {
    const rest = this.rest();
    const found = operators.find(
      (operator) => rest.startsWith(operator) && !(operator === '*' && rest.startsWith('**')),
    );
    if (found === undefined) return null;
    this.at += found.length;
    return found;
  }

  private expect(operator: string): void {
    if (this.take(operator) === null) this.fail(`expected "${operator}"`);
  }

  private fail(says: string): never {
    throw new FormulaError(`in "${this.text}" at character ${this.at + 1}: ${says}`);
  }
}

const bracket = (unit: string) => (/^[A-Za-z]+$/.test(unit) ? unit : `(${unit})`);

function times(a: string, b: string): string {
  if (a === '') return b;
  return b === '' ? a : `${bracket(a)}.${bracket(b)}`;
}

function over(a: string, b: string): string {
  if (b === '') return a;
  return a === b ? '' : `${a === '' ? '1' : bracket(a)}/${bracket(b)}`;
}

function raised(unit: string, exponent: number): string {
  if (unit === '' || exponent === 1) return unit;
  return Number.isInteger(exponent)
    ? `${bracket(unit)}^${exponent}`
    : `${bracket(unit)}^(${exponent === 0.5 ? '1/2' : exponent})`;
}
