import type { Chip } from '../chip/types.ts';

export type NodeKind = 'port' | 'junction' | 'end' | 'step';

export const NODE_KINDS: readonly NodeKind[] = ['port', 'junction', 'end', 'step'];

/**
 * The network as columns. Index i of each column of a group is one node, reach or segment.
 * Drawing coordinates and lengths along the drawing are in mm.
 */
export interface Network {
  readonly chip: Chip;

  readonly nodeCount: number;
  /** Index into NODE_KINDS. */
  readonly nodeKind: Uint8Array;
  readonly nodeX: Float64Array;
  readonly nodeY: Float64Array;
  /** Index of the port whose well this node is, −1 for none. */
  readonly nodePort: Int32Array;
  /** Node of each port, in the order of chip.ports; every port has one. */
  readonly portNode: Int32Array;

  readonly reachCount: number;
  /** Index into chip.channels. */
  readonly reachChannel: Int32Array;
  readonly reachFrom: Int32Array;
  readonly reachTo: Int32Array;
  /** Centreline length between the nodes outside wells, mm. */
  readonly reachDrawnMm: Float64Array;
  /** Length that resists flow, after the joining rules, mm. */
  readonly reachDuctMm: Float64Array;
  /** Signed length that resolved joints add, already within reachDuctMm, mm; 0 with `joints: centreline`. */
  readonly reachJointMm: Float64Array;
  /** Segments of reach r are firstSegment[r] … firstSegment[r + 1] − 1, in flow direction from → to. Length reachCount + 1. */
  readonly firstSegment: Int32Array;
  /** 1-based count of this reach within its channel, and how many the channel has (for names). */
  readonly reachNumber: Int32Array;
  readonly channelReachCount: Int32Array;

  readonly segmentCount: number;
  readonly segmentReach: Int32Array;
  readonly segmentX1: Float64Array;
  readonly segmentY1: Float64Array;
  readonly segmentX2: Float64Array;
  readonly segmentY2: Float64Array;
  /** Duct length, mm. */
  readonly segmentDuctMm: Float64Array;
  /** 0 for a straight piece. */
  readonly segmentBendRadiusMm: Float64Array;

  readonly nodeName: (node: number) => string;
  readonly reachName: (reach: number) => string;
  readonly segmentName: (segment: number) => string;
}
