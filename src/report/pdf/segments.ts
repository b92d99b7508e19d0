import { formatMm, formatNumber, largestMagnitude, type Shown } from '../quantity.ts';
import type { SegmentRow } from '../result-schema.ts';
import { type PageContext, SMALL } from './context.ts';
import { type Column, drawTable, type TableRow } from './table.ts';

/** Above this the segments are in the CSV and JSON files only. */
export const SEGMENT_BOUND = 2000;

/** The table of segments, grouped by reach; over the bound a line that says where they are. */
export function writeSegments({ paper, one }: PageContext): void {
  const { network, part, show } = one;
  if (network.segmentCount === 0) return;
  if (network.segmentCount > SEGMENT_BOUND) {
    const section = paper.section();
    paper.heading(section, 2, 'Segments');
    paper.paragraph(
      section,
      `The ${network.segmentCount} segments are not printed: all are in the CSV (--formats csv) and JSON (--formats json) files.`,
      SMALL,
    );
    return;
  }
  paper.newPage('portrait');
  const section = paper.section();
  paper.heading(section, 1, 'Segments');
  paper.paragraph(
    section,
    'Straight pieces of the reaches, from → to. Places in drawing coordinates, mm, y down. Curves are cut into pieces whose summed length is within 1e-4 of theirs.',
    SMALL,
  );
  const rows = [...part.segments];
  const number = (
    head: string,
    shown: Shown,
    pick: (row: SegmentRow) => number | null,
  ): { column: Column; text: (row: SegmentRow) => string } => {
    const unit = show.unit(shown, largestMagnitude(rows.map(pick)));
    return {
      column: { head, unit: unit.text, align: 'right', width: 'fit' },
      text: (row) => {
        const value = pick(row);
        return value === null ? '–' : formatNumber(value / unit.si);
      },
    };
  };
  const place = (
    head: string,
    pick: (row: SegmentRow) => number,
  ): { column: Column; text: (row: SegmentRow) => string } => ({
    column: { head, unit: 'mm', align: 'right', width: 'fit' },
    text: (row) => formatMm(pick(row)),
  });
  const columns = [
    place('x₁', (row) => row.x1_mm),
    place('y₁', (row) => row.y1_mm),
    place('x₂', (row) => row.x2_mm),
    place('y₂', (row) => row.y2_mm),
    number('length', 'length', (row) => row.length_m),
    number('resistance', 'resistance', (row) => row.resistance_pa_s_m3),
    number('drop', 'pressure', (row) => row.pressure_drop_pa),
    number('floor mean', 'wall_shear', (row) => row.wall_shear_floor_mean_pa),
    number('floor peak', 'wall_shear', (row) => row.wall_shear_floor_peak_pa),
    number('time', 'residence_time', (row) => row.residence_time_s),
  ];
  const table: TableRow[] = rows.map((row) => ({
    kind: 'cells',
    cells: [row.name, ...columns.map(({ text }) => text(row))],
  }));
  drawTable(
    paper,
    section,
    [{ head: 'segment', align: 'left', width: 'share' }, ...columns.map(({ column }) => column)],
    table,
    { size: 6.2 },
  );
}
