import type { Network } from '../network/types.ts';
import { formatNumber, type Show, type Shown } from '../runsheet/shown.ts';
import type { PumpLimitEntry, Window } from '../runsheet/types.ts';
import type { FoundTarget } from '../solve/targets.ts';
import { lineAt } from '../solve/targets-limits.ts';

/** Cells that the terminal and the PDF both show of one target: what is wanted, by which port, and what the found settings reach. */
export interface TargetCells {
  readonly on: string;
  readonly quantity: string;
  readonly wanted: string;
  readonly reached: string;
  readonly by: string;
}

export interface SettingCells {
  readonly port: string;
  /** At the far end of the tubing. */
  readonly pressure: string;
  /** Into the chip. */
  readonly flow: string;
  readonly inChip: string;
  readonly limits: string;
}

/** Settings are shown to five digits, so that setting them by hand loses nothing that matters. */
const DIGITS = 5;

export function targetCells({ wanted, reached }: FoundTarget, show: Show): TargetCells {
  const { entry, name } = wanted;
  const { quantity, at, value, by } = entry;
  return {
    on: name,
    quantity: quantity === 'wall_shear' ? `wall shear, ${at}` : quantity.replace('_', ' '),
    wanted: typeof value === 'number' ? fine(show, quantity, value) : windowText(show, quantity, value),
    reached: Number.isFinite(reached) ? fine(show, quantity, reached) : 'nothing flows',
    by,
  };
}

export function settingCells(network: Network, target: FoundTarget, show: Show): SettingCells {
  const { wanted, response, portPressurePa } = target;
  const { chip } = network;
  const { name } = chip.ports[wanted.port];
  return {
    port: name,
    pressure: fine(show, 'pressure', response.supplyPressurePa.at),
    flow: fine(show, 'flow', response.flowM3s.at),
    inChip: fine(show, 'pressure', portPressurePa),
    limits: limitsText(target, chip.sheet?.pumpLimits[wanted.entry.by], show),
  };
}

/** For a window: between which settings of its port alone it is kept; null for a target of one value. */
export function rangeText(network: Network, target: FoundTarget, show: Show): string | null {
  const { range, wanted, response } = target;
  if (range === null) return null;
  const { name } = network.chip.ports[wanted.port];
  const between = (shown: Shown, line: typeof response.flowM3s): string => {
    const at = (setting: number): number | null =>
      Number.isFinite(setting) ? lineAt(response, line, setting) : null;
    return windowText(show, shown, { min: at(range.low), max: at(range.high) });
  };
  return `${wanted.entry.quantity.replace('_', ' ')} of ${wanted.name} keeps its window while ${name} holds ${between('pressure', response.supplyPressurePa)}, or gives ${between('flow', response.flowM3s)}`;
}

/** A value to five digits with its unit. */
export function fine(show: Show, shown: Shown, value: number | null): string {
  if (value === null || !Number.isFinite(value)) return '–';
  const { text, si } = show.unit(shown, Math.abs(value));
  return `${formatNumber(value / si, DIGITS)} ${text}`;
}

function windowText(show: Show, shown: Shown, { min, max }: Window): string {
  if (min === null) return `at most ${fine(show, shown, max)}`;
  if (max === null) return `at least ${fine(show, shown, min)}`;
  const { text, si } = show.unit(shown, Math.max(Math.abs(min), Math.abs(max)));
  return `${formatNumber(min / si, DIGITS)} to ${formatNumber(max / si, DIGITS)} ${text}`;
}

function limitsText({ reach }: FoundTarget, limits: PumpLimitEntry | undefined, show: Show): string {
  if (reach === null || limits === undefined) return 'no limits given';
  const { minPressurePa, maxPressurePa, maxFlowM3s } = limits;
  const parts = [
    minPressurePa === null && maxPressurePa === null
      ? []
      : [windowText(show, 'pressure', { min: minPressurePa, max: maxPressurePa })],
    maxFlowM3s === null ? [] : [windowText(show, 'flow', { min: null, max: maxFlowM3s })],
  ].flat();
  return `${reach.isWithin ? 'within:' : 'OUT OF REACH:'} ${parts.join(', ')}`;
}
