/**
 * Settings of ports that meet targets. The network is linear: with the ports' settings s, what is observed is y = y0 + A s. One factorisation, one solve with
 * all wanted settings at nought (y0), one for each of them (a column of A), and a k × k system give the exact answer for all targets together; what rounding
 * leaves is taken away by one or two more solves.
 * Wall shear, velocity and residence time say how much flows and not which way. The way is that in which the reach flows under the run sheet as written; where
 * nothing flows there, that in which `by` drives it by pushing into the chip, or by drawing out of it where it says `expect: out`.
 */

import type { RunNetwork } from '../asked/run-network.ts';
import { refuseTarget } from '../asked/targets.ts';
import { remembered } from '../by-key.ts';
import { foundPumpLimits, pumpEntryOf, pumpLimitValues } from '../chip/pump-limits.ts';
import type { Run } from '../chip/types.ts';
import { InputError } from '../errors.ts';
import type { Network } from '../network/types.ts';
import { quote } from '../runsheet/quote.ts';
import type { PortCondition, RunSheet } from '../runsheet/types.ts';
import { drivesOf, type PortDrive } from './drives.ts';
import {
  type FlowFactor,
  factorFlow,
  flowStateOf,
  kindsOf,
  type PreparedFlow,
  prepareFlow,
} from './flow-state.ts';
import { type DenseFactor, factorDense } from './targets-dense.ts';
import {
  intersection,
  type PumpReach,
  pumpReach,
  type Response,
  settingsFor,
  settingsWithin,
} from './targets-limits.ts';
import {
  type Interval,
  observe,
  observedFor,
  observedWithin,
  readTargets,
  targetText,
  targetValue,
  type Wanted,
} from './targets-wanted.ts';
import type { FlowState } from './types.ts';

/** One target with the setting that meets it. */
export interface FoundTarget {
  readonly wanted: Wanted;
  /** Value of the target at the found settings, SI. */
  readonly reached: number;
  /** How the target, the pump's pressure and its flow follow this port's setting alone. */
  readonly response: Response;
  /** Pa in the chip at this port. */
  readonly portPressurePa: number;
  /** For a window: the settings of this port that keep it, the others as found. Infinite where open. */
  readonly range: Interval | null;
  /** By the run sheet's pump_limits for the port, and by what is usual where it gives none. */
  readonly reach: PumpReach;
  /** What the run sheet says of the port, in whose place the setting stands. */
  readonly given: PortCondition;
}

export interface FoundSettings {
  /** In the order of the run sheet. */
  readonly targets: readonly FoundTarget[];
  /** Conditions of all ports with the found settings in their places, in the order of chip.ports. */
  readonly conditions: readonly PortCondition[];
  /** Flow state at those settings. */
  readonly flow: FlowState;
}

/**
 * Finds the settings that meet the run sheet's targets. Of a window the middle of the settings that keep it is taken (of those that the pump can do, where
 * pump_limits are given); where it is open, its given end.
 * @throws InputError at the target's line: see readTargets; and a target that does not feel its port, targets that depend on each other, parts of the chip in
 * which nothing can be computed
 */
export function findSettings(at: RunNetwork): FoundSettings {
  const { sheet } = at.run;
  if (sheet === null || sheet.targets.length === 0) {
    throw new InputError(sheet?.file ?? at.network.chip.file, `there are no targets; ${TARGETS_EXAMPLE}`);
  }
  const wanted = readTargets(at);
  const system = prepareSystem(at, sheet, wanted);
  const ways = waysOf(at.run, system, wanted);
  const first = wanted.map((target, i) => firstAim(target, ways[i]));
  let solution = settle(system, wanted, first);
  const aims = wanted.map((target, i) => betterAim(system, target, i, ways[i], solution, first[i]));
  if (aims.some((aim, i) => aim !== first[i])) solution = settle(system, wanted, aims);
  return {
    targets: wanted.map((target, i) => foundTarget(system, target, i, ways[i], solution)),
    conditions: conditionsOf(at.run, wanted, solution.settings),
    flow: solution.state,
  };
}

/** How targets are written, for messages. */
export const TARGETS_EXAMPLE =
  'write under targets for example "- { channel: lane-1, wall_shear: 0.3 Pa, by: feed }"';

/** The linear system y = y0 + A s of the targets. */
interface System extends RunNetwork {
  readonly prepared: PreparedFlow;
  readonly factor: FlowFactor;
  /** Drives with every wanted setting at nought. */
  readonly start: readonly PortDrive[];
  readonly base: FlowState;
  /** For each wanted setting: the state that one UNIT of it alone makes. */
  readonly units: readonly FlowState[];
  readonly rows: readonly Float64Array[];
  readonly dense: Extract<DenseFactor, { kind: 'regular' }>;
}

interface Solution {
  readonly settings: Float64Array;
  readonly state: FlowState;
}

/** Sizes of a setting at which a chip's flows are of the usual size. */
const UNIT = { pressure: 1e3, flow: 1e-9 } as const;

function prepareSystem({ network, run }: RunNetwork, sheet: RunSheet, wanted: readonly Wanted[]): System {
  const prepared = prepareFlow(network, run);
  const written = drivesOf(run);
  const start = [...written];
  for (const { port, drive } of wanted) start[port] = driveOf(drive, 0);
  refuseSharedNodes(network, sheet, prepared, wanted, start);
  const factor = factorFlow(prepared, kindsOf(start));
  const base = flowStateOf(factor, start);
  const nought = start.map(({ kind }) => (kind === 'none' ? { kind } : driveOf(kind, 0)));
  const units = wanted.map(({ port, drive }) =>
    flowStateOf(factor, nought.with(port, driveOf(drive, UNIT[drive]))),
  );
  wanted.forEach((target, i) => {
    refuseUnknown(network, sheet, target, base, units[i]);
  });
  const rows = wanted.map(({ observed }) =>
    Float64Array.from(units, (unit, j) => observe(unit, observed) / UNIT[wanted[j].drive]),
  );
  wanted.forEach((target, i) => {
    if (isDeaf(target, units[i], rows[i][i] * UNIT[target.drive]))
      refuseTarget(sheet, target.index, whyDeaf({ network, run }, target, factor, units[i], start));
  });
  const dense = factorDense(rows);
  if (dense.kind === 'dependent') refuseDependent(sheet, wanted, dense.share);
  return { network, run, prepared, factor, start, base, units, rows, dense };
}

function driveOf(
  kind: 'pressure' | 'flow',
  setting: number,
): Extract<PortDrive, { kind: 'pressure' | 'flow' }> {
  return kind === 'pressure' ? { kind, pressurePa: setting } : { kind, flowM3s: setting };
}

/** Two ports that open into one node can't each hold a pressure of their own there. */
function refuseSharedNodes(
  { chip }: Network,
  sheet: RunSheet,
  { driveNode }: PreparedFlow,
  wanted: readonly Wanted[],
  start: readonly PortDrive[],
): void {
  const holders = new Map<number, number[]>();
  start.forEach(({ kind }, port) => {
    if (kind !== 'pressure') return;
    remembered(holders, driveNode[port], () => []).push(port);
  });
  for (const { index, port } of wanted) {
    const other = holders.get(driveNode[port])?.find((holder) => holder !== port);
    if (other === undefined) continue;
    refuseTarget(
      sheet,
      index,
      `by: ${quote(chip.ports[port].name)} and ${quote(chip.ports[other].name)} open into one place of the chip, which ${quote(chip.ports[other].name)} already holds at a pressure; give one of them tubing, a flow, or seal it`,
    );
  }
}

/** Parts in which nothing, or no pressure, can be computed. */
function refuseUnknown(
  network: Network,
  sheet: RunSheet,
  { index, observed, port, name }: Wanted,
  base: FlowState,
  unit: FlowState,
): void {
  const { chip, portNode } = network;
  const refuse = (what: string): never => refuseTarget(sheet, index, what);
  const by = quote(chip.ports[port].name);
  const what = quote(name);
  const part = base.nodePart[portNode[port]];
  if (base.nodePart[nodeOf(network, observed)] !== part)
    refuse(`${what} does not feel ${by}: no channel connects them`);
  const { status } = base.parts[part];
  switch (status) {
    case 'solved':
    case 'no-drive': // not so: `by` drives it
      break;
    case 'no-reference':
    case 'flows-do-not-add-up':
      refuse(
        `by: every port that ${by} is connected with is given a flow or closed, so what ${by} gives is fixed by the others; give one of them a pressure, a head or open`,
      );
      break;
    case 'unsized':
      refuse(`${what} can't be computed: a channel it is connected with has no depth; give its layer one`);
      break;
    case 'conflict':
      refuse(`${what} can't be computed: ports that open into one place hold it at different pressures`);
      break;
    default:
      status satisfies never;
  }
  if (Number.isNaN(observe(base, observed)) || Number.isNaN(observe(unit, observed)))
    refuse(
      `the flow of ${what} can't be told: another port holds the same place of the chip at the same pressure; give one of them tubing`,
    );
}

function nodeOf({ portNode, reachFrom }: Network, observed: Wanted['observed']): number {
  switch (observed.kind) {
    case 'reach':
      return reachFrom[observed.reach];
    case 'port':
      return portNode[observed.port];
    case 'node':
      return observed.node;
    default:
      return observed satisfies never;
  }
}

/** Flows balance to 1e-12 of what passes a node; what answers a port by less is that rounding. */
const DEAF = 1e-12;

/** Whether the port moves its target at all, against what it moves most. */
function isDeaf({ observed }: Wanted, unit: FlowState, answer: number): boolean {
  const most = largest(observed.kind === 'node' ? unit.nodePressure : unit.reachFlow);
  const ports = largest(observed.kind === 'node' ? unit.supplyPressure : unit.portFlow);
  return !(Math.abs(answer) > DEAF * Math.max(most, ports));
}

function largest(values: Float64Array): number {
  let most = 0;
  for (const value of values) if (Math.abs(value) > most) most = Math.abs(value);
  return most;
}

function whyDeaf(
  { network, run }: RunNetwork,
  { observed, port, name }: Wanted,
  { graphFactor }: FlowFactor,
  unit: FlowState,
  start: readonly PortDrive[],
): string {
  const { chip, portNode } = network;
  const by = quote(chip.ports[port].name);
  const what = quote(name);
  const feels = `does not feel ${by}`;
  if (observed.kind === 'port' && start[observed.port].kind === 'none') {
    const { kind } = run.ports[observed.port].condition;
    return `${what} ${feels}: the port is ${kind === 'unset' ? 'not set' : kind}, so nothing passes it; give it a pressure, a head or open`;
  }
  if (observed.kind === 'port' && start[observed.port].kind === 'flow')
    return `${what} ${feels}: the run sheet gives its flow; give it a pressure, a head or open`;
  if (observed.kind === 'node') {
    const holder = run.ports.findIndex(
      ({ tubing }, other) =>
        portNode[other] === observed.node && start[other].kind === 'pressure' && tubing.length === 0,
    );
    if (holder >= 0) return `${what} ${feels}: ${quote(chip.ports[holder].name)} holds the pressure there`;
  } else if (largest(unit.reachFlow) === 0 && largest(unit.portFlow) === 0) {
    return `nothing can flow whatever ${by} does: no other port that it is connected with holds a pressure, a head or is open`;
  } else if (observed.kind === 'reach' && graphFactor.analysis.chains.chainOfEdge[observed.reach] < 0) {
    return `${what} ${feels}: it lies on no way between ${by} and a port that holds a pressure, a head or is open, so nothing of its flow passes there`;
  }
  return `${what} ${feels}: the channels round it are balanced, so whatever ${by} does changes nothing there; set it by another port`;
}

function refuseDependent(sheet: RunSheet, wanted: readonly Wanted[], share: Float64Array): never {
  const members = wanted.filter((_, i) => share[i] !== 0);
  const last = members[members.length - 1];
  const others = members.slice(0, -1).map(targetText);
  const ports = members.map(({ entry }) => quote(entry.by)).join(' and ');
  return refuseTarget(
    sheet,
    last.index,
    `${last.entry.quantity} of ${quote(last.name)} depends on ${others.join(' and ')}: whatever ${ports} do moves ${members.length === 2 ? 'both' : 'them'} in one fixed proportion, so they can't be set apart; leave one out, or set it by a port that reaches them differently`,
  );
}

/** +1 or −1 for each target: the way of the flow that a target without sign is given. */
function waysOf(run: Run, system: System, wanted: readonly Wanted[]): readonly (1 | -1)[] {
  let asWritten: FlowState | null = null;
  return wanted.map(({ observed, measure, port }, i) => {
    if (measure.kind === 'signed') return 1;
    asWritten ??= stateAsWritten(system);
    const now = observe(asWritten, observed);
    if (now > 0) return 1;
    if (now < 0) return -1;
    const pushing = system.rows[i][i] > 0;
    return pushing !== (run.ports[port].expect === 'out') ? 1 : -1;
  });
}

function stateAsWritten({ run, prepared, factor }: System): FlowState {
  const drives = drivesOf(run);
  const kinds = kindsOf(drives);
  const same = kinds.every((kind, port) => kind === factor.kinds[port]);
  return flowStateOf(same ? factor : factorFlow(prepared, kinds), drives);
}

/** What to observe at first: the value; of a window its middle, or its one end. With its sign. */
function firstAim({ entry: { value }, measure }: Wanted, way: 1 | -1): number {
  if (typeof value === 'number') return way * observedFor(measure, value);
  const { low, high } = observedWithin(measure, value);
  if (high === Infinity) return way * low;
  return low === -Infinity ? high : way * (low + (high - low) / 2);
}

/** Of a window under pump limits: the middle of what of it the pump can do, the other settings as found at first. */
function betterAim(
  system: System,
  target: Wanted,
  i: number,
  way: 1 | -1,
  solution: Solution,
  aim: number,
): number {
  const limits = pumpEntryOf(system.run, target.entry.by);
  if (typeof target.entry.value === 'number' || limits === null) return aim;
  const response = responseOf(system, target, i, solution);
  const range = rangeOf(target, way, response);
  const able = settingsWithin(response, limits);
  const both = range === null || able === null ? null : intersection(range, able);
  if (both === null || !Number.isFinite(both.low) || !Number.isFinite(both.high)) return aim;
  const middle = both.low + (both.high - both.low) / 2;
  return response.observed.at + response.observed.slope * (middle - response.setting);
}

const MOST_REFINEMENTS = 3;

/** Settings at which the aims are observed, refined until nothing is left to gain. */
function settle(
  { factor, start, base, dense, rows }: System,
  wanted: readonly Wanted[],
  aims: readonly number[],
): Solution {
  const stateAt = (settings: Float64Array): FlowState => {
    const drives = [...start];
    wanted.forEach(({ port, drive }, i) => {
      drives[port] = driveOf(drive, settings[i]);
    });
    return flowStateOf(factor, drives);
  };
  const missing = (state: FlowState): Float64Array =>
    Float64Array.from(wanted, ({ observed }, i) => aims[i] - observe(state, observed));
  const sizeOf = (left: Float64Array, settings: Float64Array): number =>
    left.reduce((worst, value, i) => {
      const whole = Math.abs(aims[i]) || rows[i].reduce((sum, a, j) => sum + Math.abs(a * settings[j]), 0);
      return Math.max(worst, value === 0 ? 0 : Math.abs(value) / whole);
    }, 0);
  let settings = dense.solve(missing(base));
  let state = stateAt(settings);
  let left = missing(state);
  for (let step = 0; step < MOST_REFINEMENTS && sizeOf(left, settings) > 0; step++) {
    const correction = dense.solve(left);
    const next = settings.map((value, i) => value + correction[i]);
    const nextState = stateAt(next);
    const nextLeft = missing(nextState);
    if (!(sizeOf(nextLeft, next) < sizeOf(left, settings))) break;
    settings = next;
    state = nextState;
    left = nextLeft;
  }
  return { settings, state };
}

function responseOf(
  { rows, units }: System,
  { observed, port, drive }: Wanted,
  i: number,
  { settings, state }: Solution,
): Response {
  const unit = units[i];
  return {
    setting: settings[i],
    observed: { at: observe(state, observed), slope: rows[i][i] },
    supplyPressurePa: {
      at: state.supplyPressure[port],
      slope: drive === 'pressure' ? 1 : unit.supplyPressure[port] / UNIT.flow,
    },
    flowM3s: { at: state.portFlow[port], slope: drive === 'flow' ? 1 : unit.portFlow[port] / UNIT.pressure },
  };
}

/** Settings of this port that keep the window. */
function rangeOf({ entry: { value }, measure }: Wanted, way: 1 | -1, response: Response): Interval | null {
  if (typeof value === 'number') return null;
  const { low, high } = observedWithin(measure, value);
  return settingsFor(response, response.observed, way > 0 ? { low, high } : { low: -high, high: -low });
}

function foundTarget(
  system: System,
  target: Wanted,
  i: number,
  way: 1 | -1,
  solution: Solution,
): FoundTarget {
  const response = responseOf(system, target, i, solution);
  return {
    wanted: target,
    reached: targetValue(target.measure, response.observed.at),
    response,
    portPressurePa: solution.state.portPressure[target.port],
    range: rangeOf(target, way, response),
    reach: pumpReach(response, pumpLimitValues(foundPumpLimits(system.run, target.entry.by))),
    given: system.run.ports[target.port].condition,
  };
}

function conditionsOf(
  { ports }: Run,
  wanted: readonly Wanted[],
  settings: Float64Array,
): readonly PortCondition[] {
  const conditions = ports.map(({ condition }) => condition);
  wanted.forEach(({ port, drive }, i) => {
    conditions[port] = driveOf(drive, settings[i] + 0);
  });
  return conditions;
}
