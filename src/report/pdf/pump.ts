import type { FoundTarget } from '../../solve/targets.ts';
import { type Column, words } from '../columns.ts';
import { cleanText } from '../plain-text.ts';
import { type PumpCurve, pumpCurve } from '../pump-curve.ts';
import { brokenRules, limitsText, rangeText, settingColumns, targetColumns } from '../pump-rows.ts';
import { BODY, type PageContext, SMALL } from './context.ts';
import type { Element, Paper, TextStyle } from './paper.ts';
import { drawTable } from './table.ts';

/** Curves drawn; of more targets the tables tell. */
const MOST_CURVES = 24;

/** What to set: targets, settings for both kinds of pump, what is reached, and a curve of setting against target. Nothing for other commands. */
export function writePump({ paper, one }: PageContext): void {
  const { pump, network, show } = one;
  if (pump === undefined) return;
  paper.newPage('portrait');
  const section = paper.section();
  paper.heading(
    section,
    1,
    one.name === null ? 'Pump settings' : `Pump settings, case ${cleanText(one.name)}`,
  );
  paper.paragraph(section, LEGEND, SMALL);
  paper.heading(section, 2, 'Targets');
  drawTable(paper, section, pump.targets, targetColumns(show), { size: 7.5 });
  paper.heading(section, 2, 'Settings');
  const columns: readonly Column<FoundTarget>[] = [
    ...settingColumns(one, 'pressure'),
    words('breaks', (target) => brokenRules(one, target) || 'no limit', 'wrap'),
    words('pump limits', (target) => limitsText(one, target), 'wrap'),
  ];
  drawTable(paper, section, pump.targets, columns, { size: 7.5 });
  for (const target of pump.targets) {
    const text = rangeText(network, target, show);
    if (text !== null) paper.paragraph(section, `${text}.`, BODY);
  }
  const curves = pump.targets.slice(0, MOST_CURVES).map((target) => pumpCurve(network, target, show));
  writeCurves(paper, section, curves);
  const more = pump.targets.length - MOST_CURVES;
  if (more > 0) paper.paragraph(section, `… and ${more} more targets, in the tables above.`, SMALL);
}

const LEGEND =
  'Each port is set either by a pressure source, which must hold the pressure at the far end of the tubing (at the port where there is none), or by a syringe pump, which must give the flow; both do the same. ' +
  'All targets are met together. Everything else in this report is computed at these settings. In the curves one port is turned and the others stay as found; a shaded band is a window, a dashed line a limit of the pump, the ring the setting found.';

const HEIGHT = 168;
const GAP = 16;

function writeCurves(paper: Paper, section: Element, curves: readonly PumpCurve[]): void {
  paper.heading(section, 2, 'Setting against target');
  const width = (paper.width - GAP) / 2;
  curves.forEach((curve, i) => {
    if (i % 2 === 0) paper.need(HEIGHT + 8);
    const x = paper.left + (i % 2) * (width + GAP);
    const [value, setting] = curve.found;
    const alt = `${curve.title}: ${curve.y.label} against ${curve.x.label}; found ${setting.toPrecision(5)} for ${value.toPrecision(5)}.`;
    paper.tagged(section, 'Figure', () => paintCurve(paper, curve, x, paper.y, width, HEIGHT), { alt });
    if (i % 2 === 1 || i === curves.length - 1) paper.y += HEIGHT + 8;
  });
}

const INK = '#222222';
const CURVE = '#1b4965';
const BAND = '#dcebd5';
const BAND_EDGE = '#5c8a48';
const LIMIT = '#b00020';
const TITLE: TextStyle = { size: 7, weight: 'bold' };
const LABEL: TextStyle = { size: 6.2 };
const MARGINS = { left: 40, right: 6, top: 13, bottom: 25 } as const;

function paintCurve(
  paper: Paper,
  curve: PumpCurve,
  x: number,
  y: number,
  width: number,
  height: number,
): void {
  const { doc } = paper;
  const left = x + MARGINS.left;
  const right = x + width - MARGINS.right;
  const top = y + MARGINS.top;
  const bottom = y + height - MARGINS.bottom;
  const toX = (value: number): number =>
    left + ((value - curve.x.low) / (curve.x.high - curve.x.low)) * (right - left);
  const toY = (setting: number): number =>
    bottom - ((setting - curve.y.low) / (curve.y.high - curve.y.low)) * (bottom - top);
  paper.put(paper.clip(curve.title, width, TITLE), x, y, TITLE);
  doc.save();
  doc.rect(left, top, right - left, bottom - top).clip();
  for (const { window } of curve.windows) {
    const from = window.min === null ? left : toX(window.min);
    const to = window.max === null ? right : toX(window.max);
    doc
      .rect(from, top, to - from, bottom - top)
      .fillOpacity(0.7)
      .fill(BAND)
      .fillOpacity(1);
    for (const end of [window.min, window.max]) {
      if (end === null) continue;
      doc.moveTo(toX(end), top).lineTo(toX(end), bottom).lineWidth(0.5).strokeColor(BAND_EDGE).stroke();
    }
  }
  for (const { at } of curve.limits) {
    doc
      .moveTo(left, toY(at))
      .lineTo(right, toY(at))
      .dash(3, { space: 2 })
      .lineWidth(0.7)
      .strokeColor(LIMIT)
      .stroke();
    doc.undash();
  }
  for (const run of curve.runs) {
    doc.moveTo(toX(run[0][0]), toY(run[0][1]));
    for (const [value, setting] of run.slice(1)) doc.lineTo(toX(value), toY(setting));
    doc.lineWidth(1.1).lineJoin('round').strokeColor(CURVE).stroke();
  }
  doc.restore();
  doc
    .rect(left, top, right - left, bottom - top)
    .lineWidth(0.5)
    .strokeColor(INK)
    .stroke();
  const [value, setting] = curve.found;
  if (Number.isFinite(value))
    doc.circle(toX(value), toY(setting), 2.6).lineWidth(1.1).strokeColor(INK).stroke();
  for (const { at, text } of curve.x.ticks) {
    doc
      .moveTo(toX(at), bottom)
      .lineTo(toX(at), bottom + 2.5)
      .lineWidth(0.5)
      .strokeColor(INK)
      .stroke();
    paper.put(text, toX(at) - paper.widthOf(text, LABEL) / 2, bottom + 3.2, LABEL);
  }
  for (const { at, text } of curve.y.ticks) {
    doc
      .moveTo(left - 2.5, toY(at))
      .lineTo(left, toY(at))
      .lineWidth(0.5)
      .strokeColor(INK)
      .stroke();
    paper.putRight(text, left - 4, toY(at) - 3.8, LABEL);
  }
  curve.windows.forEach(({ text }, i) => {
    const style = { ...LABEL, colour: BAND_EDGE };
    const { window } = curve.windows[i];
    const from = Math.max(left, window.min === null ? left : toX(window.min));
    paper.put(paper.clip(text, right - from - 6, style), from + 3, top + 2 + 8 * i, style);
  });
  for (const { at, text } of curve.limits) {
    const style = { ...LABEL, colour: LIMIT };
    // below its line where there is no room above
    const above = toY(at) - 8.2 > top;
    paper.putRight(text, right - 3, toY(at) + (above ? -8.2 : 1), style);
  }
  paper.put(
    curve.x.label,
    (left + right) / 2 - paper.widthOf(curve.x.label, LABEL) / 2,
    bottom + 12.5,
    LABEL,
  );
  doc.save();
  doc.rotate(-90, { origin: [x + 2, (top + bottom) / 2] });
  paper.put(curve.y.label, x + 2 - paper.widthOf(curve.y.label, LABEL) / 2, (top + bottom) / 2, LABEL);
  doc.restore();
}
