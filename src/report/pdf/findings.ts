import type { Finding } from '../../findings/types.ts';
import { countText } from '../../findings/words.ts';
import { formatMm, measureText } from '../../runsheet/shown.ts';
import { figures, words } from '../columns.ts';
import { FINDING_COLOUR } from '../map-types.ts';
import { drawPlace, type PlaceDrawing } from '../place.ts';
import { joined } from '../plain-text.ts';
import { verdictLine } from '../verdict-line.ts';
import { BODY, BODY_BOLD, type PageContext, SMALL } from './context.ts';
import {
  inMillimetres,
  paintEdge,
  paintLabel,
  paintScaleBar,
  paintScaleText,
  paintStrokes,
} from './paint-map.ts';
import { lineHeight, type Paper, POINTS_PER_MM } from './paper.ts';
import { chapter, type Section } from './section.ts';
import { trace } from './trace.ts';

/** Findings with a picture each, then as lines of a table, then only counted. */
const PICTURES = 120;
const LINES = 1000;
const PICTURE_MM = { width: 58, height: 40 } as const;

/** Every finding with its number, what, where and how to mend it, and its place to scale; then the rules that were not run. */
export function writeFindings(context: PageContext): void {
  const { paper, one } = context;
  const { findings, notRun } = one.findings;
  const section = chapter(paper, 'Findings', 'portrait');
  section.paragraph(
    `${verdictLine(one.part.verdict, one.part.counts)}. Numbers are those on the map of ${one.name === null ? 'page 1' : 'this case'}; places are in drawing coordinates, mm, y down.`,
    SMALL,
  );
  paper.y += 4;
  if (findings.length === 0) section.paragraph('No finding.');
  findings.slice(0, PICTURES).forEach((finding, i) => {
    writeFinding(context, section, finding, i + 1);
  });
  writeFurther(context, section, findings.slice(PICTURES, PICTURES + LINES));
  const left = findings.length - PICTURES - LINES;
  if (left > 0) section.paragraph(`… and ${countText(left, 'more finding')}, all in the JSON result.`);
  writeNotRun(context, section, notRun);
}

const COLOURS = { blocker: '#8f1414', caution: '#7a5200', note: '#1f4e79' } as const;
const ACCEPTED_COLOUR = '#555555';

function writeFinding(context: PageContext, section: Section, finding: Finding, number: number): void {
  const { paper, one, geometry, measure, readable } = context;
  const measured =
    finding.measured === null ? null : measureText(one.show, finding.measured, finding.unit, finding.rule);
  const picture = drawPlace(geometry, finding, {
    widthMm: PICTURE_MM.width,
    heightMm: PICTURE_MM.height,
    labelSizeMm: 2,
    measure,
    readable,
    measured: finding.mark === undefined ? null : measured,
  });
  const pictureWidth = picture === null ? 0 : PICTURE_MM.width * POINTS_PER_MM + 10;
  const textX = paper.left + 22;
  const textWidth = paper.width - 22 - pictureWidth;
  const paragraphs = findingTexts(context, finding, measured);
  const textHeight = paragraphs.reduce(
    (sum, text) => sum + paper.wrap(text, textWidth, BODY).length * lineHeight(BODY) + 2,
    lineHeight(BODY_BOLD) + 3,
  );
  const height = Math.max(textHeight, picture === null ? 0 : PICTURE_MM.height * POINTS_PER_MM + 2);
  // a text longer than a page runs over; anything else stays together
  paper.need(Math.min(height + 6, paper.bottom - paper.top));
  const top = paper.y;
  const colour = finding.accepted === null ? COLOURS[finding.severity] : ACCEPTED_COLOUR;
  paper.decoration(() => {
    paper.doc.roundedRect(paper.left, top, 17, 12, 2).fill(colour);
  });
  paper.tagged(section.element, 'H2', () => {
    const badge = { size: 7.5, weight: 'bold', colour: '#ffffff' } as const;
    const text = String(number);
    paper.put(text, paper.left + 8.5 - paper.widthOf(text, badge) / 2, top + 1.3, badge);
    const title = `${finding.accepted === null ? finding.severity : `accepted ${finding.severity}`}: ${finding.rule}`;
    const style = { ...BODY_BOLD, colour };
    paper.put(paper.clip(title, textWidth, style), textX, top + 1.3, style);
  });
  paper.y = top + lineHeight(BODY_BOLD) + 3;
  for (const text of paragraphs) section.paragraph(text, BODY, { x: textX, width: textWidth });
  const end = paper.y;
  if (picture !== null && end > top) {
    const left = paper.right - PICTURE_MM.width * POINTS_PER_MM;
    section.figure(`Close-up of the place of finding ${number}`, () => paintPlace(paper, picture, left, top));
  }
  paper.y = Math.max(end, end > top ? top + height : end) + 6;
}

function findingTexts({ one }: PageContext, finding: Finding, measured: string | null): string[] {
  const { accepted, xMm, yMm, limit, unit, rule } = finding;
  const place = xMm === null || yMm === null ? null : `at ${formatMm(xMm)}, ${formatMm(yMm)} mm`;
  const names = finding.names.length === 0 ? null : `concerns ${finding.names.join(', ')}`;
  const value = (measure: number): string => measureText(one.show, measure, unit, rule);
  const ceiling = accepted === null || accepted.upTo === null ? '' : `, up to ${value(accepted.upTo)}`;
  return [
    finding.message,
    joined(
      [place, names, measured && `measured ${measured}`, limit === null ? null : `limit ${value(limit)}`],
      '; ',
    ),
    finding.fix === '' ? '' : `To put it right: ${finding.fix}`,
    accepted === null
      ? ''
      : `Accepted by ${accepted.by} on ${accepted.on}${ceiling}, because ${accepted.because}`,
  ].filter((text) => text !== '');
}

function paintPlace(paper: Paper, picture: PlaceDrawing, x: number, y: number): void {
  const { doc } = paper;
  inMillimetres(paper, x, y, () => {
    doc.save();
    doc.rect(0, 0, picture.widthMm, picture.viewHeightMm).clip();
    paintEdge(paper, picture, 0.3);
    paintStrokes(paper, picture.strokes);
    for (const hole of picture.holes)
      doc.circle(hole.x, hole.y, hole.radiusMm).lineWidth(0.3).fillAndStroke('#ffffff', '#202020');
    paintMark(doc, picture);
    doc.restore();
    paintScaleBar(paper, picture.scaleBar);
    doc.rect(0, 0, picture.widthMm, picture.viewHeightMm).lineWidth(0.2).stroke('#888888');
  });
  for (const label of picture.labels) paintLabel(paper, label, x, y);
  paintScaleText(paper, picture.scaleBar, x, y, 0.7);
}

function paintMark(doc: PDFKit.PDFDocument, { mark, cross: [x, y] }: PlaceDrawing): void {
  if (mark === null) {
    doc.circle(x, y, 1.1).lineWidth(0.35).stroke(FINDING_COLOUR);
    trace(doc, [x - 1.8, y, x + 1.8, y]);
    trace(doc, [x, y - 1.8, x, y + 1.8]);
    doc.lineWidth(0.2).stroke(FINDING_COLOUR);
    return;
  }
  const [x1, y1, x2, y2] = mark;
  const length = Math.hypot(x2 - x1, y2 - y1) || 1;
  const [nx, ny] = [(-(y2 - y1) / length) * 1.2, ((x2 - x1) / length) * 1.2];
  trace(doc, mark);
  trace(doc, [x1 - nx, y1 - ny, x1 + nx, y1 + ny]);
  trace(doc, [x2 - nx, y2 - ny, x2 + nx, y2 + ny]);
  doc.lineWidth(0.35).stroke(FINDING_COLOUR);
}

function writeFurther({ one }: PageContext, section: Section, findings: readonly Finding[]): void {
  if (findings.length === 0) return;
  section.heading(2, 'Further findings');
  section.table(
    findings.map((finding, i) => ({ number: PICTURES + i + 1, finding })),
    [
      figures('no.', ({ number }) => String(number)),
      words('severity', ({ finding }) => (finding.accepted === null ? finding.severity : 'accepted')),
      words('rule', ({ finding }) => finding.rule),
      figures('x', ({ finding: { xMm } }) => (xMm === null ? '–' : formatMm(xMm)), 'mm'),
      figures('y', ({ finding: { yMm } }) => (yMm === null ? '–' : formatMm(yMm)), 'mm'),
      figures('measured', ({ finding: { measured, unit, rule } }) =>
        measureText(one.show, measured, unit, rule),
      ),
      words('what', ({ finding }) => finding.message, 'share'),
    ],
    { size: 6.5 },
  );
}

function writeNotRun(
  { paper }: PageContext,
  section: Section,
  notRun: readonly { readonly rule: string; readonly why: string }[],
): void {
  if (notRun.length === 0) return;
  paper.y += 4;
  section.heading(2, 'Rules not run');
  section.table(notRun, [words('rule', ({ rule }) => rule), words('why', ({ why }) => why, 'wrap')]);
}
