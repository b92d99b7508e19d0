import 'mathjs';

declare module 'mathjs' {
  /** The factory of Unit: exported by mathjs 15 (factoriesAny.js) and left out of its declarations. */
  export const createUnitClass: (parts: Readonly<Record<string, unknown>>) => unknown;
}
