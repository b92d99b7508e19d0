import { type FindingContext, oncePerContext } from './context.ts';

/** Which connected part of the network each drawn thing belongs to; −1 for none. */
export interface PartsOnDrawing {
  readonly ofCentreline: Int32Array;
  readonly ofPort: Int32Array;
  /** Pieces of part p are pieceOf[firstPiece[p]] … pieceOf[firstPiece[p + 1] − 1]. */
  readonly firstPiece: Int32Array;
  readonly pieceOf: Int32Array;
}

/** Empty while nothing is solved. A centreline that is all open well, or left out whole, belongs to no part. */
export const partsOnDrawing: (context: FindingContext) => PartsOnDrawing = oncePerContext(
  ({ network, flow }) => {
    const { near, firstArc, arcReach } = network.trace;
    const { pieces } = near;
    const ofCentreline = new Int32Array(pieces.centrelineCount).fill(-1);
    if (flow !== null) {
      for (let c = 0; c < pieces.centrelineCount; c++) {
        if (firstArc[c + 1] > firstArc[c])
          ofCentreline[c] = flow.nodePart[network.reachFrom[arcReach[firstArc[c]]]];
      }
    }
    const firstPiece = new Int32Array((flow?.parts.length ?? 0) + 1);
    for (let i = 0; i < pieces.count; i++) {
      const part = ofCentreline[pieces.centreline[i]];
      if (part >= 0) firstPiece[part + 1]++;
    }
    for (let p = 1; p < firstPiece.length; p++) firstPiece[p] += firstPiece[p - 1];
    const fill = firstPiece.slice();
    const pieceOf = new Int32Array(firstPiece[firstPiece.length - 1]);
    for (let i = 0; i < pieces.count; i++) {
      const part = ofCentreline[pieces.centreline[i]];
      if (part >= 0) pieceOf[fill[part]++] = i;
    }
    return {
      ofCentreline,
      ofPort: Int32Array.from(network.portNode, (node) => (flow === null ? -1 : flow.nodePart[node])),
      firstPiece,
      pieceOf,
    };
  },
);
