import { formatShare } from '../../runsheet/shown.ts';
import type { Spread } from '../../spread/types.ts';
import { overallShares, type RankedCause, rankedCauses } from '../spread-rows.ts';
import { DARK, LABEL } from './chart.ts';
import { SMALL } from './context.ts';
import type { Paper } from './paper.ts';
import type { Section } from './section.ts';

const MOST_BARS = 20;

/** Which tolerances bring how much of the variance, as bars. Nothing where nothing moves. */
export function writeCauses(section: Section, spread: Spread): void {
  const { paper } = section;
  const overall = overallShares(spread);
  if (overall === null) return;
  const ranked = rankedCauses(overall.shares, spread.causes).slice(0, MOST_BARS);
  const of = overall.over === 'windows' ? 'every number that a window is set for' : 'every number that moves';
  section.heading(2, 'Which tolerance to pay for');
  section.paragraph(
    `Share of the variance that each tolerance brings, as a mean over ${of} (first order). Halving a tolerance takes away three quarters of its share.`,
    SMALL,
  );
  const step = 13;
  const alt = ranked.map(({ cause, share }) => `${cause.key} ${formatShare(rounded(share))}`).join(', ');
  paper.need(Math.min(ranked.length, 4) * step + 8);
  for (let done = 0; done < ranked.length; ) {
    const room = Math.max(1, Math.floor((paper.bottom - paper.y) / step));
    const part = ranked.slice(done, done + room);
    section.figure(`Causes of spread: ${alt}.`, () => paintCauses(paper, part, ranked[0].share, step));
    paper.y += part.length * step + 4;
    done += part.length;
    if (done < ranked.length) paper.newPage();
  }
}

function paintCauses(paper: Paper, ranked: readonly RankedCause[], largest: number, step: number): void {
  const { doc } = paper;
  const left = paper.left + 130;
  const room = paper.right - left - 50;
  ranked.forEach(({ cause, share }, i) => {
    const y = paper.y + i * step;
    const length = largest > 0 ? (share / largest) * room : 0;
    paper.putRight(paper.clip(cause.key, 124, LABEL), left - 5, y + 1.5, LABEL);
    doc.rect(left, y, length, step - 4).fill(DARK);
    paper.put(formatShare(rounded(share)), left + length + 4, y + 1.5, LABEL);
  });
}

/** Per cent to one decimal. */
function rounded(share: number): number {
  return Math.round(share * 1000) / 1000;
}
