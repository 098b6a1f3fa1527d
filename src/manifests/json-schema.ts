/** The JSON Schemas that editors complete and check manifests with, made from the same shapes as the checks. */

import type { KeyShape, RecordShape, Shape } from './shape.ts';
import { MANIFEST_SHAPES, type ManifestSort } from './shapes.ts';
import { type FormName, TEXT_FORMS, type TextForm } from './text-form.ts';

export type JsonSchema = { readonly [key: string]: unknown };

/**
 * The schema of one sort of manifest.
 * It accepts all that the loader accepts; what no schema can say (a range that ends below its beginning, a unit that does
 * not exist, a name that no manifest declares) only the loader finds.
 *
 * @source JSON Schema, draft 2020-12, Core and Validation
 */
export function manifestSchema(sort: ManifestSort): JsonSchema {
  return {
    $schema: 'https://json-schema.org/draft/2020-12/schema',
    $id: `urn:mortise:manifest:${sort}`,
    ...recordSchema(MANIFEST_SHAPES[sort]),
  };
}

/** The text of the published file. */
export function schemaText(sort: ManifestSort): string {
  return `${JSON.stringify(manifestSchema(sort), null, 2)}\n`;
}

function schemaOf(shape: Shape): JsonSchema {
  switch (shape.is) {
    case 'text':
      return textSchema(shape.form);
    case 'choice':
      return { enum: shape.of };
    case 'number':
      return {
        type: shape.whole === true ? 'integer' : 'number',
        ...(shape.least === undefined ? {} : { minimum: shape.least }),
        ...(shape.above === undefined ? {} : { exclusiveMinimum: shape.above }),
      };
    case 'flag':
      return { type: 'boolean' };
    case 'scalar':
      return { anyOf: [textSchema('prose'), { type: ['number', 'boolean'] }] };
    case 'range':
      return {
        description: 'Two numbers, low and high; null for an end that has no bound.',
        type: 'array',
        prefixItems: [{ type: ['number', 'null'] }, { type: ['number', 'null'] }],
        items: false,
        minItems: 2,
      };
    case 'list':
      return { type: 'array', items: schemaOf(shape.of), ...(shape.atLeast ? { minItems: shape.atLeast } : {}) };
    case 'map':
      return {
        type: 'object',
        propertyNames: typeof shape.key === 'string' ? { pattern: TEXT_FORMS[shape.key].pattern } : { enum: shape.key },
        additionalProperties: schemaOf(shape.of),
        ...(shape.atLeast ? { minProperties: shape.atLeast } : {}),
      };
    case 'record':
      return recordSchema(shape);
    case 'either':
      return { anyOf: shape.of.map(schemaOf) };
  }
}

function textSchema(form: FormName): JsonSchema {
  const { title, pattern, numberToo }: TextForm = TEXT_FORMS[form];
  const text = { title, type: 'string', pattern };
  return numberToo === true ? { anyOf: [text, { type: 'number' }] } : text;
}

function recordSchema(shape: RecordShape): JsonSchema {
  const keys = Object.entries(shape.keys);
  const required = keys.filter(([, key]) => key.required).map(([name]) => name);
  return {
    title: shape.title,
    type: 'object',
    properties: Object.fromEntries(keys.map(([name, key]) => [name, keySchema(key)])),
    ...(required.length === 0 ? {} : { required }),
    additionalProperties: false,
  };
}

function keySchema(key: KeyShape): JsonSchema {
  return { description: key.says, ...schemaOf(key.shape) };
}
