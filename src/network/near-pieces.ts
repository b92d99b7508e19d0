import type { Chip } from '../chip/types.ts';
import { FINE_MM } from '../geometry/curve.ts';
import { cutFinely } from '../geometry/fine-cuts.ts';
import { findNearPairs, type Nearness, piecesNear } from '../geometry/near.ts';
import { distanceToPiece } from '../geometry/on-piece.ts';
import { endPiece, type Pieces, toPieces } from '../geometry/pieces.ts';
import { toEnds } from './draft.ts';

/**
 * All pieces of a chip and the pairs of them that come near each other. Where a strip or a well comes near a curve, the
 * chord there is cut finely first, so that whatever is measured at the wall is exact to 0.1 µm; all other curves stay
 * coarse. Nothing is done twice on a chip of straight strokes.
 */
export function findNearPieces(chip: Chip, withinMm: number): Nearness {
  const coarse = toPieces(chip.channels);
  const near = findNear(coarse);
  if (coarse.curves.size === 0) return near;
  const cut = new Uint8Array(coarse.count);
  markPairs(near, cut);
  markAroundEnds(chip, near, cut);
  markAtWells(chip, near, cut);
  return cut.includes(1) ? findNear(cutFinely(coarse, cut, finenessMm(near))) : near;

  function findNear(pieces: Pieces): Nearness {
    return findNearPairs(
      pieces,
      withinMm,
      (piece) => (chip.channels[pieces.channel[piece]].linecap === 'square' ? Math.SQRT2 : 1),
      chip.file,
    );
  }
}

/** Finer than a share of the drawing no curve need be cut: on one of many metres it would cost time without bound. */
function finenessMm({ index }: Nearness): number {
  const extentMm = Math.max(index.maxX - index.minX, index.maxY - index.minY);
  return Math.max(FINE_MM, FINE_MM * (extentMm / 1000));
}

function markPairs({ pieces, pairCount, pairA, pairB, pairDistance }: Nearness, cut: Uint8Array): void {
  for (let k = 0; k < pairCount; k++) {
    const i = pairA[k];
    const j = pairB[k];
    if (isOneRun(pieces, i, j, pairDistance[k])) continue;
    mark(pieces, cut, i);
    mark(pieces, cut, j);
  }
}

function mark(pieces: Pieces, cut: Uint8Array, piece: number): void {
  if (pieces.curves.has(piece)) cut[piece] = 1;
}

/** Two pieces of one centreline about as far apart as along it: it runs on there, and has no wall. */
function isOneRun(pieces: Pieces, i: number, j: number, distance: number): boolean {
  const c = pieces.centreline[i];
  if (c !== pieces.centreline[j]) return false;
  const between = pieces.start[j] - pieces.start[i] - pieces.length[i];
  const round = pieces.centrelineLength[c] - between - pieces.length[i] - pieces.length[j];
  return distance >= 0.9 * (pieces.centrelineClosed[c] === 1 ? Math.min(between, round) : between);
}

/** An end in the strip of a curve may be carried on by up to that strip's width, also beyond the chord that it is near. */
function markAroundEnds(chip: Chip, near: Nearness, cut: Uint8Array): void {
  const { pieces, index } = near;
  const ends = toEnds(pieces);
  for (let end = 0; end < 2 * pieces.centrelineCount; end++) {
    if (pieces.centrelineClosed[end >> 1] === 1) continue;
    const [x, y] = [ends.x[end], ends.y[end]];
    for (const other of piecesNear(near, endPiece(pieces, end))) {
      if (!pieces.curves.has(other)) continue;
      const strip = pieces.half[other] + chip.joinWithinMm + pieces.bulge[other];
      if (distanceToPiece(pieces, other, x, y) > strip) continue;
      const reach = 2 * strip;
      const found = index.search(x - reach, y - reach, x + reach, y + reach, (i) => pieces.curves.has(i));
      for (const i of found) if (pieces.channel[i] === pieces.channel[other]) cut[i] = 1;
    }
  }
}

function markAtWells(chip: Chip, { pieces, index }: Nearness, cut: Uint8Array): void {
  for (const { xMm, yMm, radiusMm } of chip.ports) {
    const r = radiusMm + chip.joinWithinMm;
    for (const i of index.search(xMm - r, yMm - r, xMm + r, yMm + r)) {
      if (distanceToPiece(pieces, i, xMm, yMm) <= r + pieces.half[i] + pieces.bulge[i]) mark(pieces, cut, i);
    }
  }
}
