import type { PageContext } from './context.ts';
import { chapter } from './section.ts';

/** What the person who works with the chip must know, whatever the verdict. */
export function writeCautions({ paper }: PageContext): void {
  const section = chapter(paper, 'Cautions', 'portrait', 110);
  for (const text of CAUTIONS) section.paragraph(text);
}

const CAUTIONS: readonly string[] = [
  'Pressure: a bonded chip or its tubing can burst or jet under pressure. Shield the eyes, and raise the pressure in steps.',
  'Substances: handle chemicals and biological material under local rules.',
  'Use: the model is a design aid and not a qualification of a medical or diagnostic device.',
  'Precedence: local codes and licensed practice come first.',
  'Limits marked "typical value, not from your maker" are habits of the trade and promise nothing about a particular material, machine or bond.',
];
