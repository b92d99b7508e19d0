import { countText } from '../../findings/words.ts';
import { drawMap } from '../map.ts';
import type { PageContext } from './context.ts';
import { writeMap } from './paint-map.ts';
import { POINTS_PER_MM } from './paper.ts';
import type { Section } from './section.ts';

/** The chip coloured by pressure, between here and `below` points above the foot of the page. */
export function writePressureMap(
  { paper, one, geometry, measure, readable }: PageContext,
  section: Section,
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
  const alt = `The chip as drawn, ${countText(counts.channels, 'channel')} coloured by pressure, ${countText(counts.ports, 'port')} named; the numbers are in the tables.`;
  const numbers = drawing.markers.length === 0 ? '' : ' Numbers are those of the findings.';
  writeMap(section, drawing, alt, numbers);
}
