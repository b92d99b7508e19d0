import type { RunNetwork } from '../asked/run-network.ts';
import { pumpEntryOf } from '../chip/pump-limits.ts';
import { flowForShear, type ShearAt } from '../physics/duct-state.ts';
import type { Show, Unit } from '../runsheet/shown.ts';
import type { PumpLimitEntry, Window } from '../runsheet/types.ts';
import type { FoundTarget } from '../solve/targets.ts';
import { lineAt, settingsFor } from '../solve/targets-limits.ts';
import { targetValue } from '../solve/targets-wanted.ts';
import { axisTicks } from './colour-scale.ts';

/** A curve of setting against target as data, in the units shown: target along x, setting along y. */
export interface PumpCurve {
  readonly title: string;
  readonly x: CurveAxis;
  readonly y: CurveAxis;
  /** Unbroken runs of points within the axes. */
  readonly runs: readonly (readonly (readonly [number, number])[])[];
  /** Windows on the target, each with an open end at null. */
  readonly windows: readonly { readonly window: Window; readonly text: string }[];
  /** Pump limits, as settings. */
  readonly limits: readonly { readonly at: number; readonly text: string }[];
  readonly found: readonly [number, number];
}

export interface CurveAxis {
  readonly label: string;
  readonly low: number;
  readonly high: number;
  readonly ticks: readonly { readonly at: number; readonly text: string }[];
}

const SAMPLES = 240;
/** How far beyond the found setting a limit is still drawn in, in found settings. */
const FARTHEST = 4;

/** The curve of one target: its port's setting alone is turned, the others stay as found. */
export function pumpCurve({ network, run }: RunNetwork, target: FoundTarget, show: Show): PumpCurve {
  const { wanted, response, range } = target;
  const { entry, measure, drive, port, name } = wanted;
  const { setting, observed } = response;
  const pumpLimits = pumpEntryOf(run, entry.by);
  const limits = pumpLimits === null ? [] : limitLines(target, pumpLimits);
  const windows = windowsOf({ network, run }, target);
  const size = Math.max(Math.abs(setting), ...endsOf(range).map(Math.abs));
  const near = (at: number): boolean => Math.abs(at) <= FARTHEST * size;
  const settings = [0, setting, ...endsOf(range), ...limits.map(({ at }) => at).filter(near)];
  const [low, high] = padded(Math.min(...settings), Math.max(...settings, setting + 0.25 * size));
  const settingUnit = show.unit(drive, Math.max(Math.abs(low), Math.abs(high)));
  const valueAt = (at: number): number => targetValue(measure, lineAt(response, observed, at));

  const values = windows.flatMap(({ window: { min, max } }) => [min, max]).filter((value) => value !== null);
  const most = valueCeiling(target, values, [valueAt(low), valueAt(high)]);
  const least = Math.min(0, ...(measure.kind === 'signed' ? [valueAt(low), valueAt(high)] : []));
  const valueUnit = show.unit(entry.quantity, Math.max(Math.abs(least), Math.abs(most)));
  const runs: [number, number][][] = [[]];
  for (let i = 0; i <= SAMPLES; i++) {
    const at = low + ((high - low) * i) / SAMPLES;
    const value = valueAt(at);
    if (value >= least && value <= most)
      runs[runs.length - 1].push([value / valueUnit.si, at / settingUnit.si]);
    else if (runs[runs.length - 1].length > 0) runs.push([]);
  }
  return {
    title: `${name}: ${entry.quantity.replace('_', ' ')}${entry.quantity === 'wall_shear' ? ` (${entry.at})` : ''} by ${network.chip.ports[port].name}`,
    x: axis(`${entry.quantity.replace('_', ' ')}, ${valueUnit.text}`, least, most, valueUnit),
    y: axis(
      drive === 'pressure'
        ? `pressure at the pump, ${settingUnit.text}`
        : `flow of the pump, ${settingUnit.text}`,
      low,
      high,
      settingUnit,
    ),
    runs: runs.filter((run) => run.length > 1),
    windows: windows.map(({ window: { min, max }, text }) => ({
      window: {
        min: min === null ? null : min / valueUnit.si,
        max: max === null ? null : max / valueUnit.si,
      },
      text,
    })),
    limits: limits
      .filter(({ at }) => at >= low && at <= high)
      .map(({ at, text }) => ({ at: at / settingUnit.si, text })),
    found: [target.reached / valueUnit.si, setting / settingUnit.si],
  };
}

function endsOf(range: FoundTarget['range']): number[] {
  return range === null ? [] : [range.low, range.high].filter(Number.isFinite);
}

function padded(low: number, high: number): readonly [number, number] {
  const span = high - low || 1;
  // room above for the windows' names
  return [low === 0 ? 0 : low - 0.04 * span, high + 0.12 * span];
}

/** The largest value drawn. A time grows without end towards rest. */
function valueCeiling(
  { wanted, reached }: FoundTarget,
  windows: readonly number[],
  ends: readonly number[],
): number {
  const seen = [reached, ...windows].filter(Number.isFinite);
  if (wanted.measure.kind === 'time') return 2.5 * Math.max(...seen);
  return Math.max(...seen, ...ends) * 1.02 || 1;
}

function axis(label: string, low: number, high: number, { si }: Unit): CurveAxis {
  const [from, to] = [low / si, high / si];
  return { label, low: from, high: to, ticks: axisTicks(from, to) };
}

/** Pump limits as settings of the port. */
function limitLines(
  { response }: FoundTarget,
  { minPressurePa, maxPressurePa, maxFlowM3s }: PumpLimitEntry,
): { readonly at: number; readonly text: string }[] {
  const { supplyPressurePa, flowM3s } = response;
  const at = (line: typeof flowM3s, value: number): number =>
    settingsFor(response, line, { low: value, high: value })?.low ?? Number.NaN;
  return [
    minPressurePa === null ? [] : [{ at: at(supplyPressurePa, minPressurePa), text: 'min_pressure' }],
    maxPressurePa === null ? [] : [{ at: at(supplyPressurePa, maxPressurePa), text: 'max_pressure' }],
    maxFlowM3s === null
      ? []
      : [
          { at: at(flowM3s, maxFlowM3s), text: 'max_flow' },
          { at: at(flowM3s, -maxFlowM3s), text: 'max_flow, drawing' },
        ],
  ]
    .flat()
    .filter((limit) => Number.isFinite(limit.at));
}

/** The target's own window, and the channel's window on the same quantity in terms of the target. */
function windowsOf(
  { network, run }: RunNetwork,
  { wanted }: FoundTarget,
): { readonly window: Window; readonly text: string }[] {
  const { entry, measure, observed } = wanted;
  const windows: { window: Window; text: string }[] = [];
  if (typeof entry.value !== 'number') windows.push({ window: entry.value, text: 'target' });
  if (observed.kind !== 'reach') return windows;
  const channel = network.chip.channels[network.reachChannel[observed.reach]];
  const settings = run.channels[network.reachChannel[observed.reach]];
  if (settings === null) return windows;
  const text = `window of ${channel.name}`;
  if (measure.kind === 'shear' && settings.wallShear !== null) {
    // the least is asked of the mean, the most of the peak: both are shown as what the target would then read
    const shown = (at: ShearAt, shearPa: number | null): number | null =>
      shearPa === null
        ? null
        : targetValue(measure, flowForShear(measure.form, 'floor', at, shearPa, measure.fluid));
    const { min, max } = settings.wallShear;
    windows.push({ window: { min: shown('mean', min), max: shown('peak', max) }, text });
  }
  if (measure.kind === 'time' && settings.residenceTime !== null) {
    // the least is asked of the fastest fluid
    const { min, max } = settings.residenceTime;
    windows.push({ window: { min: min === null ? null : min * measure.form.peakOverMean, max }, text });
  }
  if (entry.quantity === 'flow' && settings.flow !== null) windows.push({ window: settings.flow, text });
  return windows;
}
