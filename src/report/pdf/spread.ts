import { formatShare, type Show } from '../../runsheet/shown.ts';
import type { Spread, SpreadOutput } from '../../spread/types.ts';
import { words } from '../columns.ts';
import { ofCase } from '../report.ts';
import { type DistributionChart, distributionChart } from '../spread-charts.ts';
import {
  cornerText,
  overallShares,
  type RankedCause,
  rankedCauses,
  remarks,
  spreadColumns,
  toleranceText,
  yieldText,
} from '../spread-rows.ts';
import {
  BAND,
  type Field,
  fieldOf,
  INK,
  LABEL,
  paintEnds,
  paintField,
  paintTick,
  TITLE,
  writeCharts,
} from './chart.ts';
import { BODY_BOLD, type PageContext, SMALL } from './context.ts';
import type { Paper } from './paper.ts';
import { chapter, type Section } from './section.ts';

const MOST_CHARTS = 24;
const MOST_ROWS = 1000;
const MOST_BARS = 20;

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

/* ---------- causes ---------- */

const BAR = '#1b4965';
const CURVE = '#b05a00';

function writeCauses(section: Section, spread: Spread): void {
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
    doc.rect(left, y, length, step - 4).fill(BAR);
    paper.put(formatShare(rounded(share)), left + length + 4, y + 1.5, LABEL);
  });
}

/** Per cent to one decimal. */
function rounded(share: number): number {
  return Math.round(share * 1000) / 1000;
}

/* ---------- distributions ---------- */

const CHART_HEIGHT = 104;

function writeDistributions(section: Section, spread: Spread, show: Show): void {
  const { paper } = section;
  const charts: DistributionChart[] = [];
  let more = 0;
  for (const output of byRoom(spread.outputs)) {
    const chart = charts.length < MOST_CHARTS ? distributionChart(output, spread, show) : null;
    if (chart !== null) charts.push(chart);
    else if (charts.length >= MOST_CHARTS) more++;
  }
  if (charts.length === 0) return;
  section.heading(2, 'Distributions of what has a window');
  section.paragraph(
    'Bars: the draws. Line: first order. Shaded: what is asked. Dashed: the nominal value. Those with least room first.',
    SMALL,
  );
  writeCharts(
    section,
    charts,
    { perRow: 3, gap: 12, height: CHART_HEIGHT + 6 },
    (chart, x, y, width) => paintDistribution(paper, chart, x, y, width),
    ({ alt }) => alt,
  );
  if (more > 0) section.paragraph(`… and ${more} more, in the table.`, SMALL);
}

/** Numbers of windows, those with the fewest standard deviations of room first. */
function byRoom(outputs: readonly SpreadOutput[]): readonly SpreadOutput[] {
  const room = ({ min, max, nominal, sd }: SpreadOutput): number =>
    Math.min(
      min === null ? Number.POSITIVE_INFINITY : (nominal - min) / sd,
      max === null ? Number.POSITIVE_INFINITY : (max - nominal) / sd,
    );
  return (
    outputs
      // rounded, so that equal lanes keep their order
      .map((output, i) => ({ output, i, room: Number(room(output).toPrecision(9)) }))
      .filter(({ output, room: left }) => output.hasWindow && output.sd > 0 && !Number.isNaN(left))
      .sort((a, b) => (a.room < b.room ? -1 : a.room > b.room ? 1 : a.i - b.i))
      .map(({ output }) => output)
  );
}

function paintDistribution(
  paper: Paper,
  chart: DistributionChart,
  x: number,
  y: number,
  width: number,
): void {
  const top = y + 22;
  const bottom = y + CHART_HEIGHT - 16;
  const [left, right] = [x + 4, x + width - 4];
  const field = fieldOf({ left, right, top, bottom }, chart);
  paper.put(paper.clip(chart.title, width, TITLE), x, y, TITLE);
  paper.put(paper.clip(chart.subtitle, width, LABEL), x, y + 10, LABEL);
  paintField(paper, field, 0.4, () => paintBars(paper, chart, field));
  const unitLeft = right - paper.widthOf(chart.unit, LABEL);
  for (const { at, text } of chart.ticks) {
    paintTick(paper, field.toX(at), bottom, 0, 2, 0.4);
    const textWidth = paper.widthOf(text, LABEL);
    const textLeft = field.toX(at) - textWidth / 2;
    // the unit stands at the end of the axis
    if (textLeft + textWidth < unitLeft - 3) paper.put(text, textLeft, bottom + 3, LABEL);
  }
  paper.put(chart.unit, unitLeft, bottom + 3, LABEL);
}

/** What is cut off at the field: the window, the draws, first order, the nominal value. */
function paintBars(paper: Paper, chart: DistributionChart, field: Field): void {
  const { doc } = paper;
  const { left, right, top, bottom, toX } = field;
  const toY = (height: number): number => bottom - height * (bottom - top) * 0.94;
  const { min, max } = chart.window;
  const from = min === null ? left : Math.max(left, toX(min));
  const to = max === null ? right : Math.min(right, toX(max));
  if (to > from) doc.rect(from, top, to - from, bottom - top).fill(BAND);
  const bar = (right - left) / chart.bars.length;
  chart.bars.forEach((height, i) => {
    if (height > 0) doc.rect(left + i * bar, toY(height), bar * 0.92, bottom - toY(height));
  });
  doc.fillOpacity(0.75).fill(BAR).fillOpacity(1);
  chart.curve.forEach((height, i) => {
    const at = left + ((right - left) * i) / (chart.curve.length - 1);
    if (i === 0) doc.moveTo(at, toY(height));
    else doc.lineTo(at, toY(height));
  });
  if (chart.curve.length > 0) doc.lineWidth(0.9).lineJoin('round').stroke(CURVE);
  paintEnds(paper, field, chart.window, 0.8);
  doc.moveTo(toX(chart.nominal), top).lineTo(toX(chart.nominal), bottom).dash(2, { space: 2 });
  doc.lineWidth(0.7).stroke(INK).undash();
}

/* ---------- numbers ---------- */

function writeNumbers(section: Section, spread: Spread, show: Show): void {
  const { paper } = section;
  paper.newPage('landscape');
  section.heading(2, 'Numbers');
  const outputs = spread.outputs.slice(0, MOST_ROWS);
  const { what, quantity, unit, nominal, mean, low, high, sd, linearSd, linear, asked, kept, causes } =
    spreadColumns(spread, show);
  section.table(
    outputs,
    [what, quantity, unit, nominal, mean, low, high, sd, linearSd, linear, asked, kept, causes],
    { size: 6.5, group: ({ on }, i) => (on === outputs[i - 1]?.on ? null : GROUPS[on]) },
  );
  const more = spread.outputs.length - MOST_ROWS;
  if (more > 0) section.paragraph(`… and ${more} more, in the CSV and JSON files.`, SMALL);
}

const GROUPS: Readonly<Record<SpreadOutput['on'], string>> = {
  port: 'Ports (flow into the chip is positive)',
  reach: 'Reaches (flow in the direction of the nominal flow)',
  channel: 'Channels passed through several reaches',
  node: 'Nodes',
};
