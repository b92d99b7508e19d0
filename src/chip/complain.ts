import { InputError } from '../errors.ts';
import { lineAt } from '../runsheet/tree.ts';
import type { RunSheet } from '../runsheet/types.ts';

/** Refuses a run sheet at a key, with its line: `culture.run.yaml:14: ports.fed: …`. */
export function refuse(
  sheet: RunSheet,
  path: readonly (string | number)[],
  what: string,
  options?: { readonly cause?: unknown },
): never {
  throw new InputError(whereIn(sheet, path), what, options);
}

/** File and line of a key, or of the nearest key above it that is written. */
export function whereIn(sheet: RunSheet, path: readonly (string | number)[]): string {
  for (let length = path.length; length > 0; length--) {
    const line = lineAt(sheet.tree, path.slice(0, length));
    if (line !== null) return `${sheet.file}:${line}`;
  }
  return sheet.file;
}
