/**
 * Bad input that we cannot go on from: one line that says where, what, and how to put it right.
 * Exit code 2 at the command line. Faults of the drawing that we *can* go on from are findings, never errors.
 */
export class InputError extends Error {
  override readonly name = 'InputError';
  /** File, and line where known: `culture.run.yaml:14`. */
  readonly where: string;

  constructor(where: string, what: string, options?: { readonly cause?: unknown }) {
    super(`${where}: ${what}`, options);
    this.where = where;
  }
}
