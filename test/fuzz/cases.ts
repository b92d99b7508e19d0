import fc from 'fast-check';
import { readSeeds } from './corpus.ts';
import { chip, drawing, runSheet } from './drawings.ts';
import { changed, changes } from './mutate.ts';

/** Files of a folder and a command line on them. */
export interface FuzzCase {
  readonly files: Readonly<Record<string, string | Uint8Array>>;
  readonly argv: readonly string[];
}

const seeds = readSeeds();
const seed = fc.nat(seeds.length - 1).map((i) => seeds[i]);

const files: fc.Arbitrary<FuzzCase['files']> = fc.oneof(
  {
    weight: 4,
    arbitrary: fc
      .tuple(seed, changes)
      .map(([{ svg, sheet }, list]) => ({ 'chip.svg': changed(svg, list), 'chip.run.yaml': sheet })),
  },
  {
    weight: 3,
    arbitrary: fc
      .tuple(seed, changes)
      .map(([{ svg, sheet }, list]) => ({ 'chip.svg': svg, 'chip.run.yaml': changed(sheet, list) })),
  },
  {
    weight: 4,
    arbitrary: fc
      .tuple(drawing, runSheet)
      .map(([svg, sheet]) => ({ 'chip.svg': svg, 'chip.run.yaml': sheet })),
  },
  { weight: 6, arbitrary: chip.map(({ svg, sheet }) => ({ 'chip.svg': svg, 'chip.run.yaml': sheet })) },
  fc.tuple(drawing, seed).map(([svg, { sheet }]) => ({ 'chip.svg': svg, 'chip.run.yaml': sheet })),
  fc.tuple(seed, runSheet).map(([{ svg }, sheet]) => ({ 'chip.svg': svg, 'chip.run.yaml': sheet })),
  fc.uint8Array({ maxLength: 200 }).map((bytes) => ({ 'chip.svg': bytes })),
  fc
    .string({ unit: 'binary', maxLength: 200 })
    .map((text) => ({ 'chip.svg': '<svg/>', 'chip.run.yaml': text })),
);

const argv: fc.Arbitrary<readonly string[]> = fc.oneof(
  { weight: 30, arbitrary: fc.constant(['check', 'chip.svg', '--json']) },
  { weight: 6, arbitrary: fc.constant(['pump', 'chip.svg', '--json', '--detail', 'ports']) },
  {
    weight: 4,
    arbitrary: fc.constant(['spread', 'chip.svg', '--draws', '20', '--json', '--detail', 'ports']),
  },
  { weight: 3, arbitrary: fc.constant(['draft', 'chip.svg', '-o', 'drafted']) },
  { weight: 4, arbitrary: fc.constant(['check', 'chip.svg', '-f', 'svg,csv,json']) },
  { weight: 2, arbitrary: fc.constant(['check', 'chip.svg', '-f', 'pdf']) },
  fc.constant(['pump', 'chip.svg', '-f', 'pdf,svg']),
  fc.constant(['spread', 'chip.svg', '--draws', '10', '-f', 'pdf,csv']),
  commandLine(),
);

/** Each stands for a whole run of the program. */
export const fuzzCase: fc.Arbitrary<FuzzCase> = fc.record({ files, argv });

function commandLine(): fc.Arbitrary<readonly string[]> {
  const words = [
    ...[
      'check',
      'pump',
      'spread',
      'section',
      'draft',
      'chip.svg',
      'chip.run.yaml',
      '-',
      '--',
      '',
      'inner',
      'none.svg',
    ],
    ...[
      '-r',
      '--run',
      '--case',
      '-o',
      '--out',
      '-f',
      '--formats',
      '--json',
      '--detail',
      '-q',
      '--help',
      '--version',
      '-V',
    ],
    ...[
      'ports',
      'segments',
      'pdf',
      'csv,svg',
      'none',
      'json,',
      '--no-color',
      '--paper',
      'letter',
      '--colour',
      'shear',
      '--force',
    ],
    ...[
      '--width',
      '100 um',
      '--depth',
      '50um',
      '--length',
      '1 cm',
      '--flow',
      '2 uL/min',
      '--pressure',
      '1e9 kPa',
      '--draws',
      '3',
    ],
    ...['--seed', '1', '--bogus', '--width=0 um', '--depth=-1 um', '\u0000', 'a'.repeat(300), '../../x'],
  ];
  return fc.array(fc.constantFrom(...words), { maxLength: 8 });
}
