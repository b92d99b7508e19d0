import {
  formatNumber,
  formatShare,
  largestMagnitude,
  type Show,
  type Shown,
  type Unit,
} from '../../runsheet/shown.ts';
import type { ChannelEntry } from '../../runsheet/types.ts';
import { hasWindow, outsideWindows, windowTexts } from '../reach-values.ts';
import type { ReportedCase } from '../report.ts';
import type { ReachRow } from '../result-rows.ts';
import { plural } from '../verdict-line.ts';
import { type PageContext, SMALL } from './context.ts';
import { type Column, drawTable, type TableRow } from './table.ts';

/** All reaches are printed up to here; of a larger network the first ones, and the rest is in the CSV and JSON. */
export const REACH_BOUND = 2000;
export const REACHES_OF_MANY = 500;

/** The table of reaches, grouped by channel, each channel's windows at the head of its reaches. */
export function writeReaches({ paper, one }: PageContext): void {
  const { network } = one;
  if (network.reachCount === 0) return;
  paper.newPage('landscape');
  const section = paper.section();
  paper.heading(section, 1, 'Reaches');
  paper.paragraph(section, LEGEND, SMALL);
  const order = byChannel(one).subarray(0, network.reachCount <= REACH_BOUND ? REACH_BOUND : REACHES_OF_MANY);
  const rows = Array.from(order, (reach) => one.part.reaches.at(reach));
  const numbers = numberColumns(rows, one.show);
  drawTable(paper, section, tableColumns(numbers), tableRows(one, order, rows, numbers), { size: 6.5 });
  const more = network.reachCount - rows.length;
  if (more > 0) {
    paper.paragraph(
      section,
      `… and ${more} more of ${plural(network.reachCount, 'reach').replace('reachs', 'reaches')}: all are in the CSV (--formats csv) and JSON (--formats json) files.`,
      SMALL,
    );
  }
}

const LEGEND =
  'Flow and pressure drop are positive from → to, in drawn direction. Drawn: centreline outside wells; trim: taken off (−) where it lies in the strip of another; ' +
  'joints: what corners, bends and junctions take off (−) or add; ' +
  'duct: the sum, which resists flow. Shear of the walls along the flow: floor (and lid) and sides, mean over the wall and peak in its middle. ' +
  'Time: mean is volume over flow, fastest is on the axis. ✗ and bold: outside a window, see findings. –: does not exist. All columns in SI units, and more of them, are in the CSV file.';

interface NumberColumn {
  readonly head: string;
  readonly unit: string;
  readonly text: (row: ReachRow) => string;
}

/** Reaches in the order of their channels. */
function byChannel({ network }: ReportedCase): Int32Array {
  const order = Int32Array.from({ length: network.reachCount }, (_, reach) => reach);
  return order.sort((a, b) => network.reachChannel[a] - network.reachChannel[b] || a - b);
}

function numberColumns(rows: readonly ReachRow[], show: Show): readonly NumberColumn[] {
  const column = (
    head: string,
    shown: Shown,
    pick: (row: ReachRow) => number | null,
    unit = fitting(shown, pick),
  ): NumberColumn => ({
    head,
    unit: unit.text,
    text: (row) => {
      const value = pick(row);
      return value === null ? '–' : formatNumber(value / unit.si);
    },
  });
  function fitting(shown: Shown, ...picks: readonly ((row: ReachRow) => number | null)[]): Unit {
    return show.unit(shown, largestMagnitude(picks.flatMap((pick) => rows.map(pick))));
  }
  const length = fitting('length', (row) => row.drawn_length_m);
  const speed = fitting(
    'velocity',
    (row) => row.mean_velocity_m_s,
    (row) => row.peak_velocity_m_s,
  );
  const shear = fitting(
    'wall_shear',
    (row) => row.wall_shear_floor_peak_pa,
    (row) => row.wall_shear_side_peak_pa,
  );
  const time = fitting('residence_time', (row) => row.residence_time_s);
  const windows = rows.some((row) => row.floor_share_inside_window !== null);
  return [
    column('drawn', 'length', (row) => row.drawn_length_m, length),
    column(
      'trim',
      'length',
      (row) => rounded(row.length_m - row.joint_length_m - row.drawn_length_m),
      length,
    ),
    column('joints', 'length', (row) => rounded(row.joint_length_m), length),
    column('duct', 'length', (row) => row.length_m, length),
    column('width', 'cross_length', (row) => row.width_m),
    column('depth', 'cross_length', (row) => row.depth_m),
    column('resistance', 'resistance', (row) => row.resistance_pa_s_m3),
    column('flow', 'flow', (row) => row.flow_m3_s),
    column('drop', 'pressure', (row) => row.pressure_drop_pa),
    column('v mean', 'velocity', (row) => row.mean_velocity_m_s, speed),
    column('v peak', 'velocity', (row) => row.peak_velocity_m_s, speed),
    { head: 'Re', unit: '', text: (row) => (row.reynolds === null ? '–' : formatNumber(row.reynolds)) },
    column('floor mean', 'wall_shear', (row) => row.wall_shear_floor_mean_pa, shear),
    column('floor peak', 'wall_shear', (row) => row.wall_shear_floor_peak_pa, shear),
    column('side mean', 'wall_shear', (row) => row.wall_shear_side_mean_pa, shear),
    column('side peak', 'wall_shear', (row) => row.wall_shear_side_peak_pa, shear),
    ...(windows
      ? [
          {
            head: 'floor in',
            unit: 'window',
            text: (row: ReachRow) => formatShare(row.floor_share_inside_window),
          },
        ]
      : []),
    column('time mean', 'residence_time', (row) => row.residence_time_s, time),
    column('fastest', 'residence_time', (row) => row.fastest_time_s, time),
  ];
}

/** Differences of lengths to 0.1 µm, finer than any process: below are nanometres and the last bits of the two. */
function rounded(differenceM: number): number {
  return Math.round(differenceM * 1e7) / 1e7;
}

function tableColumns(numbers: readonly NumberColumn[]): readonly Column[] {
  return [
    { head: 'reach', align: 'left', width: 'share' },
    { head: 'from → to', align: 'left', width: 'share' },
    ...numbers.map(({ head, unit }): Column => ({ head, unit, align: 'right', width: 'fit' })),
  ];
}

function tableRows(
  one: ReportedCase,
  order: Int32Array,
  rows: readonly ReachRow[],
  numbers: readonly NumberColumn[],
): TableRow[] {
  const { network, run, show } = one;
  const outside = outsideWindows(one);
  const table: TableRow[] = [];
  let current = -1;
  rows.forEach((row, i) => {
    const reach = order[i];
    const index = network.reachChannel[reach];
    const settings = run.channels[index];
    if (index !== current && (hasWindow(settings) || network.channelReachCount[reach] > 1)) {
      table.push({ kind: 'group', text: groupText(settings, row, show) });
    } else if (
      index !== current &&
      table.length > 0 &&
      table.at(-1)?.kind !== 'group' &&
      groupOf(one, order, i - 1)
    ) {
      table.push({ kind: 'group', text: `${row.channel}, layer ${row.layer}` });
    }
    current = index;
    const isOutside = outside(row.channel, row.name);
    table.push({
      kind: 'cells',
      ...(isOutside ? { weight: 'bold' } : {}),
      cells: [
        isOutside ? `✗ ${row.name}` : row.name,
        `${row.from} → ${row.to}`,
        ...numbers.map(({ text }) => text(row)),
      ],
    });
  });
  return table;
}

/** Whether the row before stands under a group line: then the next channel needs one too, not to be taken for its member. */
function groupOf({ network, run }: ReportedCase, order: Int32Array, i: number): boolean {
  const reach = order[i];
  return hasWindow(run.channels[network.reachChannel[reach]]) || network.channelReachCount[reach] > 1;
}

function groupText(settings: ChannelEntry | null, row: ReachRow, show: Show): string {
  const windows = windowTexts(settings, show);
  return [`${row.channel}, layer ${row.layer === '' ? '(none)' : row.layer}`, ...windows].join('; ');
}
