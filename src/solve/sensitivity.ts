/**
 * How one result of a flow graph moves with every resistance, pressure and injection, by one more solve with the same factor (the adjoint network).
 * Source: B. D. H. Tellegen, Philips Res. Rep. 7 (1952) 259; S. W. Director & R. A. Rohrer, IEEE Trans. Circuit Theory 16 (1969) 318.
 * With q_f the adjoint flows and Q_f the flows: ∂(flow)/∂R_f = −q_f Q_f, ∂(pressure)/∂R_f = +q_f Q_f. Exact, since the network is linear and symmetric.
 */
import { type GraphFactor, type GraphFlow, type GraphLoad, solveGraph } from './graph.ts';

export interface Gradient {
  /** With respect to the resistance of each edge. */
  readonly resistance: Float64Array;
  /** With respect to the pressure of each fixed node, 0 at others. */
  readonly pressure: Float64Array;
  /** With respect to a flow injected at each node that is not fixed. */
  readonly injection: Float64Array;
}

/** Gradient of the flow of one edge. */
export function gradientOfFlow(factor: GraphFactor, flow: GraphFlow, edge: number): Gradient {
  return gradientFrom(factor, flow, { source: { edge, pressure: 1 } }, 1);
}

/** Gradient of the flow that enters at a fixed node. */
export function gradientOfInflow(factor: GraphFactor, flow: GraphFlow, node: number): Gradient {
  if (!factor.analysis.fixedNodes.includes(node))
    throw new RangeError(`node ${node} is not fixed; its inflow is given, not found`);
  return gradientFrom(factor, flow, { fixedPressure: unitAt(factor, node) }, 1);
}

/** Gradient of the pressure of an injected node (one named as such to analyseGraph). */
export function gradientOfPressure(factor: GraphFactor, flow: GraphFlow, node: number): Gradient {
  if (!factor.analysis.injectedNodes.includes(node))
    throw new RangeError(`node ${node} is not among the injected nodes of the analysis`);
  return gradientFrom(factor, flow, { injection: unitAt(factor, node) }, -1);
}

function unitAt({ analysis }: GraphFactor, node: number): Float64Array {
  const unit = new Float64Array(analysis.graph.nodeCount);
  unit[node] = 1;
  return unit;
}

/** @param load of the adjoint network; what it leaves out is nought */
function gradientFrom(
  factor: GraphFactor,
  flow: GraphFlow,
  load: Partial<GraphLoad>,
  sign: 1 | -1,
): Gradient {
  const { graph, fixedNodes } = factor.analysis;
  const nought = new Float64Array(graph.nodeCount);
  const adjoint = solveGraph(factor, { fixedPressure: nought, injection: nought, ...load });
  const resistance = flow.flow.map((Q, e) => 0 - sign * adjoint.flow[e] * Q);
  const pressure = new Float64Array(graph.nodeCount);
  const injection = adjoint.pressureHi.map((p) => 0 - sign * p);
  for (const i of fixedNodes) {
    pressure[i] = sign * adjoint.inflow[i];
    injection[i] = 0;
  }
  return { resistance, pressure, injection };
}
