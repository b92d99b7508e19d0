/**
 * Potentials and flows of a circuit far beyond double precision, by iterative refinement with one factor.
 * Potentials are unevaluated sums of two doubles (T. J. Dekker, Numer. Math. 18 (1971) 224), flows are formed edge by edge from their differences and summed the
 * same way, so that a small flow between two nodes of almost equal potential keeps its digits: with weights 1e12 apart plain doubles balance to 3e-3 only.
 * The factor is good to some ulp entry by entry (see factor.ts), so each step gains about 14 digits. Cost per step: one solve and some 60 operations per edge.
 *
 * Sign: flow > 0 runs from edgeFrom to edgeTo; a source potential > 0 drives that way; an injection > 0 enters the circuit.
 */
import type { Factor } from './factor.ts';
import type { GraphPattern } from './pattern.ts';
import { solve } from './solve.ts';

/** Nodes 0 … unknownCount − 1 are those of the factor, in its order of nodes; the rest have given potentials. */
export interface Circuit extends GraphPattern {
  readonly unknownCount: number;
}

export interface CircuitLoad {
  /** Given potentials of the nodes from unknownCount on; the others are ignored. One per node. */
  readonly potentialHi: Float64Array;
  readonly potentialLo: Float64Array;
  /** Flow into each node from outside; at nodes of given potential it is ignored. One per node. */
  readonly injection: Float64Array;
  /** Source potential in series with each edge, or null for none. */
  readonly source: Float64Array | null;
}

export interface Resistance {
  readonly hi: Float64Array;
  readonly lo: Float64Array;
}

export interface CircuitFlow {
  readonly potentialHi: Float64Array;
  readonly potentialLo: Float64Array;
  /** Flow of each edge as a sum of two doubles. */
  readonly flowHi: Float64Array;
  readonly flowLo: Float64Array;
  /** Flow into the edges of each node, less the injection where there is one: what a given potential has to supply, or what is out of balance. */
  readonly outflow: Float64Array;
  /** Half the sum of all |flows| at each node. */
  readonly throughput: Float64Array;
  /** Largest |out of balance| / max(throughput, 1e-9 × the circuit's) over the unknown nodes. */
  readonly worstImbalance: number;
  readonly refinements: number;
}

export const MOST_REFINEMENTS = 10;
export const WANTED_IMBALANCE = 1e-12;

/** One more step after the wanted balance squares it; below this there is nothing left to gain. */
const NOTHING_TO_GAIN = 1e-28;

/**
 * Solves the circuit under one load.
 * @param factored of Laplacian(1/resistance between unknown nodes) + diag(1/resistance to given ones); null when there is no unknown node
 * @param resistance of each edge, finite and > 0, as a sum of two doubles
 */
export function solveRefined(
  factored: Factor | null,
  circuit: Circuit,
  resistance: Resistance,
  load: CircuitLoad,
): CircuitFlow {
  const { nodeCount, unknownCount, edgeFrom } = circuit;
  const state: State = {
    potentialHi: load.potentialHi.slice(),
    potentialLo: load.potentialLo.slice(),
    flowHi: new Float64Array(edgeFrom.length),
    flowLo: new Float64Array(edgeFrom.length),
    outflow: new Float64Array(nodeCount),
    outflowLo: new Float64Array(nodeCount),
    throughput: new Float64Array(nodeCount),
  };
  state.potentialHi.fill(0, 0, unknownCount);
  state.potentialLo.fill(0, 0, unknownCount);
  // From potentials of nought the first step is the plain solve, every later one a refinement.
  formFlows(circuit, resistance, load, state);
  let worstImbalance = 0;
  let refinements = 0;
  if (factored !== null && unknownCount > 0) {
    const missing = new Float64Array(unknownCount);
    let balanced = false;
    for (let step = 0; ; step++) {
      for (let i = 0; i < unknownCount; i++) missing[i] = -state.outflow[i];
      solve(factored, missing, missing);
      addTo(state, missing);
      formFlows(circuit, resistance, load, state);
      worstImbalance = imbalanceOf(circuit, load, state);
      refinements = step;
      if (step === MOST_REFINEMENTS || worstImbalance < NOTHING_TO_GAIN || balanced) break;
      balanced = worstImbalance < WANTED_IMBALANCE;
    }
  }
  const { potentialHi, potentialLo, flowHi, flowLo, outflow, throughput } = state;
  return { potentialHi, potentialLo, flowHi, flowLo, outflow, throughput, worstImbalance, refinements };
}

interface State extends Omit<CircuitFlow, 'worstImbalance' | 'refinements'> {
  readonly outflowLo: Float64Array;
}

/** Veltkamp's constant 2^27 + 1: splits a double into halves whose products are exact. */
const SPLIT = 134217729;

/** flow = (φ_from − φ_to + source) / resistance and its sums at the nodes, all as sums of two doubles. */
function formFlows(
  { edgeFrom, edgeTo, unknownCount }: Circuit,
  resistance: Resistance,
  load: CircuitLoad,
  state: State,
): void {
  const { potentialHi, potentialLo, flowHi, flowLo, outflow, outflowLo, throughput } = state;
  const { injection, source } = load;
  outflow.fill(0);
  outflowLo.fill(0);
  throughput.fill(0);
  for (let i = 0; i < unknownCount; i++) {
    outflow[i] = -injection[i];
    throughput[i] = Math.abs(injection[i]) / 2;
  }
  for (let e = 0; e < edgeFrom.length; e++) {
    const a = edgeFrom[e];
    const b = edgeTo[e];
    // Difference of two sums: two-sum of the high parts, the low parts added to its error.
    const aHi = potentialHi[a];
    const bHi = -potentialHi[b];
    let high = aHi + bHi;
    let part = high - aHi;
    let low = aHi - (high - part) + (bHi - part) + (potentialLo[a] - potentialLo[b]);
    if (source !== null) {
      const s = source[e];
      const sum = high + s;
      part = sum - high;
      low += high - (sum - part) + (s - part);
      high = sum;
    }
    const difference = high + low;
    low -= difference - high;
    // Quotient q1 + q2: q1·R exactly by Dekker's product, q2 from what is left.
    const R = resistance.hi[e];
    const q1 = difference / R;
    let t = SPLIT * q1;
    const q1Hi = t - (t - q1);
    const q1Lo = q1 - q1Hi;
    t = SPLIT * R;
    const rHi = t - (t - R);
    const rLo = R - rHi;
    const product = q1 * R;
    const productLo = q1Hi * rHi - product + q1Hi * rLo + q1Lo * rHi + q1Lo * rLo;
    const q2 = (difference - product - productLo - q1 * resistance.lo[e] + low) / R;
    const q = q1 + q2;
    const qLo = q2 - (q - q1);
    flowHi[e] = q;
    flowLo[e] = qLo;
    const size = Math.abs(q) / 2;
    throughput[a] += size;
    throughput[b] += size;
    let old = outflow[a];
    let sum = old + q;
    part = sum - old;
    outflowLo[a] += old - (sum - part) + (q - part) + qLo;
    outflow[a] = sum;
    old = outflow[b];
    sum = old - q;
    part = sum - old;
    outflowLo[b] += old - (sum - part) + (-q - part) - qLo;
    outflow[b] = sum;
  }
  for (let i = 0; i < outflow.length; i++) outflow[i] += outflowLo[i];
}

function addTo({ potentialHi, potentialLo }: State, correction: Float64Array): void {
  for (let i = 0; i < correction.length; i++) {
    const old = potentialHi[i];
    const c = correction[i];
    const sum = old + c;
    const part = sum - old;
    const low = potentialLo[i] + (old - (sum - part) + (c - part));
    potentialHi[i] = sum + low;
    potentialLo[i] = low - (potentialHi[i] - sum);
  }
}

function imbalanceOf(
  { nodeCount, unknownCount }: Circuit,
  { injection }: CircuitLoad,
  { outflow, throughput }: State,
): number {
  let whole = 0;
  for (let i = 0; i < unknownCount; i++) whole += Math.abs(injection[i]) / 2;
  for (let i = unknownCount; i < nodeCount; i++) whole += Math.abs(outflow[i]) / 2;
  let worst = 0;
  for (let i = 0; i < unknownCount; i++) {
    if (outflow[i] !== 0)
      worst = Math.max(worst, Math.abs(outflow[i]) / Math.max(throughput[i], 1e-9 * whole));
  }
  return worst;
}
