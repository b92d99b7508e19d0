import { Command, CommanderError } from '@commander-js/extra-typings';
import { declareCommands } from './commands/declare.ts';
import { EXIT, EXIT_CODES } from './commands/exit-codes.ts';
import { Interrupted, type Io, WriteError } from './commands/io.ts';
import { InputError } from './errors.ts';
import { VERSION } from './version.ts';

/**
 * The whole program as a function: argv without node and script, the world as `io`; returns the exit code and never throws.
 * 0 ready, 1 hold, 2 unusable input, 3 a report could not be written, 70 a bug of ours, 130 interrupted.
 */
export async function run(argv: readonly string[], io: Io): Promise<number> {
  let code = 0;
  const help: string[] = [];
  const finish = (result: number): void => {
    code = result;
  };
  const program = toProgram(io, finish, (text) => help.push(text));
  try {
    if (argv.length === 0) {
      io.err(SHORT_USAGE);
      return EXIT.unusable;
    }
    await program.parseAsync(argv as string[], { from: 'user' }); // commander types its argument as mutable and does not change it
    return code;
  } catch (error) {
    try {
      // Help and version end in an error of commander's.
      if (help.length > 0) await io.out(help.join(''));
      return codeOf(error, io);
    } catch (cause) {
      return codeOf(cause, io);
    }
  }
}

function codeOf(error: unknown, io: Io): number {
  if (error instanceof CommanderError) {
    return error.exitCode === 0 ? 0 : EXIT.unusable;
  }
  if (error instanceof InputError || error instanceof WriteError) {
    io.err(`rillcheck: ${oneLine(error.message)}\n`);
    return error instanceof WriteError ? EXIT.notWritten : EXIT.unusable;
  }
  if (error instanceof Interrupted) {
    io.err('rillcheck: interrupted; nothing was written\n');
    return EXIT.interrupted;
  }
  const text = error instanceof Error ? `${error.name}: ${error.message}` : String(error);
  io.err(
    `rillcheck: a bug in rillcheck ${VERSION}: ${oneLine(text)}; please report it with the layout and run sheet (DEBUG=rillcheck shows more)\n`,
  );
  if (io.env.DEBUG === 'rillcheck' && error instanceof Error) io.err(`${error.stack ?? ''}\n`);
  return EXIT.bug;
}

/** Messages may hold names from the drawing: no control characters and no line breaks reach the terminal. */
function oneLine(text: string): string {
  return text.replace(/[\u0000-\u001f\u007f-\u009f\u2028\u2029\u202a-\u202e\u2066-\u2069]+/g, ' ').trim();
}

const SHORT_USAGE = `usage: rillcheck check LAYOUT [options]
Checks a microfluidic chip drawn as SVG before fabrication. More: rillcheck --help
`;

function toProgram(io: Io, finish: (code: number) => void, writeHelp: (text: string) => void): Command {
  const program = new Command('rillcheck')
    .description(
      'Checks a microfluidic chip drawn as SVG before fabrication: pressures, flows, wall shear, residence time, and what is wrong with the layout.',
    )
    .version(VERSION, '-V, --version')
    .exitOverride()
    .configureOutput({
      writeOut: writeHelp,
      writeErr: (text) => io.err(text),
      outputError: (text, write) =>
        write(`rillcheck: ${oneLine(text.replace(/^error: /, ''))}; see rillcheck --help\n`),
    })
    .showSuggestionAfterError(true)
    .addHelpText(
      'after',
      `
Examples:
  rillcheck check culture.svg                      read culture.svg and culture.run.yaml, write reports/culture.pdf and .svg
  rillcheck check culture.svg --json               the result as JSON on stdout, no files
  rillcheck check culture.svg -r trial.run.yaml    another run sheet; reports are named after it
${EXIT_CODES}`,
    );
  declareCommands(program, io, finish);
  return program;
}
