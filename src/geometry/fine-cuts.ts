import { finePieces } from './curve.ts';
import { emptyPieces, type Pieces, setPlace } from './pieces.ts';

/**
 * The same pieces, but those marked in `cut` replaced by as many as it takes to stay within `fineMm` of their curve. A wall
 * beside them is then measured within 0.1 µm at any radius, while curves that nothing comes near stay coarse.
 *
 * Cost: linear in the pieces; one of radius R becomes about √(7 R/mm) of them.
 */
export function cutFinely(pieces: Pieces, cut: Uint8Array, fineMm: number): Pieces {
  const parts = new Map<number, ReturnType<typeof finePieces>>();
  let count = pieces.count;
  for (const [i, curve] of pieces.curves) {
    if (cut[i] === 0) continue;
    const fine = finePieces(curve, fineMm);
    parts.set(i, fine);
    count += fine.length - 1;
  }
  const made = emptyPieces(pieces.centrelineCount, count);
  made.centrelineChannel.set(pieces.centrelineChannel);
  made.centrelineClosed.set(pieces.centrelineClosed);
  made.outX.set(pieces.outX);
  made.outY.set(pieces.outY);
  let n = 0;
  for (let c = 0; c < pieces.centrelineCount; c++) {
    made.firstPiece[c] = n;
    let start = 0;
    for (let i = pieces.firstPiece[c]; i < pieces.firstPiece[c + 1]; i++) {
      const fine = parts.get(i);
      if (fine === undefined) {
        const curve = pieces.curves.get(i);
        if (curve !== undefined) made.curves.set(n, curve);
        add(i, pieces.x1[i], pieces.y1[i], pieces.x2[i], pieces.y2[i], pieces.bulge[i]);
        continue;
      }
      let x = pieces.x1[i];
      let y = pieces.y1[i];
      fine.forEach((part, k) => {
        // The vertex as it was laid out, not as the curve's own end is rounded.
        const isLast = k === fine.length - 1;
        const toX = isLast ? pieces.x2[i] : part.x;
        const toY = isLast ? pieces.y2[i] : part.y;
        add(i, x, y, toX, toY, part.departure);
        x = toX;
        y = toY;
      });
    }
    made.centrelineLength[c] = start;

    function add(i: number, x1: number, y1: number, x2: number, y2: number, bulge: number): void {
      setPlace(made, n, x1, y1, x2, y2, start);
      start += made.length[n];
      made.half[n] = pieces.half[i];
      made.bendRadius[n] = pieces.bendRadius[i];
      made.bulge[n] = bulge;
      made.chord[n] = pieces.chord[i];
      made.centreline[n] = c;
      made.channel[n] = pieces.channel[i];
      made.plane[n] = pieces.plane[i];
      n++;
    }
  }
  made.firstPiece[pieces.centrelineCount] = n;
  return made;
}
