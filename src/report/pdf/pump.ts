import type { FoundTarget } from '../../solve/targets.ts';
import { type Column, words } from '../columns.ts';
import { type PumpCurve, pumpCurve } from '../pump-curve.ts';
import { brokenRules, limitsText, rangeText, settingColumns, targetColumns } from '../pump-rows.ts';
import { ofCase } from '../report.ts';
import {
  BAND,
  BAND_EDGE,
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
import { type PageContext, SMALL } from './context.ts';
import type { Paper } from './paper.ts';
import { chapter, type Section } from './section.ts';
import { trace } from './trace.ts';

/** Curves drawn; of more targets the tables tell. */
const MOST_CURVES = 24;

/** What to set: targets, settings for both kinds of pump, what is reached, and a curve of setting against target. Nothing for other commands. */
export function writePump({ paper, one }: PageContext): void {
  const { pump, network, show } = one;
  if (pump === undefined) return;
  const section = chapter(paper, ofCase('Pump settings', one), 'portrait');
  section.paragraph(LEGEND, SMALL);
  section.heading(2, 'Targets');
  section.table(pump.targets, targetColumns(show), { size: 7.5 });
  section.heading(2, 'Settings');
  const columns: readonly Column<FoundTarget>[] = [
    ...settingColumns(one, 'pressure'),
    words('breaks', (target) => brokenRules(one, target) || 'no limit', 'wrap'),
    words('pump limits', (target) => limitsText(one, target), 'wrap'),
  ];
  section.table(pump.targets, columns, { size: 7.5 });
  for (const target of pump.targets) {
    const text = rangeText(network, target, show);
    if (text !== null) section.paragraph(`${text}.`);
  }
  const curves = pump.targets.slice(0, MOST_CURVES).map((target) => pumpCurve(one, target, show));
  writeCurves(section, curves);
  section.more(pump.targets.length - MOST_CURVES, 'more targets, in the tables above.');
}

const LEGEND =
  'Each port is set either by a pressure source, which must hold the pressure at the far end of the tubing (at the port where there is none), or by a syringe pump, which must give the flow; both do the same. ' +
  'All targets are met together. Everything else in this report is computed at these settings. In the curves one port is turned and the others stay as found; a shaded band is a window, a dashed line a limit of the pump, the ring the setting found.';

const HEIGHT = 168;

function writeCurves(section: Section, curves: readonly PumpCurve[]): void {
  const { paper } = section;
  section.heading(2, 'Setting against target');
  writeCharts(
    section,
    curves,
    { perRow: 2, gap: 16, height: HEIGHT + 8 },
    (curve, x, y, width) => paintCurve(paper, curve, x, y, width),
    ({ title, x, y, found: [value, setting] }) =>
      `${title}: ${y.label} against ${x.label}; found ${setting.toPrecision(5)} for ${value.toPrecision(5)}.`,
  );
}

const LIMIT = '#b00020';
const MARGINS = { left: 40, right: 6, top: 13, bottom: 25 } as const;

function paintCurve(paper: Paper, curve: PumpCurve, x: number, y: number, width: number): void {
  const { doc } = paper;
  const left = x + MARGINS.left;
  const right = x + width - MARGINS.right;
  const top = y + MARGINS.top;
  const bottom = y + HEIGHT - MARGINS.bottom;
  const field = fieldOf({ left, right, top, bottom }, curve.x);
  const { toX } = field;
  const toY = (setting: number): number =>
    bottom - ((setting - curve.y.low) / (curve.y.high - curve.y.low)) * (bottom - top);
  paper.put(paper.clip(curve.title, width, TITLE), x, y, TITLE);
  paintField(paper, field, 0.5, () => paintCurves(paper, curve, field, toY));
  const [value, setting] = curve.found;
  if (Number.isFinite(value)) doc.circle(toX(value), toY(setting), 2.6).lineWidth(1.1).stroke(INK);
  for (const { at, text } of curve.x.ticks) {
    trace(doc, [toX(at), bottom, toX(at), bottom + 2.5]);
    doc.lineWidth(0.5).stroke(INK);
    paper.putCentred(text, toX(at), bottom + 3.2, LABEL);
  }
  for (const { at, text } of curve.y.ticks) {
    trace(doc, [left - 2.5, toY(at), left, toY(at)]);
    doc.lineWidth(0.5).stroke(INK);
    paper.putRight(text, left - 4, toY(at) - 3.8, LABEL);
  }
  curve.windows.forEach(({ text, window }, i) => {
    const style = { ...LABEL, colour: BAND_EDGE };
    const from = Math.max(left, window.min === null ? left : toX(window.min));
    paper.put(paper.clip(text, right - from - 6, style), from + 3, top + 2 + 8 * i, style);
  });
  for (const { at, text } of curve.limits) {
    const style = { ...LABEL, colour: LIMIT };
    // below its line where there is no room above
    const above = toY(at) - 8.2 > top;
    paper.putRight(text, right - 3, toY(at) + (above ? -8.2 : 1), style);
  }
  paper.putCentred(curve.x.label, (left + right) / 2, bottom + 12.5, LABEL);
  doc.save();
  doc.rotate(-90, { origin: [x + 2, (top + bottom) / 2] });
  paper.putCentred(curve.y.label, x + 2, (top + bottom) / 2, LABEL);
  doc.restore();
}

/** What is cut off at the field: windows, limits of the pump, the curve. */
function paintCurves(paper: Paper, curve: PumpCurve, field: Field, toY: (setting: number) => number): void {
  const { doc } = paper;
  const { left, right, top, bottom, toX } = field;
  for (const { window } of curve.windows) {
    const from = window.min === null ? left : toX(window.min);
    const to = window.max === null ? right : toX(window.max);
    doc.rect(from, top, to - from, bottom - top);
    doc.fillOpacity(0.7).fill(BAND).fillOpacity(1);
    paintEnds(paper, field, window, 0.5);
  }
  for (const { at } of curve.limits) {
    doc.moveTo(left, toY(at)).lineTo(right, toY(at)).dash(3, { space: 2 }).lineWidth(0.7).stroke(LIMIT);
    doc.undash();
  }
  for (const run of curve.runs) {
    const points = run.flatMap(([value, setting]) => [toX(value), toY(setting)]);
    trace(doc, points);
    doc.lineWidth(1.1).lineJoin('round').stroke(DARK);
  }
}
