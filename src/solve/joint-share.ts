import type { Network } from '../network/types.ts';
import type { PortDrive } from './drives.ts';
import { type FlowFactor, factorFlow, flowStateOf } from './flow-state.ts';
import { solveGraph } from './graph.ts';
import type { FlowState } from './types.ts';

/** One more solve a port is cheap; thousands of ports on a huge chip are not. Above this product only the largest flows get a share. */
const MOST_WORK = 2e7;

/**
 * How far the joints that are not resolved could move each port's flow, as a share of it: every reach's bound on its length
 * (Network.reachJointBoundMm) carried by the flow's exact sensitivity to that reach's resistance, all taken in the worse
 * sense. One per port: 0 where the flow is given, NaN where there is none to speak of (no flow, nothing known).
 *
 * The sensitivity is the adjoint network's: ∂Q_port/∂R_e = −q_e Q_e with q the flows under 1 Pa at that port alone.
 */
export function jointFlowShares(
  network: Network,
  factor: FlowFactor,
  drives: readonly PortDrive[],
  flow: FlowState,
): Float64Array {
  const shares = new Float64Array(drives.length).fill(Number.NaN);
  const boundPaS = boundResistances(network, flow);
  const { driveNode, graph } = factor.prepared;
  const driven = drives.flatMap((drive, port) => {
    if (Number.isNaN(flow.portFlow[port]) || flow.portFlow[port] === 0) return [];
    if (drive.kind === 'flow') shares[port] = 0;
    return drive.kind === 'pressure' ? [port] : [];
  });
  const most = Math.max(16, Math.floor(MOST_WORK / Math.max(1, graph.from.length)));
  driven.sort((a, b) => Math.abs(flow.portFlow[b]) - Math.abs(flow.portFlow[a]) || a - b);
  const nought = new Float64Array(graph.nodeCount);
  for (const port of driven.slice(0, most)) {
    const unit = new Float64Array(graph.nodeCount);
    unit[driveNode[port]] = 1;
    const adjoint = solveGraph(factor.graphFactor, { fixedPressure: unit, injection: nought });
    let moved = 0;
    for (let r = 0; r < network.reachCount; r++) {
      const change = Math.abs(adjoint.flow[r] * flow.reachFlow[r]) * boundPaS[r];
      // Parts without a pressure or a size have no flows; they do not touch this port.
      if (!Number.isNaN(change)) moved += change;
    }
    shares[port] = moved / Math.abs(flow.portFlow[port]);
  }
  return shares;
}

function boundResistances(network: Network, flow: FlowState): Float64Array {
  return flow.reachResistance.map(
    (resistance, r) => (resistance / network.reachDuctMm[r]) * network.reachJointBoundMm[r],
  );
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
