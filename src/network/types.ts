import type { Chip } from '../chip/types.ts';
import type { Nearness } from '../geometry/near.ts';
import type { StripEnds } from '../geometry/strip.ts';
import type { JointSummary } from './joint-types.ts';

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
  /** 1-based count of this node among those of its kind, in drawn order (for names). */
  readonly nodeNumber: Int32Array;
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
  /**
   * Signed length that resolved joints add, already within reachDuctMm (not within segmentDuctMm), mm; 0 with
   * `joints: centreline`. Volume and residence time go by reachDuctMm − reachJointMm.
   */
  readonly reachJointMm: Float64Array;
  /** Length by which joints that are not resolved, and the interpolation of those that are, could move reachDuctMm, ± mm. */
  readonly reachJointBoundMm: Float64Array;
  /** What rule 5 alone counts: the duct length with `joints: centreline`, mm. */
  readonly reachCentrelineMm: Float64Array;
  /** What the joints of each kind come to, or with `joints: centreline` would come to. */
  readonly joints: readonly JointSummary[];
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

  /** How the network came from the drawing: for findings that must point into it, and for joints. */
  readonly trace: NetworkTrace;
}

/** What became of one end of a centreline. */
export type EndFate = 'open' | 'joined' | 'port' | 'left out';

/**
 * The drawing side of the network. Centrelines, pieces and positions s (mm along a centreline) as in geometry/pieces.ts;
 * end 2c is the start of centreline c, 2c + 1 its last point.
 */
export interface NetworkTrace {
  readonly near: Nearness;
  /** Stretches of centreline between neighbouring nodes outside wells, by centreline and position; a chain of them is a reach. */
  readonly arcCount: number;
  readonly arcCentreline: Int32Array;
  readonly arcFrom: Float64Array;
  readonly arcTo: Float64Array;
  readonly arcReach: Int32Array;
  /** 1 where the reach runs against the drawn direction of the arc. */
  readonly arcReversed: Uint8Array;
  /** Node at arcFrom and at arcTo; −1 where rule 7 made the place an inner point of the reach. */
  readonly arcNodeFrom: Int32Array;
  readonly arcNodeTo: Int32Array;
  /** Arcs of centreline c are firstArc[c] … firstArc[c + 1] − 1. */
  readonly firstArc: Int32Array;
  /** Per end (2c, 2c + 1). A closed centreline's ends are 'joined'. */
  readonly endFate: readonly EndFate[];
  /** Node at the end; −1 where the end was left out or merged into a reach. */
  readonly endNode: Int32Array;
  /** Length of the carried-on piece (rule 3), mm. */
  readonly endExtensionMm: Float64Array;
  /** Length left out at the end (rules 4 and 6), mm; NaN-free, 0 when nothing was. */
  readonly endLeftOutMm: Float64Array;
  /** Centreline that the end joined by rule 3, −1 for none. */
  readonly endJoinedTo: Int32Array;
  /** First end of the bundle of ends at one place that the end belongs to (rule 3), −1 for none. */
  readonly endBundle: Int32Array;
  /** Seams between equal strips that meet end to end (rule 5). */
  readonly strips: StripEnds;
  /** Places of nodes on centrelines: columns sorted by node; a well is a stretch from … to. */
  readonly firstPlace: Int32Array;
  readonly placeCentreline: Int32Array;
  readonly placeFrom: Float64Array;
  readonly placeTo: Float64Array;
}
