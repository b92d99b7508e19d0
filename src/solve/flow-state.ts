/**
 * Pressures and flows of a network, in phases that can be repeated by themselves:
 *   prepareFlow   the network → its graph with tubing, its parts
 *   factorFlow    + which ports hold a pressure or a flow, + resistances → factor (the analysis is kept per set of such ports)
 *   flowStateOf   + the pressures and flows themselves → FlowState
 * A port's tubing is one edge more, to a node of its own at the far end, where the drive acts; so a sealed port with tubing hangs on the chip as a dead end, and a
 * syringe pump's supply pressure is simply the pressure of that node.
 */

import { remembered } from '../by-key.ts';
import { type Balance, balanceOf } from './balance.ts';
import { drivesOf, type PortDrive } from './drives.ts';
import type { FlowGraph } from './flow-graph.ts';
import type { FlowNetwork, FlowRun } from './flow-network.ts';
import {
  analyseGraph,
  factorGraph,
  type GraphAnalysis,
  type GraphFactor,
  type GraphFlow,
  type GraphLoad,
  solveGraph,
} from './graph.ts';
import { type Parts, partsOf } from './parts.ts';
import { nominalResistances, type Resistances } from './resistances.ts';
import type { FlowPart, FlowState } from './types.ts';

export interface PreparedFlow {
  readonly network: FlowNetwork;
  readonly nominal: Resistances;
  /** Nodes of the network, then one per port with tubing; reaches of the network, then one edge per port with tubing (from the far end to the chip). */
  readonly graph: FlowGraph;
  /** Node at which each port's drive acts. */
  readonly driveNode: Int32Array;
  /** Edge of each port's tubing, −1 without. */
  readonly tubingEdge: Int32Array;
  readonly parts: Parts;
  /** Nodes, beside those of flow-driven ports, into which sensitivities may inject. */
  readonly watchedNodes: readonly number[];
  /** Analyses made so far, by the nodes fixed and injected. */
  readonly analyses: Map<string, GraphAnalysis>;
}

export interface FlowFactor {
  readonly prepared: PreparedFlow;
  readonly kinds: readonly PortDrive['kind'][];
  readonly resistances: Resistances;
  readonly graphFactor: GraphFactor;
  /** For each part: what its kinds and resistances allow, before any value is known. */
  readonly partOutlook: readonly PartOutlook[];
}

type PartOutlook =
  /** A port holds a pressure. */
  | { readonly kind: 'referenced' }
  /** Flows only: the drive node of this port is held at 0 to find them. */
  | { readonly kind: 'floating'; readonly heldPort: number }
  | { readonly kind: 'undriven' }
  | { readonly kind: 'unsized'; readonly floating: boolean };

/** Flow state of a network as a run sets its ports. */
export function solveFlow(network: FlowNetwork, run: FlowRun): FlowState {
  const prepared = prepareFlow(network, run);
  const drives = drivesOf(run);
  return flowStateOf(factorFlow(prepared, kindsOf(drives)), drives);
}

export function kindsOf(drives: readonly PortDrive[]): readonly PortDrive['kind'][] {
  return drives.map(({ kind }) => kind);
}

/**
 * First phase.
 * @param options.watchedNodes nodes of the network whose pressure a gradient will be asked for
 */
export function prepareFlow(
  network: FlowNetwork,
  run: FlowRun,
  options: { readonly watchedNodes?: readonly number[] } = {},
): PreparedFlow {
  const nominal = nominalResistances(network, run);
  const { nodeCount, reachFrom, reachTo, reachCount, portNode } = network;
  const driveNode = portNode.slice();
  const tubingEdge = new Int32Array(portNode.length).fill(-1);
  const tubingFrom: number[] = [];
  const tubingTo: number[] = [];
  for (let port = 0; port < portNode.length; port++) {
    if (nominal.tubing[port] === 0) continue;
    driveNode[port] = nodeCount + tubingFrom.length;
    tubingEdge[port] = reachCount + tubingFrom.length;
    tubingFrom.push(driveNode[port]);
    tubingTo.push(portNode[port]);
  }
  const graph: FlowGraph = {
    nodeCount: nodeCount + tubingFrom.length,
    from: Int32Array.from([...reachFrom, ...tubingFrom]),
    to: Int32Array.from([...reachTo, ...tubingTo]),
  };
  return {
    network,
    nominal,
    graph,
    driveNode,
    tubingEdge,
    parts: partsOf(network),
    watchedNodes: options.watchedNodes ?? [],
    analyses: new Map(),
  };
}

/**
 * Second phase.
 * @param kinds of each port's drive; the values come with flowStateOf
 * @param resistances other than nominal; tubing must be > 0 exactly where it nominally is
 * @param reuse a factor of the same preparation that is no longer needed; its memory is overwritten
 */
export function factorFlow(
  prepared: PreparedFlow,
  kinds: readonly PortDrive['kind'][],
  resistances: Resistances = prepared.nominal,
  reuse?: FlowFactor,
): FlowFactor {
  const partOutlook = outlookOf(prepared, kinds, resistances);
  const analysis = analysisFor(prepared, kinds, partOutlook);
  const { reachCount } = prepared.network;
  const edgeResistance = new Float64Array(prepared.graph.from.length);
  edgeResistance.set(resistances.reach);
  prepared.tubingEdge.forEach((edge, port) => {
    if (edge >= reachCount) edgeResistance[edge] = resistances.tubing[port];
  });
  const graphFactor = factorGraph(analysis, edgeResistance, reuse?.graphFactor);
  return { prepared, kinds, resistances, graphFactor, partOutlook };
}

function outlookOf(
  { network, parts }: PreparedFlow,
  kinds: readonly PortDrive['kind'][],
  resistances: Resistances,
): PartOutlook[] {
  const unsized = new Uint8Array(parts.count);
  for (let r = 0; r < network.reachCount; r++) {
    if (Number.isNaN(resistances.reach[r])) unsized[parts.partOfNode[network.reachFrom[r]]] = 1;
  }
  return parts.portsOfPart.map((ports, part): PartOutlook => {
    const referenced = ports.some((port) => kinds[port] === 'pressure');
    const heldPort = ports.find((port) => kinds[port] === 'flow');
    if (!referenced && heldPort === undefined) return { kind: 'undriven' };
    if (unsized[part] === 1) return { kind: 'unsized', floating: !referenced };
    return referenced || heldPort === undefined ? { kind: 'referenced' } : { kind: 'floating', heldPort };
  });
}

function analysisFor(
  prepared: PreparedFlow,
  kinds: readonly PortDrive['kind'][],
  partOutlook: readonly PartOutlook[],
): GraphAnalysis {
  const { driveNode, parts, watchedNodes, analyses, graph } = prepared;
  const fixed: number[] = [];
  const injected: number[] = [...watchedNodes];
  partOutlook.forEach((outlook, part) => {
    if (outlook.kind === 'undriven' || outlook.kind === 'unsized') return;
    for (const port of parts.portsOfPart[part]) {
      const held = outlook.kind === 'floating' && outlook.heldPort === port;
      if (held || kinds[port] === 'pressure') fixed.push(driveNode[port]);
      else if (kinds[port] === 'flow') injected.push(driveNode[port]);
    }
  });
  return remembered(analyses, `${fixed.join()}|${injected.join()}`, () =>
    analyseGraph(graph, Int32Array.from(fixed), Int32Array.from(injected)),
  );
}

/** Third phase. The drives must be of the kinds that were factored. */
export function flowStateOf(factor: FlowFactor, drives: readonly PortDrive[]): FlowState {
  const parts = judgeParts(factor, drives);
  const graphFlow = solveGraph(factor.graphFactor, loadOf(factor, drives));
  return stateFrom(factor, drives, parts, graphFlow);
}

/** Given flows of a part without reference count as adding up below this share of the largest. */
const ADDS_UP = 1e-9;

function judgeParts(
  { prepared, partOutlook }: FlowFactor,
  drives: readonly PortDrive[],
): readonly FlowPart[] {
  const { parts, driveNode } = prepared;
  return partOutlook.map((outlook, part): FlowPart => {
    const ports = parts.portsOfPart[part];
    let flowSumM3s = 0;
    let largest = 0;
    for (const port of ports) {
      const drive = drives[port];
      if (drive.kind !== 'flow') continue;
      flowSumM3s += drive.flowM3s;
      largest = Math.max(largest, Math.abs(drive.flowM3s));
    }
    const addsUp = Math.abs(flowSumM3s) <= ADDS_UP * largest;
    const common = { nodes: parts.nodesInPart[part], ports, flowSumM3s };
    switch (outlook.kind) {
      case 'undriven':
        return { ...common, status: 'no-drive' };
      case 'unsized':
        if (outlook.floating && !addsUp) return { ...common, status: 'flows-do-not-add-up' };
        return { ...common, status: holdsConflict(ports, drives, driveNode) ? 'conflict' : 'unsized' };
      case 'floating':
        return { ...common, status: addsUp ? 'no-reference' : 'flows-do-not-add-up' };
      case 'referenced':
        return { ...common, status: holdsConflict(ports, drives, driveNode) ? 'conflict' : 'solved' };
      default:
        return outlook satisfies never;
    }
  });
}

function holdsConflict(
  ports: readonly number[],
  drives: readonly PortDrive[],
  driveNode: Int32Array,
): boolean {
  const pressureAt = new Map<number, number>();
  for (const port of ports) {
    const drive = drives[port];
    if (drive.kind !== 'pressure') continue;
    if (remembered(pressureAt, driveNode[port], () => drive.pressurePa) !== drive.pressurePa) return true;
  }
  return false;
}

/** Load of the graph for these drives, as sensitivities need it too. */
export function loadOf(factor: FlowFactor, drives: readonly PortDrive[]): GraphLoad {
  const { graph, driveNode } = factor.prepared;
  const fixedPressure = new Float64Array(graph.nodeCount);
  const injection = new Float64Array(graph.nodeCount);
  const given = givenFlows(factor, drives);
  drives.forEach((drive, port) => {
    if (drive.kind !== factor.kinds[port]) {
      throw new RangeError(`port ${port} is driven by ${drive.kind}, but ${factor.kinds[port]} was factored`);
    }
    if (drive.kind === 'pressure') fixedPressure[driveNode[port]] = drive.pressurePa;
    injection[driveNode[port]] += given[port];
  });
  return { fixedPressure, injection };
}

/** Given flow of each port, 0 for others. What those of a part without reference lack of adding up goes to the largest, where it matters least. */
function givenFlows({ prepared, partOutlook }: FlowFactor, drives: readonly PortDrive[]): Float64Array {
  const given = Float64Array.from(drives, (drive) => (drive.kind === 'flow' ? drive.flowM3s : 0));
  partOutlook.forEach((outlook, part) => {
    if (outlook.kind !== 'floating') return;
    let sum = 0;
    let largest = outlook.heldPort;
    for (const port of prepared.parts.portsOfPart[part]) {
      sum += given[port];
      if (Math.abs(given[port]) > Math.abs(given[largest])) largest = port;
    }
    given[largest] -= sum;
  });
  return given;
}

function stateFrom(
  factor: FlowFactor,
  drives: readonly PortDrive[],
  parts: readonly FlowPart[],
  graphFlow: GraphFlow,
): FlowState {
  const { prepared, resistances } = factor;
  const { network, driveNode } = prepared;
  const { partOfNode } = prepared.parts;
  const { nodeCount, reachCount, reachFrom, portNode } = network;
  const flowsKnown = parts.map(({ status }) => status === 'solved' || status === 'no-reference');
  const pressuresKnown = parts.map(({ status }) => status === 'solved');

  const nodePressure = new Float64Array(nodeCount).fill(Number.NaN);
  for (let i = 0; i < nodeCount; i++)
    if (pressuresKnown[partOfNode[i]]) nodePressure[i] = graphFlow.pressureHi[i] + 0;
  const reachFlow = new Float64Array(reachCount).fill(Number.NaN);
  const reachPressureDrop = new Float64Array(reachCount).fill(Number.NaN);
  for (let r = 0; r < reachCount; r++) {
    if (!flowsKnown[partOfNode[reachFrom[r]]]) continue;
    reachFlow[r] = graphFlow.flow[r];
    // The flow is the refined pressures' difference over the resistance, so this is that difference, without their common part's rounding.
    reachPressureDrop[r] = resistances.reach[r] * reachFlow[r];
  }
  const portPressure = Float64Array.from(portNode, (node) => nodePressure[node]);
  const supplyPressure = Float64Array.from(driveNode, (node, port) =>
    pressuresKnown[partOfNode[portNode[port]]] ? graphFlow.pressureHi[node] + 0 : Number.NaN,
  );
  const portFlow = portFlows(factor, drives, graphFlow);
  portNode.forEach((node, port) => {
    if (!flowsKnown[partOfNode[node]]) portFlow[port] = Number.NaN;
  });
  const { worstImbalance, worstNode } = balanceOfNetwork(factor, drives, flowsKnown, reachFlow, portFlow);
  return {
    nodePressure,
    reachResistance: resistances.reach,
    reachFlow,
    reachPressureDrop,
    portFlow,
    portPressure,
    supplyPressure,
    tubingResistance: resistances.tubing,
    nodePart: partOfNode,
    parts,
    worstImbalance,
    worstNode,
  };
}

/**
 * Flow into the chip at each port: found at those whose pressure is held, given at the others.
 * Two ports that hold one node at one pressure share its flow in a way that nothing tells: NaN.
 */
function portFlows(factor: FlowFactor, drives: readonly PortDrive[], graphFlow: GraphFlow): Float64Array {
  const { driveNode } = factor.prepared;
  const given = givenFlows(factor, drives);
  const held = Uint8Array.from(drives, ({ kind }) => (kind === 'pressure' ? 1 : 0));
  for (const outlook of factor.partOutlook) if (outlook.kind === 'floating') held[outlook.heldPort] = 1;
  const givenAt = new Map<number, number>();
  const heldBy = new Map<number, number>();
  driveNode.forEach((node, port) => {
    if (held[port] === 1) heldBy.set(node, (heldBy.get(node) ?? 0) + 1);
    else givenAt.set(node, (givenAt.get(node) ?? 0) + given[port]);
  });
  return given.map((q, port) => {
    if (held[port] === 0) return q;
    const node = driveNode[port];
    return heldBy.get(node) === 1 ? graphFlow.inflow[node] - (givenAt.get(node) ?? 0) : Number.NaN;
  });
}

/** Balance of the flows as they are given out. A node is inner unless a port without tubing holds its pressure. */
function balanceOfNetwork(
  { prepared }: FlowFactor,
  drives: readonly PortDrive[],
  flowsKnown: readonly boolean[],
  reachFlow: Float64Array,
  portFlow: Float64Array,
): Balance {
  const { network, tubingEdge, parts } = prepared;
  const inner = Uint8Array.from(parts.partOfNode, (part) => (flowsKnown[part] ? 1 : 0));
  const inflow = new Float64Array(network.nodeCount);
  network.portNode.forEach((node, port) => {
    if (drives[port].kind === 'pressure' && tubingEdge[port] < 0) inner[node] = 0;
    if (!Number.isNaN(portFlow[port])) inflow[node] += portFlow[port];
  });
  return balanceOf({ from: network.reachFrom, to: network.reachTo }, reachFlow, inflow, inner);
}
