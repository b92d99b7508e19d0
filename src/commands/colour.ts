import type { TerminalOptions } from '../report/terminal.ts';
import type { Io } from './io.ts';
import type { LayoutOptions } from './options.ts';

/** Colour only on a terminal, and not with NO_COLOR, --no-color or a dumb terminal. */
export function terminalOptions(options: Pick<LayoutOptions, 'color' | 'quiet'>, io: Io): TerminalOptions {
  const refused = (io.env.NO_COLOR ?? '') !== '' || options.color === false || io.env.TERM === 'dumb';
  return { colour: io.outIsTerminal && !refused, columns: io.columns, quiet: options.quiet === true };
}
