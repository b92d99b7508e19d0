import { grouped } from '../by-key.ts';
import { endPiece } from '../geometry/pieces.ts';
import type { Network } from '../network/types.ts';
import { oncePerContext } from './context.ts';

/**
 * A place where a part ends dead: one channel end that meets nothing, or a bundle of ends that meet only each other.
 * Of a bundle it is the whole that must meet something: a stroke drawn twice joins itself and is cut off all the same.
 */
export interface Tip {
  /** The ends that stand there (2·centreline, + 1 at the last point), the widest first. */
  readonly ends: readonly number[];
  /** Ends there that rule 4 left out: drawn, but in no reach. */
  readonly leftOut: readonly number[];
  readonly x: number;
  readonly y: number;
  /** Unit direction out of the channels, the mean of all. */
  readonly outX: number;
  readonly outY: number;
  /** end: all come from one side. fan: they come from several, as where a fork begins; a corner drawn in two strokes looks the same. */
  readonly kind: 'end' | 'fan';
}

/** Directions of one tip lie within this angle of their mean. */
const COS_ONE_SIDE = Math.cos(Math.PI / 8);

/** Where the directions cancel further than this, channels go on in each other: a seam or a star, no tip. */
const LEAST_MEAN = 0.2;

/** All tips of the drawing, in the order of their first ends. Cost: linear in the ends. */
export const tipsOf = oncePerContext(({ network }): readonly Tip[] =>
  endGroups(network).flatMap((ends) => toTip(network, ends) ?? []),
);

/** Tip of each end, −1 for an end at none. */
export const tipOfEnd = oncePerContext((context): Int32Array => {
  const of = new Int32Array(context.network.trace.endFate.length).fill(-1);
  tipsOf(context).forEach(({ ends }, tip) => {
    for (const end of ends) of[end] = tip;
  });
  return of;
});

/** Ends that meet nothing, and bundles whose members were carried on to nothing. */
function endGroups({ trace }: Network): number[][] {
  const { endFate, endBundle, endJoinedTo } = trace;
  const meets = new Set<number>();
  const ends: number[] = [];
  endFate.forEach((fate, end) => {
    const bundle = endBundle[end];
    if (bundle >= 0 && (endJoinedTo[end] >= 0 || fate === 'port')) meets.add(bundle);
    if (bundle >= 0 || fate === 'open') ends.push(end);
  });
  // An end that is in no bundle is a group by itself.
  const groups = grouped(ends, (end) => (endBundle[end] < 0 ? ~end : endBundle[end]));
  return [...groups].filter(([bundle]) => !meets.has(bundle)).map(([, members]) => members);
}

function toTip(network: Network, members: readonly number[]): Tip | null {
  const { half } = network.trace.near.pieces;
  const ends = members.filter((end) => !isLeftOut(network, end));
  if (ends.length === 0) return null;
  const places = ends.map((end) => ({ end, ...endPlace(network, end) }));
  const sumX = places.reduce((sum, place) => sum + place.outX, 0);
  const sumY = places.reduce((sum, place) => sum + place.outY, 0);
  const length = Math.hypot(sumX, sumY);
  if (length < LEAST_MEAN * ends.length) return null;
  const outX = sumX / length;
  const outY = sumY / length;
  const oneSided = places.every((place) => place.outX * outX + place.outY * outY >= COS_ONE_SIDE);
  const byWidth = places.sort((a, b) => half[b.piece] - half[a.piece] || a.end - b.end);
  const [{ x, y }] = byWidth;
  return {
    ends: byWidth.map(({ end }) => end),
    leftOut: members.filter((end) => isLeftOut(network, end)),
    x,
    y,
    outX,
    outY,
    kind: oneSided ? 'end' : 'fan',
  };
}

/** A stroke left out whole may have been so from its other end. */
function isLeftOut({ trace: { endFate, firstArc } }: Network, end: number): boolean {
  const c = end >> 1;
  return endFate[end] === 'left out' || (firstArc[c] === firstArc[c + 1] && endFate[end ^ 1] === 'left out');
}

/** Place of an end and unit direction out of its channel. */
export function endPlace({ trace }: Network, end: number) {
  const { pieces } = trace.near;
  const atStart = (end & 1) === 0;
  const piece = endPiece(pieces, end);
  return {
    piece,
    x: atStart ? pieces.x1[piece] : pieces.x2[piece],
    y: atStart ? pieces.y1[piece] : pieces.y2[piece],
    outX: pieces.outX[end],
    outY: pieces.outY[end],
    s: atStart ? 0 : pieces.centrelineLength[end >> 1],
  };
}
