import type { Network } from '../network/types.ts';
import type { FoundSettings, FoundTarget } from '../solve/targets.ts';
import { lineAt } from '../solve/targets-limits.ts';
import { known } from './known.ts';
import type { PumpPart } from './result-rows.ts';

/** The pump part of the JSON document. Numbers are exact: set as given, a check of the same layout reaches the targets. */
export function pumpPartOf({ chip }: Network, { targets }: FoundSettings): PumpPart {
  return {
    targets: targets.map(({ wanted, reached }) => {
      const { entry, name, observed } = wanted;
      const { quantity, value } = entry;
      return {
        [entry.on]: entry.name,
        reach: observed.kind === 'reach' ? name : null,
        quantity,
        at: quantity === 'wall_shear' ? entry.at : null,
        wanted: typeof value === 'number' ? value : { min: value.min, max: value.max },
        reached: known(reached),
        unit: SI_UNITS[quantity],
        by: entry.by,
      };
    }),
    settings: targets.map((target) => {
      const { wanted, response, reach } = target;
      return {
        port: chip.ports[wanted.port].name,
        pressure_pa: known(target.portPressurePa),
        supply_pressure_pa: known(response.supplyPressurePa.at),
        flow_m3_s: known(response.flowM3s.at),
        within_limits: reach.isWithin,
        ...rangePart(target),
      };
    }),
  };
}

const SI_UNITS = {
  flow: 'm³/s',
  wall_shear: 'Pa',
  velocity: 'm/s',
  residence_time: 's',
  pressure: 'Pa',
} as const;

function rangePart({ range, response }: FoundTarget): Pick<PumpPart['settings'][number], 'range'> {
  if (range === null) return {};
  const at = (line: typeof response.flowM3s, setting: number): number | null =>
    Number.isFinite(setting) ? known(lineAt(response, line, setting)) : null;
  return {
    range: {
      supply_pressure_min_pa: at(response.supplyPressurePa, range.low),
      supply_pressure_max_pa: at(response.supplyPressurePa, range.high),
      flow_min_m3_s: at(response.flowM3s, range.low),
      flow_max_m3_s: at(response.flowM3s, range.high),
    },
  };
}
