import type { Show } from '../../runsheet/shown.ts';
import type { Spread, SpreadOutput } from '../../spread/types.ts';
import { words } from '../columns.ts';
import { ofCase } from '../report.ts';
import { cornerText, remarks, spreadColumns, toleranceText, yieldText } from '../spread-rows.ts';
import { BODY_BOLD, type PageContext, SMALL } from './context.ts';
import { chapter, type Section } from './section.ts';
import { writeCauses } from './spread-causes.ts';
import { writeDistributions } from './spread-distributions.ts';

const MOST_ROWS = 1000;

/** How sure each number is: yield, causes, distributions with their windows, the table. Nothing for other commands. */
export function writeSpread({ paper, one }: PageContext): void {
  const { spread, show } = one;
  if (spread === undefined) return;
  const section = chapter(paper, ofCase('Spread', one), 'portrait');
  if (spread.draws < spread.asked) {
    const text = `Stopped before its end: ${spread.draws} of ${spread.asked} draws were made.`;
    section.paragraph(text, BODY_BOLD);
  }
  section.paragraph(sentence(yieldText(spread)), BODY_BOLD);
  for (const text of [cornerText(spread, show), ...remarks(spread)]) {
    if (text !== null) section.paragraph(sentence(text));
  }
  writeTolerances(section, spread, show);
  writeCauses(section, spread);
  writeDistributions(section, spread, show);
  writeNumbers(section, spread, show);
  section.paragraph(method(spread), SMALL);
}

function sentence(text: string): string {
  return text === '' ? '' : `${text[0].toUpperCase()}${text.slice(1)}.`;
}

function method({ seed, draws }: Spread): string {
  return (
    'Two ways that check each other. First order (JCGM 100:2008, 5.1.2): exact derivatives of the network by its adjoint and of the duct by its series, tolerances independent. ' +
    `Sample: ${draws} draws of a shuffled Halton sequence (A. B. Owen, arXiv:1706.02808), seed ${seed}; each is the whole chip computed anew. Draw i depends on the seed and i alone. ` +
    'A tolerance is 2 sigma of a normal distribution, or half the width of a uniform one where it is a hard limit. A depth is common to its layer and independent between layers; `width` is one bias of the whole mask, ' +
    '`width_own` a part of its own for each channel. Joins and duct lengths stay as drawn. A response counts as not linear where the two standard deviations differ by more than 5 %, or the mean lies more than a tenth ' +
    'of one off the nominal value, beyond the error of the sample. No pressure may fall below −95 kPa, limit or not. Limits of the drawing itself (widths, walls, margins) are judged on the drawing and are no part of the yield. ' +
    'The interval of the yield is Wilson’s at 95 %; it says how well the sample knows the yield, not how well the tolerances are known.'
  );
}

function writeTolerances(section: Section, { causes }: Spread, show: Show): void {
  section.heading(2, 'Tolerances');
  section.table(causes.slice(0, MOST_ROWS), [
    words('tolerance', ({ key }) => key, 'share'),
    words('what varies', ({ text }) => text, 'share'),
    words('by', (cause) => toleranceText(cause, show)),
  ]);
}

function writeNumbers(section: Section, spread: Spread, show: Show): void {
  const { paper } = section;
  paper.newPage('landscape');
  section.heading(2, 'Numbers');
  const outputs = spread.outputs.slice(0, MOST_ROWS);
  // all of them, in their order
  section.table(outputs, Object.values(spreadColumns(spread, show)), {
    size: 6.5,
    group: ({ on }, i) => (on === outputs[i - 1]?.on ? null : GROUPS[on]),
  });
  section.more(spread.outputs.length - MOST_ROWS, 'more, in the CSV and JSON files.');
}

const GROUPS: Readonly<Record<SpreadOutput['on'], string>> = {
  port: 'Ports (flow into the chip is positive)',
  reach: 'Reaches (flow in the direction of the nominal flow)',
  channel: 'Channels passed through several reaches',
  node: 'Nodes',
};
