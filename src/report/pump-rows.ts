import { foundPumpLimits } from '../chip/pump-limits.ts';
import type { Origin, Sourced } from '../chip/types.ts';
import type { Network } from '../network/types.ts';
import type { Show, Shown } from '../runsheet/shown.ts';
import type { FoundTarget } from '../solve/targets.ts';
import { lineAt } from '../solve/targets-limits.ts';
import { type Column, figures, words } from './columns.ts';
import type { ReportedCase } from './report.ts';
import { valueText, windowText } from './window-text.ts';

/** Said wherever numbers of the command pump stand that look like those of a check. */
export const AT_FOUND_SETTINGS = 'at settings found, not given';

/** Settings are shown to five digits, so that setting them by hand loses nothing that matters. */
const FINE = { digits: 5, most: 'at most', least: 'at least' } as const;

/** What is wanted of each target, by which port, and what the found settings reach. */
export function targetColumns(show: Show): readonly Column<FoundTarget>[] {
  return [
    words('target', ({ wanted }) => wanted.name, 'share'),
    words('quantity', ({ wanted: { entry } }) =>
      entry.quantity === 'wall_shear' ? `wall shear, ${entry.at}` : entry.quantity.replace('_', ' '),
    ),
    figures('wanted', ({ wanted: { entry } }) =>
      typeof entry.value === 'number'
        ? fine(show, entry.quantity, entry.value)
        : windowText(show, entry.quantity, entry.value, FINE),
    ),
    figures('reached', ({ wanted, reached }) =>
      Number.isFinite(reached) ? fine(show, wanted.entry.quantity, reached) : 'nothing flows',
    ),
    words('by', ({ wanted }) => wanted.entry.by, 'share'),
  ];
}

type Found = Pick<ReportedCase, 'network' | 'run' | 'findings' | 'show'>;

/** What to set each port to, for both kinds of pump, and what that makes of the pressure in the chip. */
export function settingColumns({ network, show }: Found, inChip: string): readonly Column<FoundTarget>[] {
  return [
    words('set', (target) => portName(network, target), 'share'),
    figures(
      'pressure to hold',
      ({ response }) => fine(show, 'pressure', response.supplyPressurePa.at),
      'at the pump',
    ),
    figures('or flow to give', ({ response }) => fine(show, 'flow', response.flowM3s.at), 'into the chip'),
    figures(inChip, ({ portPressurePa }) => fine(show, 'pressure', portPressurePa), 'in the chip'),
  ];
}

export function portName({ chip }: Network, { wanted }: FoundTarget): string {
  return chip.ports[wanted.port].name;
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

/** Rules of blockers at the found settings that name the port, or what its target is on; nothing where they break none. */
export function brokenRules({ network, findings }: Found, target: FoundTarget): string {
  const { wanted } = target;
  const names = new Set([portName(network, target), wanted.name, wanted.entry.name]);
  const rules = findings.findings
    .filter(
      ({ rule, severity, accepted, names: concerned }) =>
        severity === 'blocker' &&
        accepted === null &&
        DECIDED_BY_SETTINGS.has(rule) &&
        concerned.some((name) => names.has(name)),
    )
    .map(({ rule }) => rule);
  return [...new Set(rules)].join(', ');
}

/** For a window: between which settings of its port alone it is kept; null for a target of one value. */
export function rangeText(network: Network, target: FoundTarget, show: Show): string | null {
  const { range, wanted, response } = target;
  if (range === null) return null;
  const between = (shown: Shown, line: typeof response.flowM3s): string => {
    const at = (setting: number): number | null =>
      Number.isFinite(setting) ? lineAt(response, line, setting) : null;
    return windowText(show, shown, { min: at(range.low), max: at(range.high) }, FINE);
  };
  return `${wanted.entry.quantity.replace('_', ' ')} of ${wanted.name} keeps its window while ${portName(network, target)} holds ${between('pressure', response.supplyPressurePa)}, or gives ${between('flow', response.flowM3s)}`;
}

/** A value to five digits with its unit. */
export function fine(show: Show, shown: Shown, value: number | null): string {
  return valueText(show, shown, value, FINE.digits);
}

/** "within: at most 50 kPa" */
export function limitsText(found: Found, target: FoundTarget): string {
  const { kept, limits } = limitTexts(found, target);
  return `${kept}: ${limits}`;
}

/** "within", "OUT OF REACH" …, and what the limits are. */
export function limitTexts(
  { run, show }: Found,
  { reach, wanted }: FoundTarget,
): { readonly kept: string; readonly limits: string } {
  const limits = foundPumpLimits(run, wanted.entry.by);
  const isGiven = Object.values(limits).some((limit) => limit?.origin === 'run sheet');
  const { minPressurePa, maxPressurePa, maxFlowM3s } = limits;
  // usual limits are told where there are no others, or where it is they that are passed
  const told = isGiven && reach.isWithin ? (origin: Origin) => origin === 'run sheet' : () => true;
  const value = (limit: Sourced<number> | null): number | null =>
    limit !== null && told(limit.origin) ? limit.value : null;
  const [min, max, flow] = [value(minPressurePa), value(maxPressurePa), value(maxFlowM3s)];
  const parts = [
    ...(min === null && max === null ? [] : [windowText(show, 'pressure', { min, max }, FINE)]),
    ...(flow === null ? [] : [windowText(show, 'flow', { min: null, max: flow }, FINE)]),
  ];
  const beyond = isGiven ? 'OUT OF REACH' : 'BEYOND WHAT IS USUAL';
  return {
    kept: reach.isWithin ? (isGiven ? 'within' : 'within what is usual') : beyond,
    limits: parts.join(', '),
  };
}
