import { lineHeight, type Paper } from './paper.ts';
import type { Section } from './section.ts';

type Facts = readonly (readonly [string, string])[];

const KEY_WIDTH = 62;
const STYLE = { size: 6.5 } as const;
const KEY_STYLE = { ...STYLE, weight: 'bold' } as const;
const STEP = lineHeight(STYLE);
const GAP = 0.8;

/** A two-column table of names and texts over the page's width; long texts run over lines. Moves the paper down. */
export function writeFacts(section: Section, facts: Facts): void {
  const { paper } = section;
  const table = paper.child(section.element, 'Table');
  for (const [key, text] of facts) {
    const lines = wrapped(paper, text);
    paper.need(STEP * Math.min(lines.length, 4));
    const row = paper.child(table, 'TR');
    const name = paper.clip(key, KEY_WIDTH - 4, KEY_STYLE);
    paper.tagged(row, 'TH', () => paper.put(name, paper.left, paper.y, KEY_STYLE), { scope: 'Row' });
    paper.lines(row, 'TD', lines, paper.left + KEY_WIDTH, STYLE);
    row.end();
    paper.y += GAP;
  }
  table.end();
}

/** Height that writeFacts will take on one page. */
export function factsHeight(paper: Paper, facts: Facts): number {
  return facts.reduce((sum, [, text]) => sum + wrapped(paper, text).length * STEP + GAP, 0);
}

function wrapped(paper: Paper, text: string): readonly string[] {
  return paper.wrap(text, paper.right - paper.left - KEY_WIDTH, STYLE);
}
