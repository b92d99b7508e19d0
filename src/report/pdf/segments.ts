import { formatMm, formatNumber, largestMagnitude, type Shown } from '../../runsheet/shown.ts';
import type { ReportedCase } from '../report.ts';
import type { SegmentRow } from '../result-rows.ts';
import { type PageContext, SMALL } from './context.ts';
import { type Column, drawTable, type TableRow } from './table.ts';

/** Above this the segments are in the CSV and JSON files only. */
export const SEGMENT_BOUND = 2000;

/** The table of segments, the chords of one curve in one row; over the bound a line that says where they are. */
export function writeSegments({ paper, one }: PageContext): void {
  const { network } = one;
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
  const section = paper.start('landscape', 150);
  paper.heading(section, 1, 'Segments');
  paper.paragraph(section, LEGEND, SMALL);
  const rows = printedRows(one);
  const columns = columnsOf(rows, one);
  const table: TableRow[] = rows.map((row) => ({
    kind: 'cells',
    cells: [nameOf(row), ...columns.map(({ text }) => text(row))],
  }));
  drawTable(
    paper,
    section,
    [{ head: 'segment', align: 'left', width: 'share' }, ...columns.map(({ column }) => column)],
    table,
    { size: 6.5 },
  );
}

const LEGEND =
  'Straight pieces of the reaches, from → to. Places in drawing coordinates, mm, y down. A curve is cut into straight pieces whose summed length is within 1e-4 ' +
  'of its own; they stand together in one row, with the sums of their lengths, resistances, drops and times, and one by one in the CSV file. ' +
  'What a joint adds to its reach belongs to none of its segments.';

/** One straight segment, or the pieces of one curve together. */
interface Printed {
  readonly first: SegmentRow;
  readonly last: SegmentRow;
  readonly pieces: number;
  /** 0 for a straight piece. */
  readonly bendRadiusMm: number;
  readonly lengthM: number;
  readonly resistance: number | null;
  readonly dropPa: number | null;
  readonly timeS: number | null;
}

function printedRows({ network, part }: ReportedCase): Printed[] {
  const printed: Printed[] = [];
  for (let segment = 0; segment < network.segmentCount; ) {
    const end = curveEnd(segment);
    const rows = Array.from({ length: end - segment }, (_, i) => part.segments.at(segment + i));
    printed.push({
      first: rows[0],
      last: rows[rows.length - 1],
      pieces: rows.length,
      bendRadiusMm: tightest(segment, end),
      lengthM: rows.reduce((sum, row) => sum + row.length_m, 0),
      resistance: total(rows, (row) => row.resistance_pa_s_m3),
      dropPa: total(rows, (row) => row.pressure_drop_pa),
      timeS: total(rows, (row) => row.residence_time_s),
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
function total(rows: readonly SegmentRow[], pick: (row: SegmentRow) => number | null): number | null {
  let sum = 0;
  for (const row of rows) {
    const value = pick(row);
    if (value === null) return null;
    sum += value;
  }
  return sum;
}

function nameOf({ first, last, pieces }: Printed): string {
  return pieces === 1 ? first.name : `${first.name} … ${last.name}`;
}

interface SegmentColumn {
  readonly column: Column;
  readonly text: (row: Printed) => string;
}

function columnsOf(rows: readonly Printed[], { show }: ReportedCase): readonly SegmentColumn[] {
  const number = (head: string, shown: Shown, pick: (row: Printed) => number | null): SegmentColumn => {
    const unit = show.unit(shown, largestMagnitude(rows.map(pick)));
    return {
      column: { head, unit: unit.text, align: 'right', width: 'fit' },
      text: (row) => {
        const value = pick(row);
        return value === null ? '–' : formatNumber(value / unit.si);
      },
    };
  };
  const place = (head: string, pick: (row: Printed) => number): SegmentColumn => ({
    column: { head, unit: 'mm', align: 'right', width: 'fit' },
    text: (row) => formatMm(pick(row)),
  });
  return [
    place('x₁', (row) => row.first.x1_mm),
    place('y₁', (row) => row.first.y1_mm),
    place('x₂', (row) => row.last.x2_mm),
    place('y₂', (row) => row.last.y2_mm),
    {
      column: { head: 'tightest bend', unit: 'mm', align: 'right', width: 'fit' },
      text: (row) => (row.bendRadiusMm === 0 ? '–' : formatMm(row.bendRadiusMm)),
    },
    number('length', 'length', (row) => row.lengthM),
    number('resistance', 'resistance', (row) => row.resistance),
    number('drop', 'pressure', (row) => row.dropPa),
    number('floor mean', 'wall_shear', (row) => row.first.wall_shear_floor_mean_pa),
    number('floor peak', 'wall_shear', (row) => row.first.wall_shear_floor_peak_pa),
    number('time', 'residence_time', (row) => row.timeS),
  ];
}
