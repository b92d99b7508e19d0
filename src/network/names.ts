import { type Network, NODE_KINDS, type NodeKind } from './types.ts';

const NODE_LETTER: Readonly<Record<NodeKind, string>> = { port: 'P', junction: 'J', end: 'E', step: 'S' };

/** 1-based number of each node among those of its kind. */
export function numberOfKind(nodeKind: Uint8Array): Int32Array {
  const seen = new Int32Array(NODE_KINDS.length);
  return Int32Array.from(nodeKind, (kind) => ++seen[kind]);
}

/** Name of a node: a port's own name; else J1, J2 … for junctions, E1 … for ends, S1 … for steps, in drawn order. */
export function nodeName(
  { chip, nodeKind, nodePort, nodeNumber }: Pick<Network, 'chip' | 'nodeKind' | 'nodePort' | 'nodeNumber'>,
  node: number,
): string {
  return nodePort[node] >= 0
    ? chip.ports[nodePort[node]].name
    : `${NODE_LETTER[NODE_KINDS[nodeKind[node]]]}${nodeNumber[node]}`;
}

/** Name of a reach: its channel's; with more than one reach, counted in drawn order: `feed:1`, `feed:2`. */
export function reachName(
  {
    chip,
    reachChannel,
    reachNumber,
    channelReachCount,
  }: Pick<Network, 'chip' | 'reachChannel' | 'reachNumber' | 'channelReachCount'>,
  reach: number,
): string {
  const channel = reachChannel[reach];
  const { name } = chip.channels[channel];
  return channelReachCount[channel] > 1 ? `${name}:${reachNumber[reach]}` : name;
}

/** Name of a segment: its reach's, and its number in it from → to: `feed:2/3`. */
export function segmentName(network: Network, segment: number): string {
  const reach = network.segmentReach[segment];
  return `${reachName(network, reach)}/${segment - network.firstSegment[reach] + 1}`;
}
