import { type Groups, sidesByNode } from '../groups.ts';
import type { Network } from '../network/types.ts';
import { type FindingContext, oncePerContext } from './context.ts';

/** A narrower channel that opens into a wider reach at one of the reach's ends. */
export interface Opening {
  readonly feeder: number;
  /** Along the wide channel's axis and within a quarter of its width of it; or from its side or edge. */
  readonly side: 'axis' | 'edge';
}

/** Reaches at each node, as 2·reach + (1 at the reach's `to` end). */
export const reachesAtNodes = oncePerContext(
  ({ network }): Groups => sidesByNode(network.nodeCount, network.reachFrom, network.reachTo),
);

/**
 * The narrower channels that open into a reach at its `end`, with flow that comes from them ('in') or goes into them
 * ('out'). A well spreads the flow by itself and is none.
 */
export function openingsAt(
  { network, chip, flow }: FindingContext,
  { first, item }: Groups,
  wide: number,
  end: 'from' | 'to',
  stream: 'in' | 'out',
): Opening[] {
  const node = (end === 'from' ? network.reachFrom : network.reachTo)[wide];
  if (network.nodePort[node] >= 0 || flow === null) return [];
  const widthMm = chip.channels[network.reachChannel[wide]].ductWidthMm;
  const openings: Opening[] = [];
  for (let k = first[node]; k < first[node + 1]; k++) {
    const feeder = item[k] >> 1;
    const isAtTo = (item[k] & 1) === 1;
    const feederMm = chip.channels[network.reachChannel[feeder]].ductWidthMm;
    const towardsNode = isAtTo ? flow.reachFlow[feeder] : -flow.reachFlow[feeder];
    const carries = stream === 'in' ? towardsNode > 0 : towardsNode < 0;
    if (feeder === wide || !carries || !(feederMm < widthMm * (1 - 1e-9))) continue;
    openings.push({ feeder, side: sideOf(network, wide, end, feeder, isAtTo) });
  }
  return openings;
}

/** Within this angle of the wide channel's axis a feeder comes along it, else through its side. */
const ALONG_COSINE = Math.SQRT1_2;

/**
 * In the wide reach's frame (u downstream from its end wall, v across) the feeder is followed outwards from the node to the
 * segment that leaves the wide strip: where and how steeply that one crosses the wall is what the flow feels. What
 * comes before it is only the carried-on piece to the wide centreline.
 */
function sideOf(
  network: Network,
  wide: number,
  end: 'from' | 'to',
  feeder: number,
  isAtTo: boolean,
): Opening['side'] {
  const { firstSegment, segmentX1, segmentY1, segmentX2, segmentY2 } = network;
  const w = end === 'from' ? firstSegment[wide] : firstSegment[wide + 1] - 1;
  const sign = end === 'from' ? 1 : -1;
  const x0 = end === 'from' ? segmentX1[w] : segmentX2[w];
  const y0 = end === 'from' ? segmentY1[w] : segmentY2[w];
  const length = Math.hypot(segmentX2[w] - segmentX1[w], segmentY2[w] - segmentY1[w]);
  const ux = (sign * (segmentX2[w] - segmentX1[w])) / length;
  const uy = (sign * (segmentY2[w] - segmentY1[w])) / length;
  const halfMm = network.chip.channels[network.reachChannel[wide]].stripHalfWidthMm;
  const count = firstSegment[feeder + 1] - firstSegment[feeder];
  for (let k = 0; k < count; k++) {
    const s = isAtTo ? firstSegment[feeder + 1] - 1 - k : firstSegment[feeder] + k;
    const [nearX, nearY, farX, farY] = isAtTo
      ? [segmentX2[s], segmentY2[s], segmentX1[s], segmentY1[s]]
      : [segmentX1[s], segmentY1[s], segmentX2[s], segmentY2[s]];
    const farU = (farX - x0) * ux + (farY - y0) * uy;
    const farV = (farY - y0) * ux - (farX - x0) * uy;
    // still inside, up to rounding and the slack of joining
    if (farU > -SLACK_MM && Math.abs(farV) <= halfMm * (1 + 1e-6) + SLACK_MM && k < count - 1) continue;
    const nearU = (nearX - x0) * ux + (nearY - y0) * uy;
    const nearV = (nearY - y0) * ux - (nearX - x0) * uy;
    const du = nearU - farU;
    const isAlong = du > ALONG_COSINE * Math.hypot(du, nearV - farV);
    return isAlong && Math.abs(nearV) <= halfMm / 2 + SLACK_MM ? 'axis' : 'edge';
  }
  return 'edge';
}

const SLACK_MM = 1e-3;
