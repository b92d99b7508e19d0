import { piecesNear } from '../geometry/near.ts';
import {
  COARSE_SHARE,
  commonOutline,
  distanceToOutline,
  leastWidth,
  middleOfOutline,
  type Outline,
  pieceOutline,
  type Rounds,
} from '../geometry/outline.ts';
import { neighbourPiece, type Pieces } from '../geometry/pieces.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import { lieAlong } from '../network/meetings.ts';
import type { Line } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { hasPlaceOn } from './meets.ts';
import { portsNear } from './near-ports.ts';
import { alongPiece, isLeftOutOn, meetInNode } from './shared-nodes.ts';
import { coveredLength, extentOf, type Facing, groupStretches, rangeOf, type Wall } from './stretches.ts';

/**
 * One etched area is one network: where two strips of a plane overlap, or two stretches of one more than four widths
 * apart along it, the fluid passes, and the network must say so.
 *
 * Two pieces that overlap are joined there when a node of both lies in what they have in common, or a well that both meet
 * reaches it, or a third piece does that is joined to each of them there. The last is asked again and again until nothing
 * changes, for a curve drawn as many short strokes passes the joint on from one to the next; a bend passes it on too.
 *
 * Cost: linear in the near pairs. Nearly all of them meet in a node at the place where they are nearest; only the rest is
 * looked at in outline.
 */
export const unjoinedAreas = oncePerContext((context): readonly Wall[] => {
  const { pieces } = context.network.trace.near;
  const unjoined = overlapsOf(context)
    .all()
    .filter(({ joined }) => !joined);
  const faced = unjoined.map((overlap) => toFaced(pieces, overlap));
  return groupStretches(faced, ({ bridgeMm }) => bridgeMm).map(toWall);
});

type Point = readonly [x: number, y: number];

/** Whether a place on piece i and one on piece j lie in one third strip that both pieces are joined to there. */
export function liesInThird(context: FindingContext, i: number, j: number, onI: Point, onJ: Point): boolean {
  return overlapsOf(context).liesInThird(i, j, onI, onJ);
}

const overlapsOf = oncePerContext((context) => {
  const overlaps = new Overlaps(context);
  overlaps.findOpen();
  overlaps.passOn(overlaps.all());
  return overlaps;
});

/** Two pieces that overlap and hold no node of both. */
interface Overlap {
  readonly i: number;
  readonly j: number;
  readonly common: Outline;
  joined: boolean;
}

/** A piece with more neighbours than this is drawn over so often that the rest of them tells nothing new; bounds the time. */
const MOST_NEIGHBOURS = 64;

/** An overlap narrower than this share of both halves is what rounding of the coordinates makes of two walls in one place. */
const ROUNDING = 1e-9;

class Overlaps {
  private readonly context: FindingContext;
  private readonly pieces: Pieces;
  private readonly slackMm: number;
  /** Of the near pair with this index; null where square ends keep the two apart. */
  private readonly open = new Map<number, Overlap | null>();

  constructor(context: FindingContext) {
    this.context = context;
    this.pieces = context.network.trace.near.pieces;
    this.slackMm = context.chip.joinWithinMm;
  }

  /** The overlaps of near pairs that hold no node of both and reach no well of both. */
  findOpen(): void {
    const { pieces } = this;
    const { pairCount, pairA, pairB, pairDistance } = this.context.network.trace.near;
    for (let k = 0; k < pairCount; k++) {
      const i = pairA[k];
      const j = pairB[k];
      // Where two pieces cross, the network has a node by construction (network/meetings.ts): at nearly all places.
      if (pairDistance[k] === 0 && !lieAlong(pieces, i, j)) continue;
      // The strip of a piece lies within half a width of it, whatever its ends.
      if (pairDistance[k] > pieces.half[i] + pieces.half[j]) continue;
      if (isOneStretch(pieces, i, j) || meetInNode(this.context, i, j)) continue;
      const common = overlapOf(pieces, i, j);
      if (common === null) this.open.set(k, null);
      else if (
        !isLeftOutOn(this.context, i, j) &&
        !isLeftOutOn(this.context, j, i) &&
        !this.meetInWell(i, j, common)
      )
        this.open.set(k, { i, j, common, joined: false });
    }
  }

  /** Those that square ends do not keep apart. */
  all(): readonly Overlap[] {
    return [...this.open.values()].filter((overlap) => overlap !== null);
  }

  /** Joins what a third piece joins, to and fro along the list, until nothing changes. */
  passOn(open: readonly Overlap[]): void {
    let waiting = open;
    for (;;) {
      const still: Overlap[] = [];
      for (const overlap of waiting) {
        overlap.joined = this.isJoinedByThird(overlap);
        if (!overlap.joined) still.push(overlap);
      }
      if (still.length === waiting.length || still.length === 0) return;
      waiting = still.reverse();
    }
  }

  liesInThird(i: number, j: number, onI: Point, onJ: Point): boolean {
    const { pieces, slackMm } = this;
    return this.thirdsOf(i, j).some(
      (k) =>
        pieces.centreline[k] !== pieces.centreline[i] &&
        pieces.centreline[k] !== pieces.centreline[j] &&
        isInPieceStrip(pieces, k, ...onI, slackMm, null) &&
        isInPieceStrip(pieces, k, ...onJ, slackMm, null) &&
        this.isJoined(i, k) &&
        this.isJoined(j, k),
    );
  }

  private isJoinedByThird({ i, j, common }: Overlap): boolean {
    for (const k of this.thirdsOf(i, j)) {
      if (!this.isJoined(i, k) || !this.isJoined(j, k)) continue;
      if (this.holdsCornerOf(k, common)) return true;
      if (commonOutline(common, pieceOutline(this.pieces, k, this.slackMm, 'coarse')).length > 0) return true;
    }
    return false;
  }

  /** Nearly always a corner of what two have in common lies in the third, and clipping can be spared. */
  private holdsCornerOf(k: number, common: Outline): boolean {
    for (let m = 0; m < common.length; m += 2) {
      if (isInPieceStrip(this.pieces, k, common[m], common[m + 1], this.slackMm, null)) return true;
    }
    return false;
  }

  /** Pieces that may overlap both: what goes on from them, and what comes near the one of them that has fewer neighbours. */
  private thirdsOf(i: number, j: number): number[] {
    const { near } = this.context.network.trace;
    const fewer = this.fewer(i, j);
    return [
      ...besides(this.pieces, i),
      ...besides(this.pieces, j),
      ...piecesNear(near, fewer, MOST_NEIGHBOURS),
    ].filter((k) => k !== i && k !== j);
  }

  /** The one of two pieces that has fewer neighbours. */
  private fewer(i: number, j: number): number {
    const { firstPair } = this.context.network.trace.near;
    return firstPair[i + 1] - firstPair[i] <= firstPair[j + 1] - firstPair[j] ? i : j;
  }

  private isJoined(i: number, k: number): boolean {
    if (isOneStretch(this.pieces, i, k)) return true;
    const pair = this.pairOf(i, k);
    if (pair < 0) return false;
    const overlap = this.open.get(pair);
    if (overlap !== undefined) return overlap?.joined === true;
    const { pairDistance } = this.context.network.trace.near;
    return pairDistance[pair] <= this.pieces.half[i] + this.pieces.half[k];
  }

  /** Index of the near pair of two pieces, −1 when they are none. */
  private pairOf(i: number, j: number): number {
    const { firstPair, pairOf, pairA, pairB } = this.context.network.trace.near;
    const own = this.fewer(i, j);
    const other = own === i ? j : i;
    for (let m = firstPair[own]; m < firstPair[own + 1]; m++) {
      const pair = pairOf[m];
      if (pairA[pair] === other || pairB[pair] === other) return pair;
    }
    return -1;
  }

  private meetInWell(i: number, j: number, common: Outline): boolean {
    const { chip, network } = this.context;
    const { centreline } = this.pieces;
    const { x, y } = middleOfOutline(common);
    let reach = 0;
    for (let k = 0; k < common.length; k += 2)
      reach = Math.max(reach, Math.hypot(common[k] - x, common[k + 1] - y));
    return portsNear(this.context, x, y, reach + this.slackMm).some((p) => {
      const { xMm, yMm, radiusMm } = chip.ports[p];
      const node = network.portNode[p];
      return (
        distanceToOutline(common, xMm, yMm) <= radiusMm + this.slackMm &&
        hasPlaceOn(network, node, centreline[i]) &&
        hasPlaceOn(network, node, centreline[j])
      );
    });
  }
}

/** What the strips of two pieces have in common; null where they only touch, which thin-wall speaks of. */
function overlapOf(pieces: Pieces, i: number, j: number): Outline | null {
  const coarse = commonIn(pieces, i, j, 'coarse');
  const halves = pieces.half[i] + pieces.half[j];
  if (coarse.length > 0 && leastWidth(coarse).widthMm > 2 * COARSE_SHARE * halves) return coarse;
  const fine = commonIn(pieces, i, j, 'fine');
  return fine.length > 0 && leastWidth(fine).widthMm > ROUNDING * halves ? fine : null;
}

function commonIn(pieces: Pieces, i: number, j: number, rounds: Rounds): Outline {
  return commonOutline(pieceOutline(pieces, i, 0, rounds), pieceOutline(pieces, j, 0, rounds));
}

/**
 * Pieces of one centreline that go on in each other, or overlap only within four widths along it: one duct, turning or not.
 */
function isOneStretch(pieces: Pieces, i: number, j: number): boolean {
  const c = pieces.centreline[i];
  if (c !== pieces.centreline[j]) return false;
  const [low, high] = i < j ? [i, j] : [j, i];
  if (high - low <= 1) return true;
  const fourWidths = 8 * pieces.half[i];
  const onLow = reachOnto(pieces, low, high);
  const onHigh = reachOnto(pieces, high, low);
  if (onHigh[1] - onLow[0] <= fourWidths) return true;
  if (pieces.centrelineClosed[c] === 0) return false;
  if (low === pieces.firstPiece[c] && high === pieces.firstPiece[c + 1] - 1) return true;
  return pieces.centrelineLength[c] - onHigh[0] + onLow[1] <= fourWidths;
}

/** Positions on piece i between which the strip of piece j, of the same width, can reach it. */
function reachOnto(pieces: Pieces, i: number, j: number): readonly [number, number] {
  const { half, start } = pieces;
  const one = alongPiece(pieces, i, pieces.x1[j], pieces.y1[j]);
  const two = alongPiece(pieces, i, pieces.x2[j], pieces.y2[j]);
  return [
    start[i] + Math.max(0, Math.min(one, two) - half[j]),
    start[i] + Math.min(pieces.length[i], Math.max(one, two) + half[j]),
  ];
}

/** The pieces before and after one on its centreline. */
function besides(pieces: Pieces, i: number): number[] {
  return [neighbourPiece(pieces, i, -1), neighbourPiece(pieces, i, 1)].filter((k) => k >= 0);
}

/** An overlap as stretches of its two centrelines that face each other. */
interface Faced extends Facing {
  readonly overlap: Overlap;
  readonly widthMm: number;
  readonly mark: Line;
  readonly bridgeMm: number;
}

function toFaced(pieces: Pieces, overlap: Overlap): Faced {
  const { i, j } = overlap;
  const common = commonIn(pieces, i, j, 'fine');
  const { widthMm, nx, ny } = leastWidth(common);
  const { x, y } = middleOfOutline(common);
  const [from, to] = extentOn(pieces, i, common);
  const [otherFrom, otherTo] = extentOn(pieces, j, common);
  const h = widthMm / 2;
  return {
    a: pieces.centreline[i],
    b: pieces.centreline[j],
    from,
    to,
    otherFrom,
    otherTo,
    overlap,
    widthMm,
    mark: [x - h * nx, y - h * ny, x + h * nx, y + h * ny],
    bridgeMm: pieces.half[i] + pieces.half[j],
  };
}

function extentOn(pieces: Pieces, i: number, outline: Outline): readonly [number, number] {
  const corners = outline.flatMap((x, k) => (k % 2 === 0 ? [[x, outline[k + 1]]] : []));
  return rangeOf(corners.map(([x, y]) => pieces.start[i] + alongPiece(pieces, i, x, y)));
}

function toWall(group: readonly Faced[]): Wall {
  const widest = group.reduce((most, faced) => (faced.widthMm > most.widthMm ? faced : most));
  return {
    pieceA: widest.overlap.i,
    pieceB: widest.overlap.j,
    ...extentOf(group),
    lengthMm: coveredLength(group.map(({ from, to }) => [from, to])),
    gapMm: -widest.widthMm,
    mark: widest.mark,
  };
}
