import type { RunNetwork } from '../asked/run-network.ts';
import { hasWindow } from '../asked/windows.ts';
import type { Network } from '../network/types.ts';
import type { PortDrive } from './drives.ts';
import { type FlowFactor, factorFlow, flowStateOf } from './flow-state.ts';
import { type GraphFlow, type GraphLoad, solveGraph } from './graph.ts';
import type { FlowState } from './types.ts';

/** How far the joints that are not resolved could move results, ± as a share of each; NaN where there is none to speak of. */
export interface JointShares {
  /** Of each port's flow; 0 where the run sheet gives it. */
  readonly portFlow: Float64Array;
  /** Of each port's gauge pressure in the chip; 0 where it is held. */
  readonly portPressure: Float64Array;
  /** Of each reach's flow. */
  readonly reachFlow: Float64Array;
}

/** Solves times edges, each some 0.3 µs, spent on this. A chip for which all shares would cost more gets those of its ports and windows. */
const MOST_WORK = 3e5;
/** The same for the ports of such a chip, and how many of them are looked at in any case. */
const MOST_PORT_WORK = 2e7;
const LEAST_PORTS = 16;

/**
 * Every reach's bound on its length (Network.reachJointBoundMm) carried to every flow and pressure by the exact sensitivity to that
 * reach's resistance, all taken in the worse sense.
 *
 * A longer reach e is a source of pressure −δR_e Q_e in it, and the network is linear: one solve for each chain of reaches with a
 * bound gives what it moves everywhere. Where those are too many, one solve of the adjoint network for each result gives what moves
 * it: ∂Q/∂R_e = −q_e Q_e with q the flows under 1 Pa at the result's own place (see sensitivity.ts).
 */
export function jointShares(
  { network, run }: RunNetwork,
  factor: FlowFactor,
  drives: readonly PortDrive[],
  flow: FlowState,
  mostWork = MOST_WORK,
): JointShares {
  const { graph } = factor.prepared;
  const dropPa = boundDrops(network, flow);
  const sources = sourcesOf(network, factor, dropPa);
  const moved =
    sources.length * graph.from.length <= mostWork
      ? movedBySources(network, factor, sources)
      : movedByAdjoint({ network, run }, factor, drives, flow, dropPa, mostWork);
  const { portFlow, portPressure, reachFlow } = moved;
  drives.forEach((drive, port) => {
    if (drive.kind === 'flow') portFlow[port] = 0;
    if (drive.kind === 'pressure' && factor.prepared.tubingEdge[port] < 0) portPressure[port] = 0;
  });
  return {
    portFlow: shares(portFlow, flow.portFlow),
    portPressure: shares(portPressure, flow.portPressure),
    reachFlow: shares(reachFlow, flow.reachFlow),
  };
}

/** Below this a share is what rounding leaves of none: flows balance to this of what passes a node. */
const NO_SHARE = 1e-12;

/** As shares of what is moved; of nothing there is no share. */
function shares(moved: Float64Array, of: Float64Array): Float64Array {
  return moved.map((value, i) => {
    if (of[i] === 0) return Number.NaN;
    const share = value / Math.abs(of[i]);
    return share < NO_SHARE ? 0 : share;
  });
}

/** Pressure that each reach's bound could add to or take from its drop, Pa; 0 where nothing flows or nothing is known. */
function boundDrops(network: Network, { reachResistance, reachFlow }: FlowState): Float64Array {
  return reachResistance.map((resistance, r) => {
    const bound = (resistance / network.reachDuctMm[r]) * network.reachJointBoundMm[r];
    const drop = Math.abs(bound * reachFlow[r]);
    return Number.isNaN(drop) ? 0 : drop;
  });
}

interface Source {
  readonly edge: number;
  readonly pressurePa: number;
}

/**
 * Reaches of one chain have one flow and move all outside it in one proportion, so they are one source; not where a port lies on
 * the chain, whose pressure each moves by itself.
 */
function sourcesOf(
  { portNode, reachFrom, reachTo, reachCount }: Network,
  factor: FlowFactor,
  dropPa: Float64Array,
): Source[] {
  const { anchor, chains } = factor.graphFactor.analysis;
  const hasPort = new Uint8Array(anchor.length);
  for (const node of portNode) if (anchor[node] >= 0) hasPort[anchor[node]] = 1;
  for (const node of chains.coreNode) hasPort[node] = 0;
  const isSplit = new Uint8Array(chains.chainFrom.length);
  for (let r = 0; r < reachCount; r++) {
    const chain = chains.chainOfEdge[r];
    if (chain >= 0 && hasPort[reachFrom[r]] + hasPort[reachTo[r]] > 0) isSplit[chain] = 1;
  }
  const ofChain = new Map<number, { edge: number; pressurePa: number }>();
  const sources: Source[] = [];
  for (let r = 0; r < reachCount; r++) {
    const chain = chains.chainOfEdge[r];
    if (chain < 0 || dropPa[r] === 0) continue;
    const known = isSplit[chain] === 1 ? undefined : ofChain.get(chain);
    if (known !== undefined) {
      known.pressurePa += dropPa[r];
      continue;
    }
    const source = { edge: r, pressurePa: dropPa[r] };
    sources.push(source);
    ofChain.set(chain, source);
  }
  return sources;
}

interface Moved {
  readonly portFlow: Float64Array;
  readonly portPressure: Float64Array;
  readonly reachFlow: Float64Array;
}

/** What all sources together move, each in the worse sense. */
function movedBySources(
  { portNode, reachCount }: Network,
  factor: FlowFactor,
  sources: readonly Source[],
): Moved {
  const { prepared, graphFactor } = factor;
  const { graph, driveNode } = prepared;
  const nought = new Float64Array(graph.nodeCount);
  const portFlow = new Float64Array(portNode.length);
  const portPressure = new Float64Array(portNode.length);
  const reachFlow = new Float64Array(reachCount);
  for (const { edge, pressurePa } of sources) {
    const source = { edge, pressure: pressurePa };
    const change = solveGraph(graphFactor, { fixedPressure: nought, injection: nought, source });
    for (let port = 0; port < portNode.length; port++) {
      // parts without a pressure or a size have no flows; this source does not reach them
      portFlow[port] += Math.abs(change.inflow[driveNode[port]]) || 0;
      portPressure[port] += Math.abs(change.pressureHi[portNode[port]]) || 0;
    }
    for (let r = 0; r < reachCount; r++) reachFlow[r] += Math.abs(change.flow[r]) || 0;
  }
  return { portFlow, portPressure, reachFlow };
}

/** What moves the ports, the largest flows first, and the reaches with a window, as far as the work allows; NaN for the rest. */
function movedByAdjoint(
  { network, run }: RunNetwork,
  factor: FlowFactor,
  drives: readonly PortDrive[],
  flow: FlowState,
  dropPa: Float64Array,
  mostWork: number,
): Moved {
  const { reachChannel, reachCount, portNode } = network;
  const { graph, driveNode, tubingEdge } = factor.prepared;
  const nought = new Float64Array(graph.nodeCount);
  const moved: Moved = {
    portFlow: new Float64Array(portNode.length).fill(Number.NaN),
    portPressure: new Float64Array(portNode.length).fill(Number.NaN),
    reachFlow: new Float64Array(reachCount).fill(Number.NaN),
  };
  const solvesFor = (work: number): number => Math.floor(work / Math.max(1, graph.from.length));
  const movedBy = (load: Partial<GraphLoad>): number => {
    const adjoint: GraphFlow = solveGraph(factor.graphFactor, {
      fixedPressure: nought,
      injection: nought,
      ...load,
    });
    let sum = 0;
    for (let r = 0; r < reachCount; r++) sum += Math.abs(adjoint.flow[r] * dropPa[r]) || 0;
    return sum;
  };
  const unitAt = (node: number): Float64Array => {
    const unit = nought.slice();
    unit[node] = 1;
    return unit;
  };
  const ports = drives.flatMap((drive, port) =>
    drive.kind === 'none' || !(Math.abs(flow.portFlow[port]) > 0) ? [] : [port],
  );
  ports.sort((a, b) => Math.abs(flow.portFlow[b]) - Math.abs(flow.portFlow[a]) || a - b);
  for (const port of ports.slice(0, Math.max(LEAST_PORTS, solvesFor(MOST_PORT_WORK)))) {
    if (drives[port].kind === 'flow') {
      // the flow is given, so the tubing's drop stays, and both its ends move alike
      moved.portPressure[port] = movedBy({ injection: unitAt(driveNode[port]) });
    } else {
      moved.portFlow[port] = movedBy({ fixedPressure: unitAt(driveNode[port]) });
      if (tubingEdge[port] >= 0)
        moved.portPressure[port] = moved.portFlow[port] * factor.resistances.tubing[port];
    }
  }
  const watched: number[] = [];
  for (let r = 0; r < reachCount; r++)
    if (hasWindow(run.channels[reachChannel[r]]) && flow.reachFlow[r] !== 0) watched.push(r);
  for (const r of watched.slice(0, solvesFor(mostWork)))
    moved.reachFlow[r] = movedBy({ source: { edge: r, pressure: 1 } });
  return moved;
}

/** The flow state that counting centrelines by rule 5 alone would give: the same network with those lengths. */
export function centrelineFlow(
  network: Network,
  factor: FlowFactor,
  drives: readonly PortDrive[],
): FlowState {
  const { reach, tubing } = factor.resistances;
  const resistances = {
    reach: reach.map((resistance, r) => (resistance / network.reachDuctMm[r]) * network.reachCentrelineMm[r]),
    tubing,
  };
  return flowStateOf(factorFlow(factor.prepared, factor.kinds, resistances), drives);
}
