import { toJsonSchema } from '@valibot/to-json-schema';
import { caseSchema, sheetSchema } from './schema.ts';

/**
 * The run sheet as a JSON Schema (draft 2020-12), for editors that complete and check YAML; made from the schema that
 * parses it, at build time. Editors read bare numbers as numbers where the program reads text, so those keys allow both.
 */
export function runSheetJsonSchema(): object {
  const sheet = convert(sheetSchema);
  const ofCase = partly(convert(caseSchema));
  const properties = { ...object(sheet.properties) };
  properties.cases = {
    description: object(properties.cases).description,
    type: 'object',
    additionalProperties: withoutHead(ofCase),
  };
  return {
    $schema: 'https://json-schema.org/draft/2020-12/schema',
    title: 'rillcheck run sheet',
    description: 'How a chip is made and run, and what it must meet. Every quantity is a text with a unit.',
    ...withoutHead(sheet),
    properties,
  };
}

type Json = Readonly<Record<string, unknown>>;

function convert(schema: Parameters<typeof toJsonSchema>[0]): Json {
  const made = toJsonSchema(schema, {
    typeMode: 'input',
    target: 'draft-2020-12',
    // What a value becomes, and checks over several keys, have no form in JSON Schema; the program makes them.
    ignoreActions: ['raw_transform'],
  });
  return object(inline(made, object(object(made).$defs)));
}

/** Puts definitions in their places: none of them is recursive. */
function inline(value: unknown, definitions: Json): unknown {
  if (Array.isArray(value)) return value.map((item) => inline(item, definitions));
  if (typeof value !== 'object' || value === null) return value;
  const { $ref, $defs, required, propertyNames, ...rest } = object(value);
  const made: Record<string, unknown> = {};
  for (const [key, item] of Object.entries(rest)) made[key] = inline(item, definitions);
  if (Array.isArray(required) && required.length > 0) made.required = required;
  if (typeof $ref !== 'string') return made;
  return { ...object(inline(definitions[$ref.replace('#/$defs/', '')], definitions)), ...made };
}

/** A case may give a part of a map, since it is merged with the sheet's; entries of lists replace and stay whole. */
function partly(schema: Json): Json {
  const made: Record<string, unknown> = {};
  for (const [key, value] of Object.entries(schema)) {
    if (key === 'required') continue;
    if (key === 'properties') {
      made[key] = Object.fromEntries(
        Object.entries(object(value)).map(([name, part]) => [name, partly(object(part))]),
      );
    } else if (key === 'anyOf' && Array.isArray(value)) {
      made[key] = value.map((part) => partly(object(part)));
    } else if (key === 'additionalProperties' && typeof value === 'object' && value !== null) {
      made[key] = partly(object(value));
    } else {
      made[key] = value;
    }
  }
  return made;
}

function withoutHead(schema: Json): Json {
  const { $schema, ...rest } = schema;
  return rest;
}

/** JSON Schema is plain data from the converter; a missing part is an empty one. */
function object(value: unknown): Json {
  return typeof value === 'object' && value !== null ? Object.fromEntries(Object.entries(value)) : {};
}
