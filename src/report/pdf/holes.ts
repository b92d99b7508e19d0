import { formatMm } from '../../runsheet/shown.ts';
import { words } from '../columns.ts';
import { quantityColumns } from '../quantities.ts';
import { portQuantity } from '../result-schema.ts';
import { type PageContext, SMALL } from './context.ts';
import { chapter } from './section.ts';

/** Where to drill or punch: from the lower left corner of the chip edge, and in drawing coordinates. */
export function writeHoles({ paper, one, geometry }: PageContext): void {
  const { chip } = one.network;
  const section = chapter(paper, 'Holes', 'portrait', 120);
  if (chip.ports.length === 0) {
    section.paragraph('The layout has no holes.');
    return;
  }
  const corner = lowerLeft(chip.edge?.rings ?? [], geometry.bounds);
  section.paragraph(
    `Seen from the channel side, as drawn. x to the right and y up from the lower left corner of ${chip.edge === null ? 'all that is drawn (there is no chip edge)' : `the rectangle round ${chip.edge.name}`}, ` +
      `which is ${formatMm(corner.x)}, ${formatMm(corner.y)} mm in the drawing; beside them the drawing's own coordinates, y down. Whoever works from the other side mirrors x.`,
    SMALL,
  );
  const { ports } = one.part;
  const columns = quantityColumns(portQuantity, ports, one.show);
  section.table(
    ports,
    [
      words('hole', ({ name }) => name, 'share'),
      ...columns(
        { key: 'x_mm', head: 'x from corner', value: ({ x_mm }) => x_mm - corner.x },
        { key: 'y_mm', head: 'y from corner', value: ({ y_mm }) => corner.y - y_mm },
        'diameter_mm',
        'x_mm',
        'y_mm',
      ),
    ],
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
