import { drawMap, QUANTITY_TITLES } from '../map.ts';
import { plural } from '../verdict-line.ts';
import { type PageContext, SMALL } from './context.ts';
import { paintMap } from './paint-map.ts';
import { POINTS_PER_MM } from './paper.ts';

/** Maps of wall shear, flow and residence time, as many on a page as fit. */
export function writeMaps({ paper, one, geometry, measure, readable }: PageContext): void {
  paper.newPage('portrait');
  const section = paper.section();
  paper.heading(section, 1, 'Maps');
  for (const quantity of ['shear', 'flow', 'residence'] as const) {
    const drawing = drawMap(one, geometry, {
      quantity,
      widthMm: paper.width / POINTS_PER_MM,
      heightMm: 215,
      labelSizeMm: 2,
      measure,
      readable,
      findingNumbers: false,
      reachLabels: true,
    });
    const height = drawing.heightMm * POINTS_PER_MM;
    paper.need(height + 50);
    const title = QUANTITY_TITLES[quantity];
    paper.heading(section, 2, `${title[0].toUpperCase()}${title.slice(1)}`);
    paintMap(
      paper,
      section,
      drawing,
      paper.left,
      paper.y,
      `The chip as drawn, coloured by ${title}; the numbers are in the table of reaches.`,
    );
    paper.y += height;
    const left =
      drawing.unlabelled === 0
        ? ''
        : ` ${plural(drawing.unlabelled, 'reach').replace('reachs', 'reaches')} found no room for a label: see the table.`;
    paper.paragraph(
      section,
      `${drawing.caption} Numbers beside names are in the legend's unit.${left}`,
      SMALL,
    );
    paper.y += 8;
  }
}
