import type { Show } from '../../runsheet/shown.ts';
import type { Spread, SpreadOutput } from '../../spread/types.ts';
import { type DistributionChart, distributionChart } from '../spread-charts.ts';
import {
  BAND,
  DARK,
  type Field,
  fieldOf,
  INK,
  LABEL,
  paintEnds,
  paintField,
  TITLE,
  writeCharts,
} from './chart.ts';
import { SMALL } from './context.ts';
import type { Paper } from './paper.ts';
import type { Section } from './section.ts';
import { trace } from './trace.ts';

const MOST_CHARTS = 24;
const CURVE = '#b05a00';
const CHART_HEIGHT = 104;

/** What the draws and the first order make of each number that has a window, a chart each. */
export function writeDistributions(section: Section, spread: Spread, show: Show): void {
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
  section.more(more, 'more, in the table.');
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
    trace(paper.doc, [field.toX(at), bottom, field.toX(at), bottom + 2]);
    paper.doc.lineWidth(0.4).stroke(INK);
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
  doc.fillOpacity(0.75).fill(DARK).fillOpacity(1);
  if (chart.curve.length > 0) {
    const toCurveX = (i: number): number => left + ((right - left) * i) / (chart.curve.length - 1);
    trace(
      doc,
      [...chart.curve].flatMap((height, i) => [toCurveX(i), toY(height)]),
    );
    doc.lineWidth(0.9).lineJoin('round').stroke(CURVE);
  }
  paintEnds(paper, field, chart.window, 0.8);
  doc.moveTo(toX(chart.nominal), top).lineTo(toX(chart.nominal), bottom).dash(2, { space: 2 });
  doc.lineWidth(0.7).stroke(INK).undash();
}
