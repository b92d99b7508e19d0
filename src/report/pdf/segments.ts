import { formatMm } from '../../runsheet/shown.ts';
import { figures, words } from '../columns.ts';
import { quantityColumns } from '../quantities.ts';
import type { ReportedCase } from '../report.ts';
import type { SegmentRow } from '../result-rows.ts';
import { segmentQuantity } from '../result-schema.ts';
import { type PageContext, SMALL } from './context.ts';
import { chapter, Section } from './section.ts';

/** Above this the segments are in the CSV and JSON files only. */
const SEGMENT_BOUND = 2000;

/** The table of segments, the chords of one curve in one row; over the bound a line that says where they are. */
export function writeSegments({ paper, one }: PageContext): void {
  const { network } = one;
  if (network.segmentCount === 0) return;
  if (network.segmentCount > SEGMENT_BOUND) {
    const section = new Section(paper);
    section.heading(2, 'Segments');
    section.paragraph(
      `The ${network.segmentCount} segments are not printed: all are in the CSV (--formats csv) and JSON (--formats json) files.`,
      SMALL,
    );
    return;
  }
  const section = chapter(paper, 'Segments', 'landscape', 150);
  section.paragraph(LEGEND, SMALL);
  const rows = printedRows(one);
  const columns = quantityColumns(segmentQuantity, rows, one.show);
  section.table(
    rows,
    [
      words('segment', ({ name }) => name, 'share'),
      ...columns('x1_mm', 'y1_mm', 'x2_mm', 'y2_mm'),
      figures('tightest bend', ({ bendMm }) => (bendMm === 0 ? '–' : formatMm(bendMm)), 'mm'),
      ...columns('length_m'),
      ...columns('resistance_pa_s_m3'),
      ...columns('pressure_drop_pa'),
      ...columns('wall_shear_floor_mean_pa'),
      ...columns('wall_shear_floor_peak_pa'),
      ...columns('residence_time_s'),
    ],
    { size: 6.5 },
  );
}

const LEGEND =
  'Straight pieces of the reaches, from → to. Places in drawing coordinates, mm, y down. A curve is cut into straight pieces whose summed length is within 1e-4 ' +
  'of its own; they stand together in one row, with the sums of their lengths, resistances, drops and times, and one by one in the CSV file. ' +
  'What a joint adds to its reach belongs to none of its segments.';

/** One straight segment, or the pieces of one curve together. */
interface Printed extends SegmentRow {
  /** 0 for a straight piece. */
  readonly bendMm: number;
}

function printedRows({ network, part }: ReportedCase): Printed[] {
  const printed: Printed[] = [];
  for (let segment = 0; segment < network.segmentCount; ) {
    const end = curveEnd(segment);
    const rows = Array.from({ length: end - segment }, (_, i) => part.segments.at(segment + i));
    const [first, last] = [rows[0], rows[rows.length - 1]];
    printed.push({
      ...first,
      name: rows.length === 1 ? first.name : `${first.name} … ${last.name}`,
      x2_mm: last.x2_mm,
      y2_mm: last.y2_mm,
      bendMm: tightest(segment, end),
      length_m: rows.reduce((sum, row) => sum + row.length_m, 0),
      resistance_pa_s_m3: total(rows, 'resistance_pa_s_m3'),
      pressure_drop_pa: total(rows, 'pressure_drop_pa'),
      residence_time_s: total(rows, 'residence_time_s'),
    });
    segment = end;
  }
  return printed;

  function tightest(start: number, end: number): number {
    return network.segmentBendRadiusMm
      .subarray(start, end)
      .reduce((least, radius) => Math.min(least, radius));
  }

  /** First segment after a run of curved pieces of one reach. */
  function curveEnd(start: number): number {
    let end = start + 1;
    if (network.segmentBendRadiusMm[start] === 0) return end;
    while (
      end < network.segmentCount &&
      network.segmentReach[end] === network.segmentReach[start] &&
      network.segmentBendRadiusMm[end] > 0
    ) {
      end++;
    }
    return end;
  }
}

/** null when any piece has none. */
function total(
  rows: readonly SegmentRow[],
  key: 'resistance_pa_s_m3' | 'pressure_drop_pa' | 'residence_time_s',
): number | null {
  let sum = 0;
  for (const { [key]: value } of rows) {
    if (value === null) return null;
    sum += value;
  }
  return sum;
}
