import type { Chip } from '../chip/types.ts';
import { NODE_KINDS } from './types.ts';

const NODE_LETTER: Readonly<Record<(typeof NODE_KINDS)[number], string>> = {
  port: 'P',
  junction: 'J',
  end: 'E',
  step: 'S',
};

/** Names of nodes: a port's own name; else J1, J2 … for junctions, E1 … for ends, S1 … for steps, in drawn order. */
export function nameNodes(chip: Chip, nodeKind: Uint8Array, nodePort: Int32Array): (node: number) => string {
  const number = new Int32Array(nodeKind.length);
  const seen = new Int32Array(NODE_KINDS.length);
  for (let node = 0; node < nodeKind.length; node++) number[node] = ++seen[nodeKind[node]];
  return (node) =>
    nodePort[node] >= 0
      ? chip.ports[nodePort[node]].name
      : `${NODE_LETTER[NODE_KINDS[nodeKind[node]]]}${number[node]}`;
}

interface ReachColumns {
  readonly reachChannel: Int32Array;
  readonly reachNumber: Int32Array;
  readonly channelReachCount: Int32Array;
}

/** The channel's name; with more than one reach, counted in drawn order: `feed:1`, `feed:2`. */
export function nameReach(chip: Chip, columns: ReachColumns, reach: number): string {
  const channel = columns.reachChannel[reach];
  const { name } = chip.channels[channel];
  return columns.channelReachCount[channel] > 1 ? `${name}:${columns.reachNumber[reach]}` : name;
}

/** The reach's name and the segment's number in it from → to: `feed:2/3`. */
export function nameSegment(
  chip: Chip,
  columns: ReachColumns,
  firstSegment: Int32Array,
  segmentReach: ArrayLike<number>,
  segment: number,
): string {
  const reach = segmentReach[segment];
  return `${nameReach(chip, columns, reach)}/${segment - firstSegment[reach] + 1}`;
}
