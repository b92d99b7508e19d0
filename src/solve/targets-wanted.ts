import type { RunNetwork } from '../asked/run-network.ts';
import { nodeOfTarget, reachOfTarget, refuseTarget } from '../asked/targets.ts';
import { channelForm } from '../chip/sections.ts';
import { roomLengthM } from '../network/lengths.ts';
import { nodeName, reachName } from '../network/names.ts';
import type { Network } from '../network/types.ts';
import type { DuctForm } from '../physics/duct.ts';
import {
  ductState,
  type FlowingFluid,
  flowForShear,
  residenceTime,
  type ShearAt,
  volumeOf,
  wallShear,
} from '../physics/duct-state.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet, TargetEntry } from '../runsheet/types.ts';
import type { FlowState } from './types.ts';

/** What is looked at in a flow state. All three are linear in every port's setting. */
export type Observed =
  /** Flow of a reach, from → to. */
  | { readonly kind: 'reach'; readonly reach: number }
  /** Flow of a port into the chip. */
  | { readonly kind: 'port'; readonly port: number }
  | { readonly kind: 'node'; readonly node: number };

/** How a target's value follows from what is observed, x. */
export type Measure =
  /** The value is x, with its sign: flow and pressure. */
  | { readonly kind: 'signed' }
  /** Wall shear on the floor says how much flows, not which way. */
  | {
      readonly kind: 'shear';
      readonly form: DuctForm;
      readonly at: ShearAt;
      readonly fluid: FlowingFluid;
    }
  /** |x|/A, the mean velocity. */
  | { readonly kind: 'velocity'; readonly form: DuctForm }
  /** V/|x|, the mean residence time. */
  | { readonly kind: 'time'; readonly form: DuctForm; readonly lengthM: number };

/** A target of the run sheet, found in the network. */
export interface Wanted {
  /** Place in the run sheet's list. */
  readonly index: number;
  readonly entry: TargetEntry;
  readonly observed: Observed;
  readonly measure: Measure;
  /** The port whose setting is to be found, as an index into chip.ports. */
  readonly port: number;
  /** A port driven by flow keeps that kind; any other one is taken for a pressure to be found. */
  readonly drive: 'pressure' | 'flow';
  /** Shown name of what the target is on: the reach, port or node. */
  readonly name: string;
}

/** Ends included; infinite where open. */
export interface Interval {
  readonly low: number;
  readonly high: number;
}

/**
 * The targets of the run sheet in terms of the network, in the order written.
 * @throws InputError at the target's line for a name that the network lacks, a channel of several reaches without `reach:`, several targets by one port,
 * a reach whose width or depth is unknown, a negative velocity, a window that any setting keeps
 */
export function readTargets({ network, run }: RunNetwork): readonly Wanted[] {
  const { sheet } = run;
  if (sheet === null) return [];
  refuseSharedPorts(sheet);
  return sheet.targets.map((entry): Wanted => {
    const { index } = entry;
    const port = network.chip.ports.findIndex(({ drawnName }) => drawnName === entry.by);
    if (port < 0) refuseTarget(sheet, index, `by: the drawing has no port ${quote(entry.by)}`);
    const observed = observedOf(network, sheet, entry, index);
    const measure = measureOf({ network, run }, sheet, entry, index, observed);
    refuseValue(sheet, entry, index, measure);
    const drive = run.ports[port].condition.kind === 'flow' ? 'flow' : 'pressure';
    return { index, entry, observed, measure, port, drive, name: nameOf(network, observed) };
  });
}

/** NaN where it can't be known. */
export function observe(state: FlowState, observed: Observed): number {
  switch (observed.kind) {
    case 'reach':
      return state.reachFlow[observed.reach];
    case 'port':
      return state.portFlow[observed.port];
    case 'node':
      return state.nodePressure[observed.node];
    default:
      return observed satisfies never;
  }
}

/** The target's value for what is observed. A time is infinite at rest. */
export function targetValue(measure: Measure, x: number): number {
  switch (measure.kind) {
    case 'signed':
      return x;
    case 'shear':
      return wallShear(ductState(measure.form, x, measure.fluid), 'floor', measure.at);
    case 'velocity':
      return Math.abs(x) / measure.form.areaM2;
    case 'time':
      return residenceTime(volumeOf(measure.form, measure.lengthM), x);
    default:
      return measure satisfies never;
  }
}

/** What must be observed for one value: with its sign for `signed`, else the size. */
export function observedFor(measure: Measure, value: number): number {
  switch (measure.kind) {
    case 'signed':
      return value;
    case 'shear':
      return flowForShear(measure.form, 'floor', measure.at, value, measure.fluid);
    case 'velocity':
      return value * measure.form.areaM2;
    case 'time':
      return volumeOf(measure.form, measure.lengthM) / value;
    default:
      return measure satisfies never;
  }
}

/** What may be observed while a value lies in a window: with its sign for `signed`, else the size. */
export function observedWithin(
  measure: Measure,
  { min, max }: { readonly min: number | null; readonly max: number | null },
): Interval {
  if (measure.kind === 'time') {
    return {
      low: max === null ? 0 : observedFor(measure, max),
      high: min === null || min === 0 ? Infinity : observedFor(measure, min),
    };
  }
  const least = measure.kind === 'signed' ? -Infinity : 0;
  return {
    low: min === null ? least : observedFor(measure, min),
    high: max === null ? Infinity : observedFor(measure, max),
  };
}

/** "targets[0] (wall_shear of lane-1 by feed)" */
export function targetText({ index, entry, name }: Pick<Wanted, 'index' | 'entry' | 'name'>): string {
  return `targets[${index}] (${entry.quantity} of ${quote(name)} by ${quote(entry.by)})`;
}

function refuseSharedPorts(sheet: RunSheet): void {
  const first = new Map<string, number>();
  for (const { index, by } of sheet.targets) {
    const before = first.get(by);
    if (before !== undefined) {
      refuseTarget(
        sheet,
        index,
        `is by ${quote(by)}, as targets[${before}] is: one port can be set to meet one target; name another port, or leave one of them out`,
      );
    }
    first.set(by, index);
  }
}

function observedOf(network: Network, sheet: RunSheet, entry: TargetEntry, index: number): Observed {
  switch (entry.on) {
    case 'channel':
      return { kind: 'reach', reach: reachOfTarget(network, sheet, entry) };
    case 'port': {
      const port = network.chip.ports.findIndex(({ drawnName }) => drawnName === entry.name);
      if (port < 0) refuseTarget(sheet, index, `port: the drawing has no port ${quote(entry.name)}`);
      if (entry.quantity === 'pressure') return { kind: 'node', node: network.portNode[port] };
      return { kind: 'port', port };
    }
    case 'node':
      return { kind: 'node', node: nodeOfTarget(network, sheet, entry) };
    default:
      return entry.on satisfies never;
  }
}

function measureOf(
  { network, run }: RunNetwork,
  sheet: RunSheet,
  { quantity, at }: TargetEntry,
  index: number,
  observed: Observed,
): Measure {
  if (observed.kind !== 'reach' || quantity === 'flow' || quantity === 'pressure') return { kind: 'signed' };
  const { chip } = network;
  const channel = network.reachChannel[observed.reach];
  const form = channelForm(chip, channel);
  if (form === null) {
    refuseTarget(
      sheet,
      index,
      `the depth of channel ${quote(chip.channels[channel].name)} is not known, so nothing in it can be computed; give its layer a depth`,
    );
  }
  switch (quantity) {
    case 'wall_shear':
      return { kind: 'shear', form, at, fluid: run.fluid };
    case 'velocity':
      return { kind: 'velocity', form };
    case 'residence_time':
      return { kind: 'time', form, lengthM: roomLengthM(network, observed.reach) };
    default:
      return quantity satisfies never;
  }
}

function refuseValue(
  sheet: RunSheet,
  { quantity, value }: TargetEntry,
  index: number,
  measure: Measure,
): void {
  const least = typeof value === 'number' ? value : (value.min ?? value.max ?? 0);
  if (measure.kind !== 'signed' && least < 0) {
    refuseTarget(
      sheet,
      index,
      `${quantity}: is below 0; it says how fast, not which way: leave the sign out, or ask for a flow, which has one`,
    );
  }
  if (typeof value === 'number') return;
  const { low, high } = observedWithin(measure, value);
  if (high === Infinity && (low === -Infinity || (measure.kind !== 'signed' && low === 0))) {
    refuseTarget(
      sheet,
      index,
      `${quantity}: the window is kept by any setting; give it a max, or a min above 0`,
    );
  }
}

function nameOf(network: Network, observed: Observed): string {
  switch (observed.kind) {
    case 'reach':
      return reachName(network, observed.reach);
    case 'port':
      return network.chip.ports[observed.port].name;
    case 'node':
      return nodeName(network, observed.node);
    default:
      return observed satisfies never;
  }
}
