import { setImmediate } from 'node:timers/promises';
import { Interrupted, type Io } from './io.ts';

export interface Progress {
  /** Shows the stage that begins, lets a Ctrl-C through, and stops (throws Interrupted) when one came. */
  readonly stage: (name: string) => Promise<void>;
  /** Takes the line away. */
  readonly done: () => void;
}

/** Stage names on stderr, only on a terminal, not with --quiet and not in CI. */
export function stageProgress(io: Io, quiet: boolean): Progress {
  const shown = io.errIsTerminal && !quiet && io.env.CI === undefined;
  const clear = '\r\u001b[2K';
  return {
    stage: async (name) => {
      if (shown) io.err(`${clear}${name} …`);
      // Signals are only handled between turns of the event loop.
      await setImmediate();
      if (io.isInterrupted()) throw new Interrupted();
    },
    done: () => {
      if (shown) io.err(clear);
    },
  };
}
