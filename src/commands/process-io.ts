import { InputError } from '../errors.ts';
import { type Io, WriteError } from './io.ts';

/** The real world: this process's streams, environment, clock and signals. */
export function processIo(): Io {
  let interrupted = false;
  process.on('SIGINT', () => {
    // A second Ctrl-C does not wait for the stage to end.
    if (interrupted) process.exit(130);
    interrupted = true;
  });
  // `rillcheck … | head`: the reader has gone, which is no fault of ours and nothing more to do. Any other error comes to the
  // one who wrote.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code === 'EPIPE') process.exit(process.exitCode ?? 0);
  });
  // Where errors can't be told there is nobody to tell it to.
  process.stderr.on('error', () => undefined);
  let now: Date | null = null;
  return {
    out: (text) =>
      new Promise((resolve, reject) => {
        process.stdout.write(text, (error) => (error == null ? resolve() : reject(cantWrite(error))));
      }),
    err: (text) => {
      process.stderr.write(text);
    },
    outIsTerminal: process.stdout.isTTY === true,
    errIsTerminal: process.stderr.isTTY === true,
    columns: process.stdout.columns ?? 100,
    env: process.env,
    cwd: process.cwd(),
    readStdin: async () => {
      const chunks: Buffer[] = [];
      for await (const chunk of process.stdin) chunks.push(chunk as Buffer); // stdin without an encoding yields buffers
      return Buffer.concat(chunks).toString('utf8');
    },
    // Read once, and only then judged: a command that prints no date asks for none.
    get now() {
      now ??= reportDate(process.env.SOURCE_DATE_EPOCH);
      return now;
    },
    isInterrupted: () => interrupted,
  };
}

function cantWrite(error: NodeJS.ErrnoException): WriteError {
  const why = error.code === 'ENOSPC' ? 'no space left on the disk' : (error.code ?? error.message);
  return new WriteError(`stdout: can't be written (${why}); send it somewhere else`, { cause: error });
}

function reportDate(epoch: string | undefined): Date {
  if (epoch === undefined || epoch === '') return new Date();
  const seconds = Number(epoch);
  if (!/^\d+$/.test(epoch) || seconds > 8.64e12) {
    throw new InputError(
      'SOURCE_DATE_EPOCH',
      `"${epoch}" is not a whole number of seconds since 1970; write for example 1767225600`,
    );
  }
  return new Date(seconds * 1000);
}
