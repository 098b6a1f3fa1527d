/** Executable statements as expressions with positions: what a reader gives for the procedures that are asked about. Plain data. */
import type { Position } from './place.ts';

export interface Expression extends Position {
  readonly kind:
    | 'name'
    | 'number'
    | 'text'
    | 'logical'
    /** An array element, a section or a call: the thing, then what stands in its parentheses. */
    | 'indexed'
    /** `value` of the part: `state%rho`. */
    | 'component'
    | 'unary'
    | 'binary'
    | 'array'
    | 'complex'
    /** `low:high:step`, an absent bound as `absent`. */
    | 'section'
    | 'absent'
    | 'keyword'
    /** Could not be read; `value` is its text. */
    | 'unread';
  /** The name, the operator, the literal as written. */
  readonly value: string;
  readonly parts: readonly Expression[];
}

export interface ReadStatement extends Position {
  /** `assignment`: target and value; `call`: what is called, with its arguments; `condition`: of IF, ELSE IF, WHERE, DO WHILE. */
  readonly kind: 'assignment' | 'call' | 'condition';
  /** The procedure, `parent::name` where nested. */
  readonly procedure: string;
  readonly parts: readonly Expression[];
}
