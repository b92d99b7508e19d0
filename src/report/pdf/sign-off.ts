import { BODY, BODY_BOLD } from './context.ts';
import { lineHeight } from './paper.ts';
import type { Section } from './section.ts';

const VERDICT_COLOURS = { ready: '#14532d', hold: '#8f1414' } as const;

/** The verdict in a box, its counts beside it. */
export function writeBanner(section: Section, verdict: 'ready' | 'hold', countsText: string): void {
  const { paper } = section;
  const boxY = paper.y + 1;
  const word = verdict.toUpperCase();
  const wordStyle = { size: 15, weight: 'bold', colour: '#ffffff' } as const;
  const wordWidth = paper.widthOf(word, wordStyle) + 16;
  paper.decoration(() => {
    paper.doc.rect(paper.left, boxY, wordWidth, 22).fill(VERDICT_COLOURS[verdict]);
    paper.doc.rect(paper.left, boxY, paper.width, 22).lineWidth(0.8).stroke(VERDICT_COLOURS[verdict]);
  });
  paper.tagged(section.element, 'P', () => {
    paper.put(word, paper.left + 8, boxY + 2.2, wordStyle);
    const counts = { size: 9.5, weight: 'bold' } as const;
    const room = paper.width - wordWidth - 16;
    paper.put(paper.clip(countsText, room, counts), paper.left + wordWidth + 8, boxY + 5.2, counts);
  });
  paper.y = boxY + 25;
}

/** Height of the lines to sign, with the room to write above them. */
export const SIGN_HEIGHT = 40;

/** Lines to sign, at the foot of the page. */
export function writeSignatures(section: Section): void {
  const { paper } = section;
  const y = Math.max(paper.y + 20, paper.bottom - 14);
  const labels = ['checked', 'approved', 'date'];
  const gap = 18;
  const width = (paper.width - gap * (labels.length - 1)) / labels.length;
  labels.forEach((label, i) => {
    const x = paper.left + i * (width + gap);
    paper.rule(y, x, x + width, '#222222', 0.5);
    paper.tagged(section.element, 'P', () => paper.put(label, x, y + 2, BODY_BOLD));
  });
  paper.y = y + 2 + lineHeight(BODY);
}
