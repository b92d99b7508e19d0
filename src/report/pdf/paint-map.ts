import { grouped } from '../../by-key.ts';
import { mapNotes } from '../map.ts';
import {
  FINDING_COLOUR,
  type MapDrawing,
  type MapLabel,
  type MapStroke,
  PALE_FILL,
  PALE_LINE,
  type Picture,
  type ScaleBar,
} from '../map-types.ts';
import { SMALL } from './context.ts';
import { type Paper, POINTS_PER_MM } from './paper.ts';
import type { Section } from './section.ts';
import { trace } from './trace.ts';

/** Paints a map over the page's width as a tagged figure, what must be said of it below; its texts were measured in the paper's font. */
export function writeMap(section: Section, drawing: MapDrawing, alt: string, more = ''): void {
  const { paper } = section;
  const { left: x, y } = paper;
  const paint = (): void => {
    inMillimetres(paper, x, y, () => {
      paintUnread(paper, drawing);
      paintEdge(paper, drawing, 0.2);
      paintStrokes(paper, drawing.ground);
      paintStrokes(
        paper,
        drawing.reaches.flatMap(({ strokes }) => strokes),
      );
      paintObstacles(paper, drawing);
      paintHoles(paper, drawing);
      paintMarkers(paper, drawing);
      paintLegend(paper, drawing);
      paintScaleBar(paper, drawing.scaleBar);
    });
    for (const label of drawing.labels) paintLabel(paper, label, x, y);
    paintScaleText(paper, drawing.scaleBar, x, y, 0.8);
    paintLegendTexts(paper, drawing, x, y);
  };
  section.figure(alt, paint);
  paper.y += drawing.heightMm * POINTS_PER_MM;
  section.paragraph(`${mapNotes(drawing)}${more}`, SMALL);
}

/** Runs `paint` with the unit 1 mm and the origin at x, y. */
export function inMillimetres(paper: Paper, x: number, y: number, paint: () => void): void {
  paper.doc.save();
  paper.doc.translate(x, y).scale(POINTS_PER_MM);
  paint();
  paper.doc.restore();
}

export function paintEdge({ doc }: Paper, { edge }: Picture, lineWidth: number): void {
  for (const ring of edge) {
    trace(doc, ring);
    doc.lineWidth(lineWidth).stroke('#606060');
  }
}

function paintUnread({ doc }: Paper, { unread }: MapDrawing): void {
  if (unread.under.length === 0) return;
  for (const line of unread.under) trace(doc, line);
  doc.lineWidth(0.15).stroke(PALE_LINE);
}

function paintObstacles({ doc }: Paper, { unread }: MapDrawing): void {
  if (unread.over.length === 0) return;
  for (const ring of unread.over) trace(doc, ring);
  doc.lineWidth(0.12).fillAndStroke(PALE_FILL, PALE_LINE, 'even-odd');
}

/** Strokes of one look are painted in one go: 100 000 of them are a few dozen paint operations. */
export function paintStrokes({ doc }: Paper, strokes: readonly MapStroke[]): void {
  const looks = grouped(strokes, ({ colour, widthMm, cap }) => `${colour} ${widthMm} ${cap}`);
  doc.lineJoin('round');
  for (const same of looks.values()) {
    for (const { points } of same) trace(doc, points);
    const [{ widthMm, colour, cap }] = same;
    doc.lineCap(cap).lineWidth(widthMm).stroke(colour);
  }
  doc.lineCap('butt');
}

function paintHoles({ doc }: Paper, { holes }: MapDrawing): void {
  for (const { x, y, radiusMm } of holes) {
    doc.circle(x, y, Math.max(radiusMm, 0.3)).lineWidth(0.25).fillAndStroke('#ffffff', '#202020');
  }
}

function paintMarkers({ doc }: Paper, { markers }: MapDrawing): void {
  for (const { x, y } of markers)
    doc.circle(x, y, 0.55).lineWidth(0.3).fillAndStroke('#ffffff', FINDING_COLOUR);
}

export function paintLabel(
  paper: Paper,
  { kind, text, box, sizeMm, leader }: MapLabel,
  x: number,
  y: number,
): void {
  inMillimetres(paper, x, y, () => {
    if (leader !== null) {
      trace(paper.doc, leader);
      paper.doc.lineWidth(0.12).stroke(kind === 'finding' ? FINDING_COLOUR : '#505050');
    }
    if (kind === 'finding') {
      paper.doc
        .roundedRect(box.x, box.y, box.width, box.height, 0.5)
        .lineWidth(0.25)
        .fillAndStroke('#ffffff', FINDING_COLOUR);
    }
  });
  const style = { size: sizeMm * POINTS_PER_MM, weight: kind === 'reach' ? 'regular' : 'bold' } as const;
  const left = x + (box.x + box.width / 2) * POINTS_PER_MM - paper.widthOf(text, style) / 2;
  paper.put(text, left, y + (box.y + (box.height - 1.17 * sizeMm) / 2) * POINTS_PER_MM, style);
}

function paintLegend({ doc }: Paper, { legend }: MapDrawing): void {
  if (legend === null) return;
  const { bar, colours, ticks } = legend;
  const step = bar.width / colours.length;
  colours.forEach((colour, i) => {
    doc.rect(bar.x + i * step, bar.y, step + (i + 1 < colours.length ? 0.1 : 0), bar.height).fill(colour);
  });
  for (const { x } of ticks) trace(doc, [x, bar.y + bar.height, x, bar.y + bar.height + 0.6]);
  doc.lineWidth(0.15).stroke('#000000');
}

export function paintScaleBar({ doc }: Paper, { x, y, lengthMm }: ScaleBar): void {
  trace(doc, [x, y - 0.6, x, y + 0.6]);
  trace(doc, [x, y, x + lengthMm, y]);
  trace(doc, [x + lengthMm, y - 0.6, x + lengthMm, y + 0.6]);
  doc.lineWidth(0.35).stroke('#000000');
}

/** The length of a scale bar, so far below it. */
export function paintScaleText(
  paper: Paper,
  { x: left, y: top, lengthMm, text, sizeMm }: ScaleBar,
  x: number,
  y: number,
  belowMm: number,
): void {
  const centre = x + (left + lengthMm / 2) * POINTS_PER_MM;
  paper.putCentred(text, centre, y + (top + belowMm) * POINTS_PER_MM, { size: sizeMm * POINTS_PER_MM });
}

function paintLegendTexts(paper: Paper, { legend }: MapDrawing, x: number, y: number): void {
  if (legend === null) return;
  const { bar, sizeMm, titleAt } = legend;
  const style = { size: sizeMm * POINTS_PER_MM };
  const [left, top] = [titleAt[0], titleAt[1] - 0.1 * sizeMm];
  paper.put(legend.title, x + left * POINTS_PER_MM, y + top * POINTS_PER_MM, style);
  const below = y + (bar.y + bar.height + 0.7) * POINTS_PER_MM;
  for (const tick of legend.ticks) paper.putCentred(tick.text, x + tick.x * POINTS_PER_MM, below, style);
}
