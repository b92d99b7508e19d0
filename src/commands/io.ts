/** Everything a command needs from the world around it, so that a test can hand in its own. Only commands/ touches it. */
export interface Io {
  readonly out: (text: string) => Promise<void>;
  readonly err: (text: string) => void;
  readonly outIsTerminal: boolean;
  readonly errIsTerminal: boolean;
  readonly columns: number;
  readonly env: Readonly<Record<string, string | undefined>>;
  readonly cwd: string;
  readonly readStdin: () => Promise<string>;
  /** Dates printed in reports: SOURCE_DATE_EPOCH where set, else the clock, read once. */
  readonly now: Date;
  /** True once the user has asked to stop (Ctrl-C). */
  readonly isInterrupted: () => boolean;
}

/** Thrown between two stages when the user has asked to stop; the program ends with 130. */
export class Interrupted extends Error {
  override readonly name = 'Interrupted';
}

/** A report could not be written: exit code 3. */
export class WriteError extends Error {
  override readonly name = 'WriteError';
}
