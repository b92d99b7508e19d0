import { reachName } from '../network/names.ts';
import { known } from './known.ts';
import { drawMap, mapNotes } from './map.ts';
import { chipGeometry } from './map-geometry.ts';
import { MAP_QUANTITIES } from './map-quantities.ts';
import {
  FINDING_COLOUR,
  type MapDrawing,
  type MapLabel,
  type MapStroke,
  PALE_FILL,
  PALE_LINE,
} from './map-types.ts';
import { cleanText, displayWidth } from './plain-text.ts';
import { AT_FOUND_SETTINGS } from './pump-rows.ts';
import { quantityTexts } from './quantities.ts';
import type { MapQuantity } from './reach-values.ts';
import { ofCase, type ReportedCase } from './report.ts';
import { portQuantity, reachQuantity } from './result-schema.ts';
import { verdictLine } from './verdict-line.ts';

export interface SvgOptions {
  readonly quantity: MapQuantity;
}

/** Width of the picture; its height follows the chip. */
const WIDTH_MM = 240;
const LABEL_MM = 2.4;

/**
 * The layout redrawn to scale and coloured by a quantity, as SVG text: numbers of a reach in its title (shown on hover), numbered
 * markers at findings, legend and scale bar. Holds geometry and escaped names, nothing else of the input: no script, link, style
 * sheet or id.
 */
export function svgPicture(one: ReportedCase, options: SvgOptions): string {
  const geometry = chipGeometry(one.network.chip);
  const drawing = drawMap(one, geometry, {
    quantity: options.quantity,
    widthMm: WIDTH_MM,
    heightMm: WIDTH_MM,
    labelSizeMm: LABEL_MM,
    // the viewer's font is unknown: a generous average
    measure: (text, sizeMm) => 0.64 * sizeMm * displayWidth(text),
    readable: cleanText,
    findingNumbers: true,
    reachLabels: true,
  });
  const file = cleanText(one.network.chip.file);
  const title = [
    ofCase(file, one),
    `: ${MAP_QUANTITIES[options.quantity].title}`,
    one.pump === undefined ? '' : `, ${AT_FOUND_SETTINGS}`,
  ].join('');
  const foundText = one.pump === undefined ? '' : ` Computed ${AT_FOUND_SETTINGS}.`;
  const height = drawing.heightMm + 2 * LABEL_MM;
  return [
    '<?xml version="1.0" encoding="UTF-8"?>\n',
    `<svg xmlns="http://www.w3.org/2000/svg" width="${mm(drawing.widthMm)}mm" height="${mm(height)}mm" viewBox="0 0 ${mm(drawing.widthMm)} ${mm(height)}" font-family="DejaVu Sans, Verdana, sans-serif" font-size="${LABEL_MM}">\n`,
    `<title>${escapeXml(title)}</title>\n`,
    `<desc>${escapeXml(`${verdictLine(one.part.verdict, one.part.counts)}. ${mapNotes(drawing)}`)}</desc>\n`,
    `<rect width="${mm(drawing.widthMm)}" height="${mm(height)}" fill="#ffffff"/>\n`,
    ...outline(drawing.unread.under, `fill="none" stroke="${PALE_LINE}" stroke-width="0.2"`),
    ...edge(drawing),
    ...ground(drawing),
    ...reaches(drawing, one),
    ...outline(
      drawing.unread.over,
      `fill="${PALE_FILL}" fill-rule="evenodd" stroke="${PALE_LINE}" stroke-width="0.15"`,
    ),
    ...holes(drawing, one),
    ...labels(drawing, one),
    ...foot(drawing),
    `<text x="${mm(LABEL_MM)}" y="${mm(height - 0.8 * LABEL_MM)}">${escapeXml(`${file}. ${drawing.caption}${foundText}`)}</text>\n`,
    '</svg>\n',
  ].join('');
}

function edge({ edge: rings }: MapDrawing): string[] {
  return rings.flatMap((ring) => outline([ring], 'fill="none" stroke="#606060" stroke-width="0.25"'));
}

/** Lines or rings as one path; nothing for none. */
function outline(lines: readonly (readonly number[])[], look: string): string[] {
  return lines.length === 0 ? [] : [`<path d="${lines.map(pathData).join('')}" ${look}/>\n`];
}

function ground({ ground: strokes }: MapDrawing): string[] {
  return strokeGroup(strokes.map((stroke) => `${strokePath(stroke)}\n`));
}

function strokeGroup(paths: readonly string[]): string[] {
  return ['<g fill="none" stroke-linejoin="round">\n', ...paths, '</g>\n'];
}

function reaches(drawing: MapDrawing, one: ReportedCase): string[] {
  const title = drawing.reaches.length > LONG_TITLES ? shortTitle : reachTitle;
  const paths = drawing.reaches.map(({ reach, strokes }) => {
    const hover = `<title>${escapeXml(title(one, reach))}</title>`;
    return strokes.length === 1
      ? `${strokePath(strokes[0], hover)}\n`
      : `<g>${hover}${strokes.map((stroke) => strokePath(stroke)).join('')}</g>\n`;
  });
  return strokeGroup(paths);
}

/** Above this many reaches their titles hold what fits a line, to keep the picture openable. */
const LONG_TITLES = 10_000;

function shortTitle({ network, flow, show }: ReportedCase, reach: number): string {
  const [flowM3s, dropPa] = [known(flow.reachFlow[reach]), known(flow.reachPressureDrop[reach])];
  return `${cleanText(reachName(network, reach))}: ${show.text('flow', flowM3s)}, ${show.text('pressure', dropPa)}`;
}

/** What hovering over a reach shows: its numbers, a line each. */
function reachTitle({ part, show }: ReportedCase, reach: number): string {
  const row = part.reaches.at(reach);
  const text = quantityTexts(reachQuantity, row, show);
  return [
    `${cleanText(row.name)} (${cleanText(row.from)} → ${cleanText(row.to)})`,
    `flow ${text('flow_m3_s')}`,
    `pressure drop ${text('pressure_drop_pa')}`,
    `floor shear ${text('wall_shear_floor_mean_pa')} mean, ${text('wall_shear_floor_peak_pa')} peak`,
    `residence ${text('residence_time_s')} mean, ${text('fastest_time_s')} fastest`,
    `${text('width_m')} wide, ${text('depth_m')} deep, ${text('length_m')} long`,
  ].join('\n');
}

function holes({ holes: wells }: MapDrawing, { part, show }: ReportedCase): string[] {
  return wells.map(({ name, x, y, radiusMm }, i) => {
    const text = quantityTexts(portQuantity, part.ports[i], show);
    const title = `${cleanText(name)} (${part.ports[i].condition})\npressure ${text('pressure_pa')}\nflow into the chip ${text('flow_m3_s')}`;
    return `<circle cx="${mm(x)}" cy="${mm(y)}" r="${mm(radiusMm)}" fill="#ffffff" stroke="#202020" stroke-width="0.3"><title>${escapeXml(title)}</title></circle>\n`;
  });
}

function labels({ labels: placed, markers }: MapDrawing, { part }: ReportedCase): string[] {
  return [
    ...markers.map(({ number, x, y }) => {
      const { rule, message } = part.findings[number - 1];
      return `<circle cx="${mm(x)}" cy="${mm(y)}" r="0.7" fill="#ffffff" stroke="${FINDING_COLOUR}" stroke-width="0.4"><title>${escapeXml(`${number} ${rule}: ${cleanText(message)}`)}</title></circle>\n`;
    }),
    ...placed.map(label),
  ];
}

function label({ kind, text, box, sizeMm, leader }: MapLabel): string {
  const line =
    leader === null
      ? ''
      : `<path d="${pathData(leader)}" stroke="${kind === 'finding' ? FINDING_COLOUR : '#505050'}" stroke-width="0.15" fill="none"/>`;
  const frame =
    kind === 'finding'
      ? `<rect x="${mm(box.x)}" y="${mm(box.y)}" width="${mm(box.width)}" height="${mm(box.height)}" rx="0.6" fill="#ffffff" stroke="${FINDING_COLOUR}" stroke-width="0.3"/>`
      : '';
  const weight = kind === 'reach' ? '' : ' font-weight="bold"';
  const x = mm(box.x + box.width / 2);
  const y = mm(box.y + box.height / 2 + 0.36 * sizeMm);
  return `${line}${frame}<text x="${x}" y="${y}" text-anchor="middle"${weight}>${escapeXml(valueKept(text))}</text>\n`;
}

/** A left-to-right mark before the value: else a browser moves it to the far side of a right-to-left name. */
function valueKept(text: string): string {
  return /[\p{Script=Hebrew}\p{Script=Arabic}\p{Script=Syriac}\p{Script=Thaana}\p{Script=Nko}]/u.test(text)
    ? text.replace(/ (?=-?\d\S*(?: \S+)?$)/, '\u200E ')
    : text;
}

function foot({ legend, scaleBar }: MapDrawing): string[] {
  const { x, y, lengthMm, text, sizeMm } = scaleBar;
  const bar = `<path d="M${mm(x)} ${mm(y - 0.6)}V${mm(y + 0.6)}M${mm(x)} ${mm(y)}H${mm(x + lengthMm)}M${mm(x + lengthMm)} ${mm(y - 0.6)}V${mm(y + 0.6)}" fill="none" stroke="#000000" stroke-width="0.4"/><text x="${mm(x + lengthMm / 2)}" y="${mm(y + 0.6 + 1.1 * sizeMm)}" text-anchor="middle">${escapeXml(text)}</text>\n`;
  if (legend === null) return [bar];
  const step = legend.bar.width / legend.colours.length;
  const { bar: box } = legend;
  return [
    bar,
    `<text x="${mm(legend.titleAt[0])}" y="${mm(legend.titleAt[1] + sizeMm)}">${escapeXml(legend.title)}</text>\n`,
    ...legend.colours.map(
      (colour, i) =>
        `<rect x="${mm(box.x + i * step)}" y="${mm(box.y)}" width="${mm(step + 0.1)}" height="${mm(box.height)}" fill="${colour}"/>`,
    ),
    ...legend.ticks.map(
      ({ x: tickX, text: tick }) =>
        `<path d="M${mm(tickX)} ${mm(box.y + box.height)}v0.6" stroke="#000000" stroke-width="0.2"/><text x="${mm(tickX)}" y="${mm(box.y + box.height + 0.6 + sizeMm)}" text-anchor="middle">${escapeXml(tick)}</text>`,
    ),
    '\n',
  ];
}

function strokePath({ points, widthMm, colour, cap }: MapStroke, inner = ''): string {
  const ends = cap === 'butt' ? '' : ` stroke-linecap="${cap}"`;
  const tail = inner === '' ? '/>' : `>${inner}</path>`;
  return `<path d="${pathData(points)}" stroke="${colour}" stroke-width="${mm(widthMm)}"${ends}${tail}`;
}

function pathData(points: readonly number[]): string {
  let data = '';
  for (let i = 0; i < points.length; i += 2)
    data += `${i === 0 ? 'M' : 'L'}${mm(points[i])} ${mm(points[i + 1])}`;
  return data;
}

/** Thousandths of a millimetre are finer than any screen; no −0. */
function mm(value: number): string {
  const rounded = Math.round(value * 1000) / 1000;
  return rounded === 0 ? '0' : String(rounded);
}

/** Text for an element or an attribute in double quotes; what XML 1.0 can't hold becomes the replacement character. */
export function escapeXml(text: string): string {
  return text
    .replace(/[^\t\n\r\u0020-\uD7FF\uE000-\uFFFD\u{10000}-\u{10FFFF}]/gu, '\uFFFD')
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#39;');
}
