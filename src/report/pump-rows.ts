import { foundPumpLimits, type PumpLimits } from '../chip/pump-limits.ts';
import type { Origin, Sourced } from '../chip/types.ts';
import type { Finding } from '../findings/types.ts';
import type { Network } from '../network/types.ts';
import { formatNumber, type Show, type Shown } from '../runsheet/shown.ts';
import type { PortCondition, Window } from '../runsheet/types.ts';
import type { FoundTarget } from '../solve/targets.ts';
import { lineAt } from '../solve/targets-limits.ts';
import type { ReportedCase } from './report.ts';

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
  /** "within", "OUT OF REACH" …, and what the limits are. */
  readonly kept: string;
  readonly limits: string;
  /** Rules of blockers that the found settings break here; nothing where they break none. */
  readonly breaks: string;
}

/** Said wherever numbers of the command pump stand that look like those of a check. */
export const AT_FOUND_SETTINGS = 'at settings found, not given';

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

export function settingCells(
  { network, run, findings, show }: Pick<ReportedCase, 'network' | 'run' | 'findings' | 'show'>,
  target: FoundTarget,
): SettingCells {
  const { wanted, response, portPressurePa } = target;
  const { chip } = network;
  const { name } = chip.ports[wanted.port];
  return {
    port: name,
    pressure: fine(show, 'pressure', response.supplyPressurePa.at),
    flow: fine(show, 'flow', response.flowM3s.at),
    inChip: fine(show, 'pressure', portPressurePa),
    ...limitsText(target, foundPumpLimits(run, wanted.entry.by), show),
    breaks: brokenBy(target, name, findings.findings).join(', '),
  };
}

/** Rules that what the ports are set to decides. */
const DECIDED_BY_SETTINGS: ReadonlySet<string> = new Set([
  'backflow',
  'dead-port',
  'flow-window',
  'not-laminar',
  'over-pressure',
  'pump-limit',
  'residence-window',
  'shear-window',
  'under-pressure',
  'uneven-flow',
]);

/** Blockers at the found settings that name the port, or what its target is on. */
function brokenBy({ wanted }: FoundTarget, port: string, findings: readonly Finding[]): readonly string[] {
  const names = new Set([port, wanted.name, wanted.entry.name]);
  const rules = findings
    .filter(
      ({ rule, severity, accepted, names: concerned }) =>
        severity === 'blocker' &&
        accepted === null &&
        DECIDED_BY_SETTINGS.has(rule) &&
        concerned.some((name) => names.has(name)),
    )
    .map(({ rule }) => rule);
  return [...new Set(rules)];
}

/** A port's condition in the run sheet beside the setting found for it. */
export interface FoundCells {
  readonly port: string;
  readonly given: string;
  readonly found: string;
}

export function foundCells(
  { network, show }: Pick<ReportedCase, 'network' | 'show'>,
  target: FoundTarget,
): FoundCells {
  const { wanted, response, given } = target;
  return {
    port: network.chip.ports[wanted.port].name,
    given: conditionText(given, show),
    found: `${fine(show, 'pressure', response.supplyPressurePa.at)}, or ${fine(show, 'flow', response.flowM3s.at)}`,
  };
}

function conditionText(condition: PortCondition, show: Show): string {
  switch (condition.kind) {
    case 'pressure':
      return fine(show, 'pressure', condition.pressurePa);
    case 'flow':
      return fine(show, 'flow', condition.flowM3s);
    case 'head':
      return `head ${fine(show, 'length', condition.headM)}`;
    case 'unset':
      return 'not set';
    case 'open':
    case 'sealed':
      return condition.kind;
    default:
      return condition satisfies never;
  }
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

function limitsText(
  { reach }: FoundTarget,
  limits: PumpLimits,
  show: Show,
): Pick<SettingCells, 'kept' | 'limits'> {
  const isGiven = Object.values(limits).some((limit) => limit?.origin === 'run sheet');
  const { minPressurePa, maxPressurePa, maxFlowM3s } = limits;
  // usual limits are told where there are no others, or where it is they that are passed
  const told = isGiven && reach.isWithin ? (origin: Origin) => origin === 'run sheet' : () => true;
  const value = (limit: Sourced<number> | null): number | null =>
    limit !== null && told(limit.origin) ? limit.value : null;
  const [min, max, flow] = [value(minPressurePa), value(maxPressurePa), value(maxFlowM3s)];
  const parts = [
    ...(min === null && max === null ? [] : [windowText(show, 'pressure', { min, max })]),
    ...(flow === null ? [] : [windowText(show, 'flow', { min: null, max: flow })]),
  ];
  const beyond = isGiven ? 'OUT OF REACH' : 'BEYOND WHAT IS USUAL';
  return {
    kept: reach.isWithin ? (isGiven ? 'within' : 'within what is usual') : beyond,
    limits: parts.join(', '),
  };
}
