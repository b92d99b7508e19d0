import { acceptedLimits, type KeptLimits } from '../asked/accepted.ts';
import { NEAR_VACUUM_PA } from '../asked/near-vacuum.ts';
import { passagesOf } from '../asked/passages.ts';
import { reachesOfChannel } from '../asked/reaches.ts';
import type { RunNetwork } from '../asked/run-network.ts';
import { nodeOfTarget, reachOfTarget } from '../asked/targets.ts';
import { asksOf, hasWindow, type WindowAsk, type WindowNumber, wallsOf } from '../asked/windows.ts';
import { isAbove, isBelow } from '../asked/within.ts';
import { pumpEntryOf } from '../chip/pump-limits.ts';
import { roomLengthM } from '../network/lengths.ts';
import { nodeName, reachName } from '../network/names.ts';
import type { Network } from '../network/types.ts';
import type { ShearRange } from '../physics/duct.ts';
import {
  type DuctState,
  ductState,
  fastestTime,
  residenceTime,
  type ShearAt,
  shareInside,
  volumeOf,
  type Wall,
  wallShear,
} from '../physics/duct-state.ts';
import type { ChannelEntry, PumpLimitEntry, TargetEntry } from '../runsheet/types.ts';
import type { FlowState } from '../solve/types.ts';
import type { ChipState, SpreadModel } from './model.ts';

/** What a number is computed from. Flows of reaches count in the direction of the nominal flow. */
export type Subject =
  | { readonly kind: 'port flow'; readonly port: number }
  /** In the chip at the port, or at the far end of its tubing. */
  | { readonly kind: 'port pressure'; readonly port: number; readonly at: 'chip' | 'supply' }
  | { readonly kind: 'node pressure'; readonly node: number }
  /** A window on a channel asks for its size; a target asks with the sign, from → to. */
  | {
      readonly kind: 'reach flow';
      readonly reach: number;
      readonly sign: 1 | -1;
      readonly asked: 'size' | 'signed';
    }
  | { readonly kind: 'shear'; readonly reach: number; readonly wall: Wall; readonly at: ShearAt }
  | { readonly kind: 'velocity'; readonly reach: number }
  /** Through reaches that fluid passes one after the other: volume over flow, or on the axis. */
  | { readonly kind: 'time'; readonly reaches: readonly number[]; readonly at: 'mean' | 'fastest' }
  | {
      readonly kind: 'share inside';
      readonly reach: number;
      readonly wall: Wall;
      readonly range: ShearRange;
    };

export type OutputQuantity =
  | 'flow'
  | 'pressure'
  | 'supply_pressure'
  | 'wall_shear_floor_mean'
  | 'wall_shear_floor_peak'
  | 'wall_shear_side_mean'
  | 'wall_shear_side_peak'
  | 'floor_share_inside_window'
  | 'side_share_inside_window'
  | 'velocity'
  | 'residence_time'
  | 'fastest_time';

export interface Output {
  readonly on: 'port' | 'reach' | 'channel' | 'node';
  /** Of the port, reach, channel (a time through several of its reaches) or node. */
  readonly name: string;
  readonly quantity: OutputQuantity;
  readonly unit: 'm³/s' | 'Pa' | 'm/s' | 's' | '';
  /** What windows and limits ask of this number, all of them together. */
  readonly min: number | null;
  readonly max: number | null;
  /** Whether a window of a channel or of a target is among them. */
  readonly hasWindow: boolean;
  readonly isTarget: boolean;
  readonly subject: Subject;
}

/**
 * What is followed: flow and pressure of every port, everything about every channel with a window, every target; each once.
 * @throws InputError for a target on no reach or node, or on several
 */
export function listOutputs(at: RunNetwork, nominal: FlowState): readonly Output[] {
  const outputs = new Map<string, Output>();
  const add = (output: Output): void => {
    const key = `${output.on} ${output.quantity} ${JSON.stringify(output.subject)}`;
    const known = outputs.get(key);
    outputs.set(key, known === undefined ? output : bothAsked(known, output));
  };
  for (const output of portOutputs(at)) add(output);
  for (const output of targetOutputs(at, nominal)) add(output);
  at.run.channels.forEach((settings, channel) => {
    if (hasWindow(settings)) for (const output of windowOutputs(at, nominal, channel, settings)) add(output);
  });
  return [...outputs.values()];
}

/** One number of which two things are asked: it must keep both. */
function bothAsked(a: Output, b: Output): Output {
  return {
    ...a,
    min: tighter(a.min, b.min, Math.max),
    max: tighter(a.max, b.max, Math.min),
    hasWindow: a.hasWindow || b.hasWindow,
    isTarget: a.isTarget || b.isTarget,
  };
}

/** Nodes of the network whose pressure is an output. */
export function pressureNodesOf({ network, run: { sheet } }: RunNetwork): readonly number[] {
  if (sheet === null) return [...network.portNode];
  const named = sheet.targets.filter(({ on }) => on === 'node');
  return [...network.portNode, ...named.map((target) => nodeOfTarget(network, sheet, target))];
}

/** NaN where the number does not exist. */
export function outputValue({ subject }: Output, model: SpreadModel, state: ChipState): number {
  const { network } = model;
  switch (subject.kind) {
    case 'port flow':
      return portFlow(subject.port, model, state);
    case 'port pressure': {
      const node = subject.at === 'chip' ? network.portNode : model.factor.prepared.driveNode;
      return known(model.nominal.portPressure[subject.port], state.flow.pressureHi[node[subject.port]]);
    }
    case 'node pressure':
      return known(model.nominal.nodePressure[subject.node], state.flow.pressureHi[subject.node]);
    case 'reach flow':
      return known(model.nominal.reachFlow[subject.reach], subject.sign * state.flow.flow[subject.reach]);
    case 'shear': {
      const duct = ductStateOf(subject.reach, model, state);
      return duct === null ? Number.NaN : wallShear(duct, subject.wall, subject.at);
    }
    case 'velocity':
      return ductStateOf(subject.reach, model, state)?.meanVelocity ?? Number.NaN;
    case 'time': {
      let seconds = 0;
      for (const reach of subject.reaches) seconds += secondsIn(reach, subject.at, model, state);
      return Number.isFinite(seconds) ? seconds : Number.NaN;
    }
    case 'share inside': {
      const duct = ductStateOf(subject.reach, model, state);
      return duct === null ? Number.NaN : shareInside(duct, subject.wall, subject.range);
    }
    default:
      return subject satisfies never;
  }
}

/** Flow into the chip at a port: found where it holds a pressure, given elsewhere; NaN where two ports hold one node. */
export function portFlow(port: number, { drives, factor, nominal }: SpreadModel, state: ChipState): number {
  if (Number.isNaN(nominal.portFlow[port])) return Number.NaN;
  if (drives[port].kind !== 'pressure') return state.givenFlow[port];
  const node = factor.prepared.driveNode[port];
  return state.flow.inflow[node] - state.injection[node];
}

/** What flows in a reach; null where it is not known. */
export function ductStateOf(
  reach: number,
  { sections, nominal }: SpreadModel,
  { form, fluid, flow }: ChipState,
): DuctState | null {
  const duct = form[sections.ofReach[reach]];
  if (duct === null || Number.isNaN(nominal.reachFlow[reach])) return null;
  return ductState(duct, flow.flow[reach], fluid);
}

/** Infinite without flow, NaN where nothing is known. */
export function secondsIn(
  reach: number,
  at: 'mean' | 'fastest',
  model: SpreadModel,
  state: ChipState,
): number {
  const duct = ductStateOf(reach, model, state);
  if (duct === null) return Number.NaN;
  const lengthM = roomLengthM(model.network, reach);
  return at === 'mean'
    ? residenceTime(volumeOf(duct.form, lengthM), duct.flowM3s)
    : fastestTime(duct, lengthM);
}

/** A number that the chip as drawn does not have has no spread either. */
function known(nominal: number, value: number): number {
  return Number.isNaN(nominal) ? Number.NaN : value;
}

/* ---------- ports ---------- */

const PLAIN = { min: null, max: null, hasWindow: false, isTarget: false } as const;

function portOutputs(at: RunNetwork): Output[] {
  const { network, run } = at;
  return network.chip.ports.flatMap(({ name, drawnName }, port): Output[] => {
    const { condition, tubing } = run.ports[port];
    const pump = pumpEntryOf(run, drawnName);
    const isShut = condition.kind === 'sealed' || condition.kind === 'unset';
    const hasSupply = tubing.length > 0 && !isShut;
    const pressure = (end: 'chip' | 'supply'): Output => {
      const atPump = end === 'supply' || !hasSupply ? pump : null;
      return {
        ...PLAIN,
        ...pressureLimits(at, name, atPump),
        on: 'port',
        name,
        quantity: end === 'chip' ? 'pressure' : 'supply_pressure',
        unit: 'Pa',
        subject: { kind: 'port pressure', port, at: end },
      };
    };
    const mostFlow = acceptedLimits(at, 'pump-limit', [name], 'm³/s', null, pump?.maxFlowM3s ?? null).max;
    const flow: Output = {
      ...PLAIN,
      on: 'port',
      name,
      quantity: 'flow',
      unit: 'm³/s',
      min: mostFlow === null ? null : -mostFlow,
      max: mostFlow,
      subject: { kind: 'port flow', port },
    };
    return [...(isShut ? [] : [flow]), pressure('chip'), ...(hasSupply ? [pressure('supply')] : [])];
  });
}

/** What the chip holds, and at the end where the pump is what the pump does. */
function pressureLimits(at: RunNetwork, port: string, pump: PumpLimitEntry | null): KeptLimits {
  const { maxPressurePa, minPressurePa } = at.run.limits;
  const least = Math.max(minPressurePa?.value ?? NEAR_VACUUM_PA, NEAR_VACUUM_PA);
  const low = acceptedLimits(at, 'under-pressure', [port], 'Pa', least, null).min;
  const high = acceptedLimits(at, 'over-pressure', [port], 'Pa', null, maxPressurePa?.value ?? null).max;
  const [pumpLow, pumpHigh] = [pump?.minPressurePa ?? null, pump?.maxPressurePa ?? null];
  const atPump = acceptedLimits(at, 'pump-limit', [port], 'Pa', pumpLow, pumpHigh);
  return { min: tighter(low, atPump.min, Math.max), max: tighter(high, atPump.max, Math.min) };
}

function tighter(
  a: number | null,
  b: number | null,
  choose: (a: number, b: number) => number,
): number | null {
  return a === null ? b : b === null ? a : choose(a, b);
}

/* ---------- channels with a window ---------- */

function windowOutputs(
  at: RunNetwork,
  nominal: FlowState,
  channel: number,
  settings: ChannelEntry,
): Output[] {
  const { network } = at;
  const asks = asksOf(settings);
  const { name: channelName } = network.chip.channels[channel];
  const outputs: Output[] = [];
  for (const reach of reachesOfChannel(network, channel)) {
    const names = [reachName(network, reach), channelName];
    outputs.push(
      asked(at, asks, names, reachFlowOutput(network, nominal, reach), ({ kind }) => kind === 'flow'),
    );
    for (const wall of wallsOf(settings)) outputs.push(...shearOutputs(at, reach, wall, asks, names));
  }
  outputs.push(...timeOutputs(at, channel, nominal.reachFlow));
  return outputs;
}

/** An output with what the windows ask of its number, as far as nobody has taken on other values. */
function asked(
  at: RunNetwork,
  asks: readonly WindowAsk[],
  names: readonly string[],
  output: Output,
  isMeant: (number: WindowNumber) => boolean,
): Output {
  const meant = asks.filter(({ of }) => isMeant(of));
  if (meant.length === 0) return output;
  const limit = (side: WindowAsk['side']): number | null =>
    meant.find((ask) => ask.side === side)?.limit ?? null;
  const limits = acceptedLimits(at, meant[0].rule, names, output.unit, limit('least'), limit('most'));
  return { ...output, ...limits, hasWindow: true };
}

/** Times through the reaches that fluid passes one after the other under these flows, with what the channel's window asks of them. */
export function timeOutputs(at: RunNetwork, channel: number, reachFlow: Float64Array): Output[] {
  const { network, run } = at;
  const { name } = network.chip.channels[channel];
  const settings = run.channels[channel];
  const asks = settings === null ? [] : asksOf(settings);
  const hasWindow = asks.some(({ of }) => of.kind === 'time');
  return passagesOf(network, [...reachesOfChannel(network, channel)], reachFlow).flatMap((passage) => {
    const names = [...passage.map((r) => reachName(network, r)), name];
    const [mean, fastest] = (['mean', 'fastest'] as const).map((end) =>
      asked(at, asks, names, timeOutput(network, passage, end), (of) => of.kind === 'time' && of.at === end),
    );
    return [{ ...mean, hasWindow }, ...(fastest.min === null ? [] : [fastest])];
  });
}

/** Mean and peak on a wall, also where no window asks for them; the share of it inside the window where one does. */
function shearOutputs(
  at: RunNetwork,
  reach: number,
  wall: Wall,
  asks: readonly WindowAsk[],
  names: readonly string[],
): Output[] {
  const { network } = at;
  const shears = (['mean', 'peak'] as const).map((end) => {
    const plain = shearOutput(network, reach, wall, end);
    const output = asked(at, asks, names, plain, (of) => of.kind === 'shear' && of.at === end);
    return { ...output, hasWindow: output.min !== null || output.max !== null };
  });
  const shares = asks.flatMap(({ of }) => {
    if (of.kind !== 'share inside') return [];
    const share: Output = {
      ...PLAIN,
      on: 'reach',
      name: reachName(network, reach),
      quantity: `${wall}_share_inside_window`,
      unit: '',
      subject: { kind: 'share inside', reach, wall, range: of.range },
    };
    return [asked(at, asks, names, share, ({ kind }) => kind === 'share inside')];
  });
  return [...shears, ...shares];
}

function reachFlowOutput(network: Network, nominal: FlowState, reach: number): Output {
  const sign = nominal.reachFlow[reach] < 0 ? -1 : 1;
  return {
    ...PLAIN,
    on: 'reach',
    name: reachName(network, reach),
    quantity: 'flow',
    unit: 'm³/s',
    subject: { kind: 'reach flow', reach, sign, asked: 'size' },
  };
}

function shearOutput(network: Network, reach: number, wall: Wall, at: ShearAt): Output {
  return {
    ...PLAIN,
    on: 'reach',
    name: reachName(network, reach),
    quantity: `wall_shear_${wall}_${at}`,
    unit: 'Pa',
    subject: { kind: 'shear', reach, wall, at },
  };
}

function timeOutput(network: Network, reaches: readonly number[], at: 'mean' | 'fastest'): Output {
  const isOne = reaches.length === 1;
  const [first] = reaches;
  return {
    ...PLAIN,
    on: isOne ? 'reach' : 'channel',
    name: isOne ? reachName(network, first) : network.chip.channels[network.reachChannel[first]].name,
    quantity: at === 'mean' ? 'residence_time' : 'fastest_time',
    unit: 's',
    subject: { kind: 'time', reaches, at },
  };
}

/* ---------- targets ---------- */

function targetOutputs(at: RunNetwork, nominal: FlowState): Output[] {
  const { network, run } = at;
  const { chip } = network;
  const { sheet } = run;
  if (sheet === null) return [];
  return sheet.targets.flatMap((target): Output[] => {
    switch (target.on) {
      case 'port': {
        const port = chip.ports.findIndex(({ drawnName }) => drawnName === target.name);
        const wanted = portOutputs(at).filter(
          ({ subject, quantity }) =>
            'port' in subject &&
            subject.port === port &&
            quantity === (target.quantity === 'flow' ? 'flow' : 'pressure'),
        );
        return wanted.map((output) => ({ ...output, ...askedByTarget(target) }));
      }
      case 'node': {
        const node = nodeOfTarget(network, sheet, target);
        return [
          {
            ...PLAIN,
            on: 'node',
            name: nodeName(network, node),
            quantity: 'pressure',
            unit: 'Pa',
            ...askedByTarget(target),
            subject: { kind: 'node pressure', node },
          },
        ];
      }
      case 'channel': {
        const reach = reachOfTarget(network, sheet, target);
        return [{ ...reachTarget(network, nominal, reach, target), ...askedByTarget(target) }];
      }
      default:
        return target.on satisfies never;
    }
  });
}

/** A window is kept or not in every draw; one value is only aimed at. */
function askedByTarget({ value }: TargetEntry): Pick<Output, 'min' | 'max' | 'hasWindow' | 'isTarget'> {
  if (typeof value === 'number') return { min: null, max: null, hasWindow: false, isTarget: true };
  return { min: value.min, max: value.max, hasWindow: true, isTarget: true };
}

function reachTarget(network: Network, nominal: FlowState, reach: number, target: TargetEntry): Output {
  switch (target.quantity) {
    case 'flow': {
      const output = reachFlowOutput(network, nominal, reach);
      if (typeof target.value === 'number') return output;
      return { ...output, subject: { kind: 'reach flow', reach, sign: 1, asked: 'signed' } };
    }
    case 'wall_shear':
      return shearOutput(network, reach, 'floor', target.at);
    case 'residence_time':
      return timeOutput(network, [reach], 'mean');
    case 'velocity':
      return {
        ...PLAIN,
        on: 'reach',
        name: reachName(network, reach),
        quantity: 'velocity',
        unit: 'm/s',
        subject: { kind: 'velocity', reach },
      };
    case 'pressure':
      throw new RangeError('a pressure target is at a port or a node');
    default:
      return target.quantity satisfies never;
  }
}

/** Whether a value keeps what is asked of it, with the slack of the rules. A channel's window on a flow is one on its magnitude, whatever its direction. */
export function isKept({ min, max, subject }: Output, value: number): boolean {
  const judged = subject.kind === 'reach flow' && subject.asked === 'size' ? Math.abs(value) : value;
  return !(min !== null && isBelow(judged, min)) && !(max !== null && isAbove(judged, max));
}
