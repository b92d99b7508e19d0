import { type Command, Option } from 'commander';
import type { Io } from './io.ts';
import { FORMATS } from './options.ts';

/** Adds the command spread to the program. `exitCodes` ends its help. */
export function declareSpread(
  program: Command,
  io: Io,
  finish: (code: number) => void,
  exitCodes: string,
): void {
  program
    .command('spread')
    .description('how far fabrication tolerances move every result, and which of them to pay for')
    .argument('<LAYOUT>', 'the SVG drawing of the chip')
    .option('--draws <N>', 'draws in the sample', '10000')
    .option('--seed <N>', 'another seed gives another sample; the same gives the same', '1')
    .option('--samples <FILE>', 'write every draw as CSV')
    .option('-r, --run <FILE>', 'the run sheet (default: LAYOUT with .run.yaml; - for stdin)')
    .option('--case <NAME>', 'only this case')
    .option('-o, --out <DIR>', 'where reports go', 'reports')
    .option('-f, --formats <LIST>', `of ${FORMATS.join(',')}, or none (default: pdf,svg; none with --json)`)
    .option('--json', 'print the result on stdout as JSON, and nothing else there')
    .addOption(
      new Option('--detail <LEVEL>', 'how deep JSON goes')
        .choices(['ports', 'reaches', 'segments'])
        .default('segments'),
    )
    .addOption(
      new Option('--colour <QUANTITY>', 'what colours the SVG picture')
        .choices(['shear', 'pressure', 'flow', 'residence'])
        .default('pressure'),
    )
    .addOption(new Option('--paper <SIZE>', 'paper of the PDF').choices(['a4', 'letter']).default('a4'))
    .option('-q, --quiet', 'print only the verdict')
    .option('--no-color', 'no colour on the terminal')
    .addHelpText(
      'after',
      `
Tolerances stand in the run sheet; a value is 2 sigma, { limit: … } a hard limit:
  tolerances: { depth: { lanes: 5 %, default: 3 % }, width: 2 um, temperature: 1 degC, pressure: { feed: { limit: 1 % } } }

Examples:
  rillcheck spread chip.svg                              10 000 draws; reports/chip.pdf with pages on the spread
  rillcheck spread chip.svg --draws 2000 --json --detail ports
  rillcheck spread chip.svg -f csv --samples draws.csv   quantiles in reports/chip.spread.csv, every draw in draws.csv
${exitCodes}
       Ctrl-C while draws are made reports those made so far, marked as such`,
    )
    .action(async (layout: string, options) => {
      // loaded only here: other commands start without it
      const { spread } = await import('./spread.ts');
      finish(await spread(layout, options, io));
    });
}
