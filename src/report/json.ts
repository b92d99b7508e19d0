import { inChunks } from './chunks.ts';
import type { Result } from './result.ts';

/** How deep the JSON goes: `ports` has no nodes, reaches and segments; `reaches` no segments. */
export type Detail = 'ports' | 'reaches' | 'segments';

/**
 * The result as JSON text in chunks of about 64 kB, keys in the order of the contract, one table row per line, a newline at the end.
 * Throws a RangeError that names the key when a number is NaN or infinite.
 */
export function writeJson(result: Result, detail: Detail = 'segments'): Generator<string> {
  return inChunks(documentPieces(result, detail));
}

function* documentPieces(result: Result, detail: Detail): Generator<string> {
  if (!('cases' in result)) {
    yield* memberPieces(result, detail, '');
    yield '\n}\n';
    return;
  }
  const { cases, ...head } = result;
  yield* memberPieces(head, detail, '');
  let separator = ',\n  "cases": [\n    ';
  for (const one of cases) {
    yield separator;
    yield* memberPieces(one, detail, '    ');
    separator = '\n    },\n    ';
  }
  yield '\n    }\n  ]\n}\n';
}

/** Top-level keys whose arrays are written one row per line. */
const TABLES = new Set(['ports', 'nodes', 'reaches', 'segments', 'findings', 'not_run']);
const LEFT_OUT: Record<Detail, ReadonlySet<string>> = {
  ports: new Set(['nodes', 'reaches', 'segments']),
  reaches: new Set(['segments']),
  segments: new Set(),
};

/** An object's members, its closing brace left open. */
function* memberPieces(part: object, detail: Detail, indent: string): Generator<string> {
  let separator = '{\n';
  for (const [key, value] of Object.entries(part)) {
    if (LEFT_OUT[detail].has(key) || value === undefined) continue;
    yield `${separator}${indent}  ${JSON.stringify(key)}: `;
    separator = ',\n';
    if (TABLES.has(key)) {
      // every key in TABLES holds rows: an array or lazy Rows of plain objects
      yield* tablePieces(value as Iterable<unknown>, key, indent);
    } else {
      yield jsonValue(value, key);
    }
  }
}

function* tablePieces(table: Iterable<unknown>, key: string, indent: string): Generator<string> {
  let separator = '[\n';
  for (const row of table) {
    yield `${separator}${indent}    ${jsonValue(row, key)}`;
    separator = ',\n';
  }
  yield separator === '[\n' ? '[]' : `\n${indent}  ]`;
}

/** JSON of one value without whitespace; −0 is written as 0. */
function jsonValue(value: unknown, path: string): string {
  return JSON.stringify(value, (key, inner: unknown) => {
    // JSON.stringify itself would write null
    if (typeof inner === 'number' && !Number.isFinite(inner))
      throw new RangeError(
        `${[path, key].filter(Boolean).join('.')} is ${inner}: a result holds finite numbers or null`,
      );
    return inner;
  });
}
