import { hasWindow } from '../../asked/windows.ts';
import { countText } from '../../findings/words.ts';
import type { Show } from '../../runsheet/shown.ts';
import { type Column, words } from '../columns.ts';
import { quantityColumns } from '../quantities.ts';
import { outsideWindows, windowTexts } from '../reach-values.ts';
import type { ReportedCase } from '../report.ts';
import type { ReachRow } from '../result-rows.ts';
import { reachQuantity } from '../result-schema.ts';
import { type PageContext, SMALL } from './context.ts';
import { chapter } from './section.ts';

/** All reaches are printed up to here; of a larger network the first ones, and the rest is in the CSV and JSON. */
const REACH_BOUND = 2000;
const REACHES_OF_MANY = 500;

/** The table of reaches, grouped by channel, each channel's windows at the head of its reaches. */
export function writeReaches({ paper, one }: PageContext): void {
  const { network } = one;
  if (network.reachCount === 0) return;
  const section = chapter(paper, 'Reaches', 'landscape');
  section.paragraph(LEGEND, SMALL);
  const order = byChannel(one).subarray(0, network.reachCount <= REACH_BOUND ? REACH_BOUND : REACHES_OF_MANY);
  const rows = Array.from(order, (reach) => one.part.reaches.at(reach));
  const outside = outsideWindows(one);
  section.table(
    rows,
    [
      reachName(outside),
      words('from → to', ({ from, to }) => `${from} → ${to}`, 'share'),
      ...numberColumns(rows, one.show),
    ],
    {
      size: 6.5,
      group: (row, i) => groupText(one, order, i, row),
      isBold: (row) => outside(row.channel, row.name),
    },
  );
  section.more(
    network.reachCount - rows.length,
    `more of ${countText(network.reachCount, 'reach', 'reaches')}: all are in the CSV (--formats csv) and JSON (--formats json) files.`,
  );
}

const LEGEND =
  'Flow and pressure drop are positive from → to, in drawn direction. Drawn: centreline outside wells; trim: taken off (−) where it lies in the strip of another; ' +
  'joints: what corners, bends and junctions take off (−) or add; ' +
  'duct: the sum, which resists flow. Shear of the walls along the flow: floor (and lid) and sides, mean over the wall and peak in its middle. ' +
  'Time: mean is volume over flow, fastest is on the axis. ✗ and bold: outside a window, see findings. –: does not exist. All columns in SI units, and more of them, are in the CSV file.';

/** Names, those outside a window marked. */
export function reachName(outside: (channel: string, reach: string) => boolean): Column<ReachRow> {
  return words('reach', ({ channel, name }) => (outside(channel, name) ? `✗ ${name}` : name), 'share');
}

/** Reaches in the order of their channels. */
function byChannel({ network }: ReportedCase): Int32Array {
  const order = Int32Array.from({ length: network.reachCount }, (_, reach) => reach);
  return order.sort((a, b) => network.reachChannel[a] - network.reachChannel[b] || a - b);
}

function numberColumns(rows: readonly ReachRow[], show: Show): readonly Column<ReachRow>[] {
  const columns = quantityColumns(reachQuantity, rows, show);
  return [
    ...columns(
      'drawn_length_m',
      {
        key: 'length_m',
        head: 'trim',
        value: (row) => rounded(row.length_m - row.joint_length_m - row.drawn_length_m),
      },
      { key: 'joint_length_m', value: (row) => rounded(row.joint_length_m) },
      'length_m',
    ),
    ...columns('width_m'),
    ...columns('depth_m'),
    ...columns('resistance_pa_s_m3'),
    ...columns('flow_m3_s'),
    ...columns('pressure_drop_pa'),
    ...columns('mean_velocity_m_s', 'peak_velocity_m_s'),
    ...columns('reynolds'),
    ...columns(
      'wall_shear_floor_mean_pa',
      'wall_shear_floor_peak_pa',
      'wall_shear_side_mean_pa',
      'wall_shear_side_peak_pa',
    ),
    ...columns({ key: 'floor_share_inside_window', isOptional: true }),
    ...columns('residence_time_s', 'fastest_time_s'),
  ];
}

/** Differences of lengths to 0.1 µm, finer than any process: below are nanometres and the last bits of the two. */
function rounded(differenceM: number): number {
  return Math.round(differenceM * 1e7) / 1e7;
}

/**
 * A line at the head of a channel that has a window or several reaches, and of the one after it, which would else be taken for its
 * member.
 */
function groupText(
  { network, run, show }: ReportedCase,
  order: Int32Array,
  i: number,
  row: ReachRow,
): string | null {
  const channel = network.reachChannel[order[i]];
  const before = i === 0 ? -1 : network.reachChannel[order[i - 1]];
  if (channel === before) return null;
  const isGroup = (reach: number): boolean =>
    hasWindow(run.channels[network.reachChannel[reach]]) || network.channelReachCount[reach] > 1;
  if (!isGroup(order[i]) && (i === 0 || !isGroup(order[i - 1]))) return null;
  return [`${row.channel}, layer ${row.layer ?? '(none)'}`, ...windowTexts(run.channels[channel], show)].join(
    '; ',
  );
}
