import { drawMap } from '../map.ts';
import { MAP_QUANTITIES } from '../map-quantities.ts';
import { type PageContext, SMALL } from './context.ts';
import { writeMap } from './paint-map.ts';
import { POINTS_PER_MM } from './paper.ts';
import { chapter } from './section.ts';

const TEXT_POINTS = 44;

/** Maps of wall shear, flow and residence time, as many on a page as fit: three of a wide chip, one of a tall one. */
export function writeMaps({ paper, one, geometry, measure, readable }: PageContext): void {
  const section = chapter(paper, 'Maps', 'portrait');
  section.paragraph("Numbers beside names are in the legend's unit; all are in the tables.", SMALL);
  const heightMm = mapHeightMm(paper.bottom - paper.y, paper.width, geometry.bounds);
  for (const quantity of ['shear', 'flow', 'residence'] as const) {
    const drawing = drawMap(one, geometry, {
      quantity,
      widthMm: paper.width / POINTS_PER_MM,
      heightMm,
      labelSizeMm: 2,
      measure,
      readable,
      findingNumbers: false,
      reachLabels: true,
    });
    paper.need(drawing.heightMm * POINTS_PER_MM + TEXT_POINTS - 2);
    const { title } = MAP_QUANTITIES[quantity];
    section.heading(2, `${title[0].toUpperCase()}${title.slice(1)}`);
    writeMap(
      section,
      drawing,
      `The chip as drawn, coloured by ${title}; the numbers are in the table of reaches.`,
    );
    paper.y += 3;
  }
}

/** Height of one map: a third of the page, half of it or all, whatever costs a chip of this shape little of its size. */
function mapHeightMm(
  room: number,
  width: number,
  bounds: { readonly width: number; readonly height: number },
): number {
  const natural = (width * bounds.height) / bounds.width / POINTS_PER_MM + 16;
  const each = [3, 2, 1].map((maps) => (room / maps - TEXT_POINTS) / POINTS_PER_MM);
  return each.find((height) => height >= 0.8 * natural) ?? each[2];
}
