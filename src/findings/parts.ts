import { toGroups } from '../groups.ts';
import { channelOf } from './centrelines.ts';
import { type FindingContext, oncePerContext } from './context.ts';

/** Which connected part of the network each drawn thing belongs to; −1 for none. */
interface PartsOnDrawing {
  readonly ofCentreline: Int32Array;
  readonly ofPort: Int32Array;
  /** Pieces of part p are pieceOf[firstPiece[p]] … pieceOf[firstPiece[p + 1] − 1]. */
  readonly firstPiece: Int32Array;
  readonly pieceOf: Int32Array;
}

/** Empty while nothing is solved. A centreline that is all open well, or left out whole, belongs to no part. */
export const partsOnDrawing = oncePerContext(({ network, flow }): PartsOnDrawing => {
  const { near, firstArc, arcReach } = network.trace;
  const { pieces } = near;
  const ofCentreline = new Int32Array(pieces.centrelineCount).fill(-1);
  if (flow !== null) {
    for (let c = 0; c < pieces.centrelineCount; c++) {
      if (firstArc[c + 1] > firstArc[c])
        ofCentreline[c] = flow.nodePart[network.reachFrom[arcReach[firstArc[c]]]];
    }
  }
  const ofPiece = pieces.centreline.map((c) => ofCentreline[c]);
  const { first: firstPiece, item: pieceOf } = toGroups(flow?.parts.length ?? 0, ofPiece);
  return {
    ofCentreline,
    ofPort: Int32Array.from(network.portNode, (node) => (flow === null ? -1 : flow.nodePart[node])),
    firstPiece,
    pieceOf,
  };
});

/** A channel or a well, and the connected part that it belongs to. */
export interface PartMember {
  readonly part: number;
  readonly name: string;
}

/** The channel of a centreline. */
export function channelMember(context: FindingContext, centreline: number): PartMember {
  const part = partsOnDrawing(context).ofCentreline[centreline];
  return { part, name: channelOf(context.network, centreline).name };
}

export function portMember(context: FindingContext, port: number): PartMember {
  return { part: partsOnDrawing(context).ofPort[port], name: context.chip.ports[port].name };
}
