import { toJsonSchema } from '@valibot/to-json-schema';
import { resultSchema } from './result-schema.ts';

/**
 * JSON Schema (draft 2020-12) of what `--json` prints and `-f json` writes, from the same description as the types.
 * Used when the package is built; not needed at run time.
 */
export function resultJsonSchema(): object {
  const schema = toJsonSchema(resultSchema, {
    target: 'draft-2020-12',
    errorMode: 'throw',
    // kinds and heads are for people's tables
    ignoreActions: ['metadata'],
  });
  return {
    $schema: 'https://json-schema.org/draft/2020-12/schema',
    title: 'rillcheck result',
    description:
      'Result of a chip check: SI units, the unit in each key; a number that does not exist is null.',
    ...schema,
  };
}
