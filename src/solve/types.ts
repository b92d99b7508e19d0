/** Pressures and flows of one network under one set of conditions. NaN never leaves: a missing number is NaN here and null in rows. */
export interface FlowState {
  /** Pa gauge, one per node; NaN where nothing sets a pressure. */
  readonly nodePressure: Float64Array;
  /** Pa s/m³, one per reach; NaN where the depth is unknown. */
  readonly reachResistance: Float64Array;
  /** m³/s from → to, one per reach; NaN where it can't be known. */
  readonly reachFlow: Float64Array;
  /** Pa, from minus to, formed from the refined pressures (equals resistance × flow). */
  readonly reachPressureDrop: Float64Array;
  /** m³/s into the chip, one per port of the chip; NaN where it can't be known. */
  readonly portFlow: Float64Array;
  /** Pa in the chip at the port. */
  readonly portPressure: Float64Array;
  /** Pa at the far end of the tubing (the port's own without tubing). */
  readonly supplyPressure: Float64Array;
  /** Pa s/m³ of all tubing pieces of the port together, 0 without. */
  readonly tubingResistance: Float64Array;
  /** Connected part of each node, from 0. */
  readonly nodePart: Int32Array;
  readonly parts: readonly FlowPart[];
  readonly worstImbalance: number;
  /** −1 when there is no inner node. */
  readonly worstNode: number;
}

/** One connected part of the network. */
export interface FlowPart {
  readonly nodes: number;
  /** Ports of the part, as indices into chip.ports. */
  readonly ports: readonly number[];
  readonly status:
    | 'solved'
    /** No port of the part has pressure, head or open, but the given flows add up to nought: flows are known, pressures only to a constant (null). */
    | 'no-reference'
    /** No reference, and the given flows do not add up. */
    | 'flows-do-not-add-up'
    /** No port of the part has any pressure, head, flow or open: nothing flows by anything we know; null. */
    | 'no-drive'
    /** Ports that open into one node hold different pressures there: null. */
    | 'conflict'
    /** A depth or width is missing in the part: null. */
    | 'unsized';
  /** Sum of the given flows into the part, m³/s. */
  readonly flowSumM3s: number;
}
