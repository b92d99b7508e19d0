import { formatBound, type Show } from '../../runsheet/shown.ts';
import { type Column, figures, words } from '../columns.ts';
import { joined } from '../plain-text.ts';
import { quantityColumns } from '../quantities.ts';
import type { PortRow } from '../result-rows.ts';
import { portQuantity } from '../result-schema.ts';

/** The table of ports. Units fit all ports of the chip, so that they do not change over a page. */
export function portColumns(all: readonly PortRow[], show: Show): readonly Column<PortRow>[] {
  const columns = quantityColumns(portQuantity, all, show);
  const withTubing = all.some(({ tubing_volume_m3 }) => tubing_volume_m3 !== null);
  const withJoints = all.some((port) => port.joint_flow_share !== null || port.joint_pressure_share !== null);
  return [
    words('port', ({ name }) => name, 'share'),
    words('condition', ({ condition }) => condition),
    ...columns('pressure_pa', 'supply_pressure_pa'),
    ...columns('flow_m3_s'),
    ...(withTubing ? [...columns('tubing_volume_m3'), ...columns('tubing_time_s')] : []),
    ...(withJoints ? [figures('joints not resolved', jointText, 'could move by ±')] : []),
  ];
}

/** "flow 2.2 %, pressure 3 %": of what is given nothing is said, for it does not move. */
export function jointText({
  joint_flow_share,
  joint_pressure_share,
}: Pick<PortRow, 'joint_flow_share' | 'joint_pressure_share'>): string {
  const moves = joined(
    [
      joint_flow_share ? `flow ${formatBound(joint_flow_share)}` : null,
      joint_pressure_share ? `pressure ${formatBound(joint_pressure_share)}` : null,
    ],
    ', ',
  );
  if (moves !== '') return moves;
  return joint_flow_share === null && joint_pressure_share === null ? '–' : formatBound(0);
}
