import { type Command, InvalidArgumentError, Option } from '@commander-js/extra-typings';
import { EXIT_CODES } from './exit-codes.ts';
import type { Io } from './io.ts';
import { FORMATS } from './options.ts';

/** Runs a command, once it is chosen, and takes its exit code. */
type Start = (run: (commands: typeof import('./all.ts')) => Promise<number>) => Promise<void>;

/** Declares every command. What a command needs is loaded when it runs, so that help and version start at once. */
export function declareCommands(program: Command, io: Io, finish: (code: number) => void): void {
  const start: Start = async (run) => finish(await run(await import('./all.ts')));
  declareCheck(program, io, start);
  declarePump(program, io, start);
  declareSpread(program, io, start);
  declareSection(program, io, start);
  declareDraft(program, io, start);
}

/** The main job. */
function declareCheck(program: Command, io: Io, start: Start): void {
  layoutCommand(program, 'check')
    .description('read, check, solve and report a layout')
    .addHelpText(
      'after',
      `
Examples:
  rillcheck check chip.svg -o out -f pdf,csv
  rillcheck check chip.svg --json --detail ports
  rillcheck check chip.svg --colour shear --quiet
${EXIT_CODES}`,
    )
    .action((layout, options) => start(({ check }) => check(layout, options, io)));
}

/** Settings for targets. */
function declarePump(program: Command, io: Io, start: Start): void {
  layoutCommand(program, 'pump')
    .description('find the pump settings that meet the targets of the run sheet, and check the chip at them')
    .addHelpText(
      'after',
      `
Targets stand in the run sheet, each with the port whose setting is to be found:
  targets:
    - { channel: lane-1, wall_shear: 0.3 Pa, at: mean, by: feed }

Examples:
  rillcheck pump chip.svg                          settings on the terminal, reports/chip.pump.pdf to sign
  rillcheck pump chip.svg --json --detail ports    exact settings as JSON
  rillcheck pump chip.svg --case culture           only this case of the run sheet
${EXIT_CODES}`,
    )
    .action((layout, options) => start(({ pump }) => pump(layout, options, io)));
}

/** Fabrication tolerances. */
function declareSpread(program: Command, io: Io, start: Start): void {
  layoutCommand(program, 'spread')
    .description('how far fabrication tolerances move every result, and which of them to pay for')
    .option('--draws <N>', 'draws in the sample', '10000')
    .option('--seed <N>', 'another seed gives another sample; the same gives the same', '1')
    .option('--samples <FILE>', 'write every draw as CSV')
    .addHelpText(
      'after',
      `
Tolerances stand in the run sheet; a value is 2 sigma, { limit: … } a hard limit:
  tolerances: { depth: { lanes: 5 %, default: 3 % }, width: 2 um, temperature: 1 degC, pressure: { feed: { limit: 1 % } } }

Examples:
  rillcheck spread chip.svg                              10 000 draws; reports/chip.spread.pdf with pages on the spread
  rillcheck spread chip.svg --draws 2000 --json --detail ports
  rillcheck spread chip.svg -f csv --samples draws.csv   quantiles in reports/chip.spread.csv, every draw in draws.csv
${EXIT_CODES}
       Ctrl-C while draws are made reports those made so far, marked as such`,
    )
    .action((layout, options) => start(({ spread }) => spread(layout, options, io)));
}

/** One duct. */
function declareSection(program: Command, io: Io, start: Start): void {
  program
    .command('section')
    .description('one straight duct without a layout: resistance, flow, pressure, wall shear')
    .requiredOption('--width <LENGTH>', 'width, for example "100 um"')
    .requiredOption('--depth <LENGTH>', 'depth, for example "50 um"')
    .requiredOption('--length <LENGTH>', 'length, for example "10 mm"')
    .option('--flow <FLOW>', 'one of these three: the flow, for example "2 uL/min" …')
    .option('--pressure <PRESSURE>', '… or the pressure drop, for example "1 kPa" …')
    .option('--wall-shear <SHEAR>', '… or the mean wall shear on the floor, for example "0.3 Pa"')
    .option('--viscosity <VISCOSITY>', 'of a fluid of your own (default: water)')
    .option('--density <DENSITY>', 'of the same fluid')
    .option('--temperature <TEMPERATURE>', 'of the water (default: 25 degC)')
    .addOption(
      new Option('--profile <PROFILE>', 'isotropic is wet-etched: the width is then the mask’s')
        .choices(['rectangle', 'isotropic'] as const)
        .default('rectangle'),
    )
    .option('--json', 'print the result as JSON')
    .addHelpText(
      'after',
      `
Examples:
  rillcheck section --width "500 um" --depth "50 um" --length "20 mm" --flow "10 uL/min"
  rillcheck section --width "1 mm" --depth "120 um" --length "40 mm" --wall-shear "0.3 Pa" --temperature "37 degC"
  rillcheck section --width "100 um" --depth "50 um" --length "10 mm" --pressure "12 kPa" --viscosity "1 mPa s" --density "1000 kg/m^3" --json
${EXIT_CODES}`,
    )
    .action((options) => start(({ section }) => section(options, io)));
}

/** A first run sheet. */
function declareDraft(program: Command, io: Io, start: Start): void {
  program
    .command('draft')
    .description('write a first run sheet for a layout, with what must be filled in marked')
    .argument('<LAYOUT>', 'the SVG drawing of the chip')
    .option('-r, --run <FILE>', 'where to write it (default: LAYOUT with .run.yaml; - for stdout)')
    .option('--force', 'write over a run sheet that is there already')
    .addHelpText(
      'after',
      `
Examples:
  rillcheck draft chip.svg              writes chip.run.yaml beside it; never over one that is there
  rillcheck draft chip.svg --run -      prints it
  rillcheck draft chip.svg --force      begins anew
${EXIT_CODES}`,
    )
    .action((layout, options) => start(({ draft }) => draft(layout, options, io)));
}

/** A command that reads, solves and reports a layout, with the options that all such have. */
function layoutCommand(program: Command, name: string) {
  return program
    .command(name)
    .argument('<LAYOUT>', 'the SVG drawing of the chip')
    .option('-r, --run <FILE>', 'the run sheet (default: LAYOUT with .run.yaml; - for stdin)')
    .option('--case <NAME>', 'only this case')
    .option('-o, --out <DIR>', 'where reports go', 'reports')
    .option('-f, --formats <LIST>', `of ${FORMATS.join(',')}, or none (default: pdf,svg; none with --json)`)
    .option('--json', 'print the result on stdout as JSON, and nothing else there')
    .addOption(
      new Option('--detail <LEVEL>', 'how deep JSON goes')
        .choices(['ports', 'reaches', 'segments'] as const)
        .default('segments'),
    )
    .addOption(
      new Option('--colour <QUANTITY>', 'what colours the SVG picture')
        .choices(['shear', 'pressure', 'flow', 'residence'] as const)
        .default('pressure'),
    )
    .addOption(
      new Option('--paper <SIZE>', 'paper of the PDF: a4 or letter').argParser(paperOf).default('a4'),
    )
    .option('-q, --quiet', 'print only the verdict')
    .option('--no-color', 'no colour on the terminal');
}

/** A paper size as people write it: A4, letter. */
function paperOf(text: string): 'a4' | 'letter' {
  const size = text.toLowerCase();
  if (size === 'a4' || size === 'letter') return size;
  throw new InvalidArgumentError('Allowed choices are a4, letter.');
}
