export interface Balance {
  /** The worst of all inner nodes; 0 where there is none. */
  readonly worstImbalance: number;
  /** Its node, the first of several; −1 where there is no inner node. */
  readonly worstNode: number;
}

/**
 * Kirchhoff's first law on flows as they are, whatever they were computed by. Imbalance of a node = |ΣQ| / max(its throughput, 1e-9 × the network's), where a
 * node's throughput is half the sum of all |flows| at it and the network's half the sum of all |inflows|.
 * @param flow of each edge from → to; NaN is passed over
 * @param inflow from outside at each node
 * @param inner 1 at the nodes to judge
 */
export function balanceOf(
  { from, to }: { readonly from: Int32Array; readonly to: Int32Array },
  flow: Float64Array,
  inflow: Float64Array,
  inner: Uint8Array,
): Balance {
  const net = inflow.slice();
  const throughput = inflow.map((q) => Math.abs(q) / 2);
  let whole = 0;
  for (const q of throughput) if (q > 0) whole += q;
  for (let e = 0; e < from.length; e++) {
    const q = flow[e];
    if (Number.isNaN(q) || q === 0) continue;
    net[from[e]] -= q;
    net[to[e]] += q;
    throughput[from[e]] += Math.abs(q) / 2;
    throughput[to[e]] += Math.abs(q) / 2;
  }
  let worstImbalance = 0;
  let worstNode = -1;
  for (let i = 0; i < inner.length; i++) {
    if (inner[i] === 0) continue;
    const imbalance = net[i] === 0 ? 0 : Math.abs(net[i]) / Math.max(throughput[i], 1e-9 * whole);
    if (worstNode >= 0 && imbalance <= worstImbalance) continue;
    worstImbalance = imbalance;
    worstNode = i;
  }
  return { worstImbalance, worstNode };
}
