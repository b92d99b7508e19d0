import { formatMm } from '../../runsheet/shown.ts';
import { BODY, type PageContext, SMALL } from './context.ts';
import { cells, drawTable } from './table.ts';

/** Where to drill or punch: from the lower left corner of the chip edge, and in drawing coordinates. */
export function writeHoles({ paper, one, geometry }: PageContext): void {
  const { chip } = one.network;
  const section = paper.start('portrait', 120);
  paper.heading(section, 1, 'Holes');
  if (chip.ports.length === 0) {
    paper.paragraph(section, 'The layout has no holes.', BODY);
    return;
  }
  const corner = lowerLeft(chip.edge?.rings ?? [], geometry.bounds);
  paper.paragraph(
    section,
    `Seen from the channel side, as drawn. x to the right and y up from the lower left corner of ${chip.edge === null ? 'all that is drawn (there is no chip edge)' : `the rectangle round ${chip.edge.name}`}, ` +
      `which is ${formatMm(corner.x)}, ${formatMm(corner.y)} mm in the drawing; beside them the drawing's own coordinates, y down. Whoever works from the other side mirrors x.`,
    SMALL,
  );
  drawTable(
    paper,
    section,
    [
      { head: 'hole', align: 'left', width: 'share' },
      { head: 'x from corner', unit: 'mm', align: 'right', width: 'fit' },
      { head: 'y from corner', unit: 'mm', align: 'right', width: 'fit' },
      { head: 'diameter', unit: 'mm', align: 'right', width: 'fit' },
      { head: 'x in drawing', unit: 'mm', align: 'right', width: 'fit' },
      { head: 'y in drawing', unit: 'mm', align: 'right', width: 'fit' },
    ],
    one.part.ports.map((port) =>
      cells(
        port.name,
        formatMm(port.x_mm - corner.x),
        formatMm(corner.y - port.y_mm),
        formatMm(port.diameter_mm),
        formatMm(port.x_mm),
        formatMm(port.y_mm),
      ),
    ),
    { size: 7.5 },
  );
}

function lowerLeft(
  rings: readonly Float64Array[],
  bounds: { readonly x: number; readonly y: number; readonly height: number },
): { x: number; y: number } {
  if (rings.length === 0) return { x: bounds.x, y: bounds.y + bounds.height };
  let x = Number.POSITIVE_INFINITY;
  let y = Number.NEGATIVE_INFINITY;
  for (const ring of rings) {
    for (let i = 0; i < ring.length; i += 2) {
      x = Math.min(x, ring[i]);
      y = Math.max(y, ring[i + 1]);
    }
  }
  return { x, y };
}
