import cliProgress from 'cli-progress';
import type { Io } from './io.ts';

export interface DrawProgress {
  readonly update: (done: number) => void;
  /** Takes the bar away. */
  readonly done: () => void;
}

const NOTHING: DrawProgress = { update: () => {}, done: () => {} };

/** A bar with the time left on stderr, only on a terminal, not with --quiet or --json and not in CI. */
export function drawProgress(io: Io, quiet: boolean, draws: number, caseName: string | null): DrawProgress {
  if (!io.errIsTerminal || quiet || io.env.CI !== undefined) return NOTHING;
  const title = caseName === null ? 'draws' : `${printable(caseName)}: draws`;
  const bar = new cliProgress.SingleBar(
    {
      format: `${title} {bar} {value}/{total}, {eta_formatted} left; Ctrl-C reports these`,
      stream: process.stderr,
      hideCursor: true,
      clearOnComplete: true,
      barsize: 24,
      etaBuffer: 50,
      // Ctrl-C is the program's own business
      gracefulExit: false,
    },
    cliProgress.Presets.shades_classic,
  );
  bar.start(draws, 0);
  return {
    // the time left means nothing after a draw or two
    update: (done) => {
      if (done >= FIRST_SHOWN) bar.update(done);
    },
    done: () => bar.stop(),
  };
}

const FIRST_SHOWN = 20;

/** A case's name is data: no control characters reach the terminal, and no braces the bar's format. */
function printable(name: string): string {
  return name.replace(/[\p{Cc}\p{Cf}{}]/gu, ' ').slice(0, 40);
}
