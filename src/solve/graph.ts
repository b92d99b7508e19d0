/**
 * Flow in a graph of resistances: Kirchhoff's two laws, in three phases so that what does not change is done once.
 *   analyseGraph  the graph and which nodes are fixed → what can carry flow, chains, order and pattern of the factor
 *   factorGraph   + resistances → factor
 *   solveGraph    + pressures and injections → pressures and flows
 * Sign: an edge's flow > 0 runs from → to; an injection > 0 enters the graph.
 * Example: 0 –(2)→ 1 –(2)→ 2 with node 0 at 8 and node 2 at 0 flows 2 along both edges and node 1 is at 4.
 * Any consistent units: here Pa, m³/s and Pa s/m³.
 */
import { type Analysis, analyse } from '../sparse/analyse.ts';
import { type Factor, factor } from '../sparse/factor.ts';
import { type CircuitFlow, type Resistance, solveRefined } from '../sparse/refine.ts';
import { type Chains, gatherChains } from './chains.ts';
import type { FlowGraph } from './flow-graph.ts';
import { findLiveEdges } from './live.ts';

export interface GraphAnalysis {
  readonly graph: FlowGraph;
  readonly fixedNodes: Int32Array;
  readonly injectedNodes: Int32Array;
  readonly chains: Chains;
  readonly anchor: Int32Array;
  /** First fixed node of each node's part; −1 where no pressure is fixed: nothing is known there. */
  readonly root: Int32Array;
  /** Chains between two nodes of unknown pressure: the edges of `sparse`. */
  readonly innerChain: Int32Array;
  readonly sparse: Analysis;
}

export interface GraphFactor {
  readonly analysis: GraphAnalysis;
  /** As given, one per edge. */
  readonly resistance: Float64Array;
  /** Of each chain, as a sum of two doubles: a faint link of a chain keeps its own pressure drop. */
  readonly chainResistance: Resistance;
  readonly factored: Factor;
}

export interface GraphLoad {
  /** Read at the fixed nodes; one per node. */
  readonly fixedPressure: Float64Array;
  /** Read at the injected nodes that are not fixed; one per node. */
  readonly injection: Float64Array;
  /** A source of pressure in series with one edge, driving from → to. */
  readonly source?: { readonly edge: number; readonly pressure: number };
}

export interface GraphFlow {
  /** Pressure of each node as an unevaluated sum of two doubles; NaN where no fixed pressure reaches. */
  readonly pressureHi: Float64Array;
  readonly pressureLo: Float64Array;
  /** Of each edge; exactly 0 where nothing can flow, NaN where no fixed pressure reaches. */
  readonly flow: Float64Array;
  /** Flow that enters the graph at each node from outside: found at fixed nodes, as given at injected ones, 0 elsewhere, NaN where no fixed pressure reaches. */
  readonly inflow: Float64Array;
  /** |ΣQ| / max(throughput, 1e-9 × the graph's), the worst of all branchings, before flows are rounded to doubles; and the steps it took. */
  readonly worstImbalance: number;
  readonly refinements: number;
}

/**
 * First phase. Depends on the graph and on which nodes are fixed or injected, on no value.
 * @param injectedNodes nodes into which any load may inject a flow; they are never drawn into a chain
 */
export function analyseGraph(
  graph: FlowGraph,
  fixedNodes: Int32Array,
  injectedNodes: Int32Array,
): GraphAnalysis {
  const liveGraph = findLiveEdges(graph, fixedNodes, injectedNodes);
  const chains = gatherChains(graph, liveGraph, fixedNodes, injectedNodes);
  const { chainFrom, chainTo, unknownCount } = chains;
  const inner: number[] = [];
  for (let c = 0; c < chainFrom.length; c++)
    if (chainFrom[c] < unknownCount && chainTo[c] < unknownCount) inner.push(c);
  const innerChain = Int32Array.from(inner);
  const sparse = analyse({
    nodeCount: unknownCount,
    edgeFrom: innerChain.map((c) => chainFrom[c]),
    edgeTo: innerChain.map((c) => chainTo[c]),
  });
  return {
    graph,
    fixedNodes,
    injectedNodes,
    chains,
    anchor: liveGraph.anchor,
    root: liveGraph.root,
    innerChain,
    sparse,
  };
}

/**
 * Second phase.
 * @param resistance one per edge; finite and > 0 on every edge that can carry flow, never read on others
 * @param reuse a factor of the same analysis whose memory is overwritten
 * @throws RangeError naming the edge
 */
export function factorGraph(
  analysis: GraphAnalysis,
  resistance: Float64Array,
  reuse?: GraphFactor,
): GraphFactor {
  const { chains, innerChain, sparse } = analysis;
  const { chainFrom, chainTo, unknownCount } = chains;
  const chainResistance = sumsOfChains(chains, resistance);
  const weight = new Float64Array(innerChain.length);
  for (let k = 0; k < innerChain.length; k++) weight[k] = 1 / chainResistance.hi[innerChain[k]];
  const ground = new Float64Array(unknownCount);
  for (let c = 0; c < chainFrom.length; c++) {
    const a = chainFrom[c];
    const b = chainTo[c];
    if (a < unknownCount && b >= unknownCount) ground[a] += 1 / chainResistance.hi[c];
    if (b < unknownCount && a >= unknownCount) ground[b] += 1 / chainResistance.hi[c];
  }
  const factored = factor(sparse, weight, ground, reuse?.analysis === analysis ? reuse.factored : undefined);
  return { analysis, resistance, chainResistance, factored };
}

function sumsOfChains({ chainStart, link }: Chains, resistance: Float64Array): Resistance {
  const count = chainStart.length - 1;
  const hi = new Float64Array(count);
  const lo = new Float64Array(count);
  const sum: Pair = { hi: 0, lo: 0 };
  for (let c = 0; c < count; c++) {
    sum.hi = 0;
    sum.lo = 0;
    for (let p = chainStart[c]; p < chainStart[c + 1]; p++) {
      const R = resistance[link[p]];
      if (!(R > 0 && R < Infinity)) {
        throw new RangeError(`edge ${link[p]} has resistance ${R}; it must be a finite number above 0`);
      }
      add(sum, R, 0);
    }
    hi[c] = sum.hi;
    lo[c] = sum.lo;
  }
  return { hi, lo };
}

/** Third phase. One factor serves any number of loads. */
export function solveGraph(graphFactor: GraphFactor, load: GraphLoad): GraphFlow {
  const { analysis, chainResistance, factored } = graphFactor;
  const { coreNode, unknownCount, chainFrom, chainTo } = analysis.chains;
  const coreCount = coreNode.length;
  const base = basePressures(analysis, load.fixedPressure);

  // Pressures above the lowest fixed one of the part: what is common to all would only cost digits.
  const potentialHi = new Float64Array(coreCount);
  const potentialLo = new Float64Array(coreCount);
  const injection = new Float64Array(coreCount);
  for (let k = 0; k < coreCount; k++) {
    const node = coreNode[k];
    if (k < unknownCount) {
      injection[k] = load.injection[node];
      continue;
    }
    const p = load.fixedPressure[node];
    const b = base[analysis.root[node]];
    const difference = p - b;
    const part = difference - p;
    potentialHi[k] = difference;
    potentialLo[k] = p - (difference - part) + (-b - part);
  }
  const circuit = { nodeCount: coreCount, unknownCount, edgeFrom: chainFrom, edgeTo: chainTo };
  const source = chainSources(graphFactor, load);
  const core = solveRefined(factored, circuit, chainResistance, {
    potentialHi,
    potentialLo,
    injection,
    source,
  });
  silenceNoise(circuit, chainResistance.hi, core);

  const { worstImbalance, refinements } = core;
  return { ...spreadOverGraph(graphFactor, core, base, load), worstImbalance, refinements };
}

/** Lowest fixed pressure of each part, at its first fixed node. */
function basePressures({ fixedNodes, root }: GraphAnalysis, fixedPressure: Float64Array): Float64Array {
  const base = new Float64Array(root.length).fill(Infinity);
  for (const i of fixedNodes) {
    if (!Number.isFinite(fixedPressure[i]))
      throw new RangeError(`fixed node ${i} has pressure ${fixedPressure[i]}`);
    if (fixedPressure[i] < base[root[i]]) base[root[i]] = fixedPressure[i];
  }
  return base;
}

function chainSources({ analysis }: GraphFactor, { source }: GraphLoad): Float64Array | null {
  if (source === undefined) return null;
  const { chains } = analysis;
  const values = new Float64Array(chains.chainFrom.length);
  const chain = chains.chainOfEdge[source.edge];
  if (chain < 0) return values;
  const at = chains.link.indexOf(source.edge, chains.chainStart[chain]);
  values[chain] = chains.forward[at] === 1 ? source.pressure : -source.pressure;
  return values;
}

const LAST_BITS = 2 ** -98;
const BELOW_PRESSURES = 2 ** -90;
const BELOW_FLOWS = 2 ** -60;

/**
 * A balanced bridge carries nothing, but rounding leaves something of the last of the pressures' 106 bits. So a flow is nought whose pressure difference is
 * below 2^-98 of the pressures at its own ends; or below 2^-90 of the largest pressure, while the flow is below 2^-60 of what passes both its ends.
 */
function silenceNoise(
  circuit: { edgeFrom: Int32Array; edgeTo: Int32Array },
  resistance: Float64Array,
  core: CircuitFlow,
): void {
  const { potentialHi, flowHi, flowLo, throughput } = core;
  let largest = 0;
  for (const p of potentialHi) largest = Math.max(largest, Math.abs(p));
  for (let c = 0; c < flowHi.length; c++) {
    const a = circuit.edgeFrom[c];
    const b = circuit.edgeTo[c];
    const size = Math.abs(flowHi[c]);
    const difference = size * resistance[c];
    const inLastBits = difference < LAST_BITS * Math.max(Math.abs(potentialHi[a]), Math.abs(potentialHi[b]));
    const lostAmongOthers =
      difference < BELOW_PRESSURES * largest && size < BELOW_FLOWS * Math.min(throughput[a], throughput[b]);
    if (!inLastBits && !lostAmongOthers) continue;
    flowHi[c] = 0;
    flowLo[c] = 0;
  }
}

/** From core nodes and chains back to every node and edge. */
function spreadOverGraph(graphFactor: GraphFactor, core: CircuitFlow, base: Float64Array, load: GraphLoad) {
  const { analysis, resistance } = graphFactor;
  const { graph, chains, anchor, root } = analysis;
  const { nodeCount, from, to } = graph;
  const { coreNode, unknownCount, chainFrom, chainStart, link, forward } = chains;
  const pressureHi = new Float64Array(nodeCount).fill(Number.NaN);
  const pressureLo = new Float64Array(nodeCount).fill(Number.NaN);
  const inflow = new Float64Array(nodeCount);
  const flow = new Float64Array(from.length);
  for (let i = 0; i < nodeCount; i++) if (root[i] < 0) inflow[i] = Number.NaN;
  for (let e = 0; e < from.length; e++) if (root[from[e]] < 0) flow[e] = Number.NaN;

  const sum: Pair = { hi: 0, lo: 0 };
  for (let k = 0; k < coreNode.length; k++) {
    const node = coreNode[k];
    sum.hi = core.potentialHi[k];
    sum.lo = core.potentialLo[k];
    add(sum, base[root[node]], 0);
    pressureHi[node] = sum.hi;
    pressureLo[node] = sum.lo;
    inflow[node] = k < unknownCount ? load.injection[node] : core.outflow[k] + 0;
  }
  for (let c = 0; c < chainFrom.length; c++) {
    const q = core.flowHi[c];
    const qLo = core.flowLo[c];
    let node = coreNode[chainFrom[c]];
    sum.hi = pressureHi[node];
    sum.lo = pressureLo[node];
    for (let p = chainStart[c]; p < chainStart[c + 1]; p++) {
      const e = link[p];
      flow[e] = forward[p] === 1 ? q + 0 : 0 - q;
      if (p === chainStart[c + 1] - 1) break;
      addProduct(sum, -resistance[e], q, qLo);
      if (load.source?.edge === e)
        add(sum, forward[p] === 1 ? load.source.pressure : -load.source.pressure, 0);
      node = from[e] === node ? to[e] : from[e];
      pressureHi[node] = sum.hi;
      pressureLo[node] = sum.lo;
    }
  }
  for (let i = 0; i < nodeCount; i++) {
    if (anchor[i] < 0 || anchor[i] === i) continue;
    pressureHi[i] = pressureHi[anchor[i]];
    pressureLo[i] = pressureLo[anchor[i]];
  }
  return { pressureHi, pressureLo, flow, inflow };
}

interface Pair {
  hi: number;
  lo: number;
}

function add(sum: Pair, hi: number, lo: number): void {
  const s = sum.hi + hi;
  const part = s - sum.hi;
  const low = sum.hi - (s - part) + (hi - part) + (sum.lo + lo);
  sum.hi = s + low;
  sum.lo = low - (sum.hi - s);
}

/** sum += x·(hi + lo), with Dekker's exact product. */
function addProduct(sum: Pair, x: number, hi: number, lo: number): void {
  const SPLIT = 134217729;
  let t = SPLIT * x;
  const xHi = t - (t - x);
  const xLo = x - xHi;
  t = SPLIT * hi;
  const hHi = t - (t - hi);
  const hLo = hi - hHi;
  const product = x * hi;
  add(sum, product, xHi * hHi - product + xHi * hLo + xLo * hHi + xLo * hLo + x * lo);
}
