import { type Box, type ChipGeometry, segmentTouchesBox, stripHalfWidthMm } from './map-geometry.ts';

/** A text that wants a place near one of its anchors; paper millimetres. */
export interface LabelWish {
  readonly text: string;
  readonly widthMm: number;
  readonly heightMm: number;
  /** What to try when this finds no place: the same in fewer letters. */
  readonly shorter?: LabelWish;
  /** Points it may belong to, best first, each with how far from it the label must stay (the strip's or hole's half width). */
  readonly anchors: readonly { readonly x: number; readonly y: number; readonly clear: number }[];
}

export interface PlacedLabel {
  readonly wish: LabelWish;
  readonly box: Box;
  /** From the label to its anchor, where they are not next to each other. */
  readonly leader: Line | null;
}

/** Where labels may not go, besides each other: channels and other obstacles. */
export interface LabelGround {
  readonly area: Box;
  readonly geometry: ChipGeometry;
  /** Paper = (drawing − origin) × scale + offset. */
  readonly toDrawing: (box: Box) => Box;
  readonly scale: number;
  /** Least half width that a stroke is painted with, paper mm. */
  readonly leastHalfWidthMm: number;
  /** Holes, markers and the like, paper mm. */
  readonly obstacles: readonly Box[];
  /** Lines that no label may lie on, paper mm: x1 y1 x2 y2. */
  readonly lines: readonly Line[];
}

const GAP_MM = 0.6;
/** Directions in order of liking: right, left, above, below, then oblique. */
const DIRECTIONS: readonly (readonly [number, number])[] = [
  [1, 0],
  [0, -1],
  [-1, 0],
  [0, 1],
  [0.7, -0.7],
  [-0.7, -0.7],
  [0.7, 0.7],
  [-0.7, 0.7],
];
const DISTANCES_MM: readonly number[] = [0, 1.5, 3.5, 6, 9, 13];

/**
 * Places labels in the order given; a later one gives way. No label touches another, an obstacle, a channel or the rim of the area;
 * one that finds no such place is left out (undefined in the answer). Work per label is bounded.
 */
export function placeLabels(
  wishes: readonly LabelWish[],
  ground: LabelGround,
): readonly (PlacedLabel | undefined)[] {
  const taken: Box[] = [...ground.obstacles];
  const lines: Line[] = [...ground.lines];
  return wishes.map((wish) => {
    let placed: PlacedLabel | undefined;
    for (
      let next: LabelWish | undefined = wish;
      next !== undefined && placed === undefined;
      next = next.shorter
    ) {
      placed = placeOne(next, ground, taken, lines);
    }
    if (placed !== undefined) {
      taken.push(placed.box);
      if (placed.leader !== null) lines.push(placed.leader);
    }
    return placed;
  });
}

type Line = readonly [number, number, number, number];

function placeOne(
  wish: LabelWish,
  ground: LabelGround,
  taken: readonly Box[],
  lines: readonly Line[],
): PlacedLabel | undefined {
  for (const distance of DISTANCES_MM) {
    for (const anchor of wish.anchors) {
      for (const [dx, dy] of DIRECTIONS) {
        const away = anchor.clear + GAP_MM + distance;
        const box = {
          x: anchor.x + dx * away + (sign(dx) - 1) * (wish.widthMm / 2),
          y: anchor.y + dy * away + (sign(dy) - 1) * (wish.heightMm / 2),
          width: wish.widthMm,
          height: wish.heightMm,
        };
        if (!inside(box, ground.area) || taken.some((other) => overlap(box, other))) continue;
        if (lines.some(([x1, y1, x2, y2]) => segmentTouchesBox(x1, y1, x2, y2, 0.2, box))) continue;
        if (touchesChannel(box, ground)) continue;
        const leader = distance === 0 ? null : leaderTo(box, anchor.x, anchor.y);
        if (leader !== null && taken.some((other) => crosses(leader, other, anchor))) continue;
        return { wish, box, leader };
      }
    }
  }
  return undefined;
}

function sign(component: number): number {
  return Math.abs(component) < 0.1 ? 0 : Math.sign(component);
}

function inside(box: Box, area: Box): boolean {
  return (
    box.x >= area.x &&
    box.y >= area.y &&
    box.x + box.width <= area.x + area.width &&
    box.y + box.height <= area.y + area.height
  );
}

function overlap(a: Box, b: Box): boolean {
  return (
    a.x < b.x + b.width + 0.3 &&
    b.x < a.x + a.width + 0.3 &&
    a.y < b.y + b.height + 0.2 &&
    b.y < a.y + a.height + 0.2
  );
}

function touchesChannel(box: Box, ground: LabelGround): boolean {
  const { geometry, scale, leastHalfWidthMm } = ground;
  const margin = leastHalfWidthMm;
  const searched = ground.toDrawing({
    x: box.x - margin,
    y: box.y - margin,
    width: box.width + 2 * margin,
    height: box.height + 2 * margin,
  });
  const exact = ground.toDrawing(box);
  return geometry.anyPiece(searched, (piece) => {
    const channel = geometry.chip.channels[geometry.pieceChannel[piece]];
    const reach = Math.max(stripHalfWidthMm(channel), leastHalfWidthMm / scale) + 0.15 / scale;
    const [x1, y1, x2, y2] = geometry.pieces.subarray(4 * piece, 4 * piece + 4);
    return segmentTouchesBox(x1, y1, x2, y2, reach, exact);
  });
}

/** From the nearest point of the label's box to the anchor. */
function leaderTo(box: Box, x: number, y: number): Line {
  const fromX = Math.min(Math.max(x, box.x), box.x + box.width);
  const fromY = Math.min(Math.max(y, box.y), box.y + box.height);
  return [fromX, fromY, x, y];
}

/** Whether a leader runs through a box that is not the one its anchor lies in (its own hole). */
function crosses(
  [x1, y1, x2, y2]: Line,
  box: Box,
  anchor: { readonly x: number; readonly y: number },
): boolean {
  const own =
    anchor.x >= box.x && anchor.x <= box.x + box.width && anchor.y >= box.y && anchor.y <= box.y + box.height;
  return !own && segmentTouchesBox(x1, y1, x2, y2, 0.1, box);
}
