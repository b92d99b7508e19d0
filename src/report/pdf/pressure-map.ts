import { drawMap, mapNotes } from '../map.ts';
import { plural } from '../verdict-line.ts';
import { type PageContext, SMALL } from './context.ts';
import { paintMap } from './paint-map.ts';
import { type Element, POINTS_PER_MM } from './paper.ts';

/** The chip coloured by pressure, between here and `below` points above the foot of the page. */
export function writePressureMap(
  { paper, one, geometry, measure, readable }: PageContext,
  section: Element,
  below: number,
): void {
  const room = paper.bottom - below - paper.y - 90;
  const drawing = drawMap(one, geometry, {
    quantity: 'pressure',
    widthMm: paper.width / POINTS_PER_MM,
    heightMm: Math.max(60, Math.min(room / POINTS_PER_MM, 130)),
    labelSizeMm: 2.1,
    measure,
    readable,
    findingNumbers: true,
    reachLabels: false,
  });
  const counts = one.part.counts;
  const alt = `The chip as drawn, ${plural(counts.channels, 'channel')} coloured by pressure, ${plural(counts.ports, 'port')} named; the numbers are in the tables.`;
  paintMap(paper, section, drawing, paper.left, paper.y, alt);
  paper.y += drawing.heightMm * POINTS_PER_MM;
  const numbers = drawing.markers.length === 0 ? '' : ' Numbers are those of the findings.';
  paper.paragraph(section, `${mapNotes(drawing)}${numbers}`, SMALL);
}
