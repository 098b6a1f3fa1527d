/** The language in which the shapes of manifests are written down once, for both the checks (validate.ts) and the published JSON Schemas (json-schema.ts). */
import type { FormName } from './text-form.ts';

export type Shape =
  | { readonly is: 'text'; readonly form: FormName }
  | { readonly is: 'choice'; readonly of: readonly string[] }
  | { readonly is: 'number'; readonly least?: number; readonly above?: number; readonly whole?: boolean }
  | { readonly is: 'flag' }
  /** Text, number or flag; `asText` gives a number or flag as it is written, for what ends up as text anyway. */
  | { readonly is: 'scalar'; readonly asText?: boolean }
  /** `[low, high]`, where null is unbounded. */
  | { readonly is: 'range' }
  | { readonly is: 'list'; readonly of: Shape; readonly atLeast?: number }
  | { readonly is: 'map'; readonly key: FormName | readonly string[]; readonly of: Shape; readonly atLeast?: number }
  | RecordShape
  /** Told apart by whether the value is a scalar, a list or a map; the first of the same sort decides the message. */
  | { readonly is: 'either'; readonly of: readonly Shape[] };

export interface RecordShape {
  readonly is: 'record';
  /** What the record is, for messages and the schema's title: `an offer`. */
  readonly title: string;
  readonly keys: Readonly<Record<string, KeyShape>>;
}

export interface KeyShape {
  readonly shape: Shape;
  readonly required: boolean;
  /** One line for the schema's description and for editors. */
  readonly says: string;
}

export const text = (form: FormName): Shape => ({ is: 'text', form });
export const choice = (...of: string[]): Shape => ({ is: 'choice', of });
export const list = (of: Shape, atLeast = 0): Shape => ({ is: 'list', of, atLeast });
export const map = (key: FormName | readonly string[], of: Shape, atLeast = 0): Shape => ({
  is: 'map',
  key,
  of,
  atLeast,
});
export const record = (title: string, keys: Record<string, KeyShape>): RecordShape => ({ is: 'record', title, keys });
export const must = (shape: Shape, says: string): KeyShape => ({ shape, required: true, says });
export const may = (shape: Shape, says: string): KeyShape => ({ shape, required: false, says });
