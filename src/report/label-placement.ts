import type { PaperFrame } from './map-frame.ts';
import { type Box, type ChipGeometry, type Line, lineTouchesBox, stripHalfWidthMm } from './map-geometry.ts';
import type { MapHole, MapLabel } from './map-types.ts';

/** A text that wants a place near one of its anchors; paper millimetres. */
export interface LabelWish {
  readonly kind: MapLabel['kind'];
  readonly text: string;
  readonly widthMm: number;
  /** Of its letters; it takes a quarter more. */
  readonly sizeMm: number;
  /** What to try when this finds no place: the same in fewer letters. */
  readonly shorter?: LabelWish;
  /** Points it may belong to, best first, each with how far from it the label must stay (the strip's or hole's half width). */
  readonly anchors: readonly { readonly x: number; readonly y: number; readonly clear: number }[];
}

/** Where labels may not go, besides each other: channels and other obstacles. */
export interface LabelGround {
  readonly area: Box;
  readonly geometry: ChipGeometry;
  readonly frame: PaperFrame;
  /** Least half width that a stroke is painted with, paper mm. */
  readonly leastHalfWidthMm: number;
  readonly holes: readonly MapHole[];
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
 * Places labels in the order given; a later one gives way. No label touches another, a hole, a channel or the rim of the area;
 * one that finds no such place is left out. A leader that crosses a channel or another leader is taken
 * only when neither the label nor a shorter one of it can do without. Work per label is bounded.
 */
export function placeLabels(wishes: readonly LabelWish[], ground: LabelGround): readonly MapLabel[] {
  const placed: MapLabel[] = [];
  const taken = ground.holes.map(boxOf);
  const leaders: Line[] = [];
  for (const wish of wishes) {
    const label =
      placeShortening(wish, { ground, taken, leaders, crossing: 'none' }) ??
      placeShortening(wish, { ground, taken, leaders, crossing: 'allowed' });
    if (label === undefined) continue;
    placed.push(label);
    taken.push(label.box);
    if (label.leader !== null) leaders.push(label.leader);
  }
  return placed;
}

function boxOf({ x, y, radiusMm }: MapHole): Box {
  return { x: x - radiusMm, y: y - radiusMm, width: 2 * radiusMm, height: 2 * radiusMm };
}

interface Surroundings {
  readonly ground: LabelGround;
  readonly taken: readonly Box[];
  readonly leaders: readonly Line[];
  /** Whether a leader may cross channels and other leaders. */
  readonly crossing: 'none' | 'allowed';
}

function placeShortening(wish: LabelWish, around: Surroundings): MapLabel | undefined {
  for (let next: LabelWish | undefined = wish; next !== undefined; next = next.shorter) {
    const placed = placeOne(next, around);
    if (placed !== undefined) return placed;
  }
  return undefined;
}

function placeOne(wish: LabelWish, { ground, taken, leaders, crossing }: Surroundings): MapLabel | undefined {
  const { kind, text, sizeMm } = wish;
  const heightMm = 1.25 * sizeMm;
  const onLine = (box: Box, lines: readonly Line[]): boolean =>
    lines.some((line) => lineTouchesBox(line, 0.2, box));
  for (const distance of DISTANCES_MM) {
    for (const anchor of wish.anchors) {
      for (const [dx, dy] of DIRECTIONS) {
        const away = anchor.clear + GAP_MM + distance;
        const box = {
          x: anchor.x + dx * away + (sign(dx) - 1) * (wish.widthMm / 2),
          y: anchor.y + dy * away + (sign(dy) - 1) * (heightMm / 2),
          width: wish.widthMm,
          height: heightMm,
        };
        if (!inside(box, ground.area) || taken.some((other) => overlap(box, other))) continue;
        if (onLine(box, ground.lines) || onLine(box, leaders)) continue;
        if (touchesChannel(box, ground)) continue;
        const leader = distance === 0 ? null : leaderTo(box, anchor.x, anchor.y);
        if (leader !== null && taken.some((other) => crosses(leader, other))) continue;
        if (leader !== null && crossing === 'none') {
          if (leaders.some((other) => linesCross(leader, other))) continue;
          if (crossesChannel(leader, anchor.clear, ground)) continue;
        }
        return { kind, text, box, sizeMm, leader };
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
  const { geometry, frame, leastHalfWidthMm } = ground;
  const margin = leastHalfWidthMm;
  const searched = frame.toDrawing({
    x: box.x - margin,
    y: box.y - margin,
    width: box.width + 2 * margin,
    height: box.height + 2 * margin,
  });
  const exact = frame.toDrawing(box);
  return geometry.anyPiece(searched, (piece) => {
    const channel = geometry.chip.channels[geometry.pieceChannel[piece]];
    const reach = Math.max(stripHalfWidthMm(channel), leastHalfWidthMm / frame.scale) + 0.15 / frame.scale;
    return lineTouchesBox(geometry.pieceLine(piece), reach, exact);
  });
}

/** From the nearest point of the label's box to the anchor. */
function leaderTo(box: Box, x: number, y: number): Line {
  const fromX = Math.min(Math.max(x, box.x), box.x + box.width);
  const fromY = Math.min(Math.max(y, box.y), box.y + box.height);
  return [fromX, fromY, x, y];
}

/** Whether a leader runs through a box that is not the one its anchor lies in (its own hole). */
function crosses(leader: Line, box: Box): boolean {
  const [, , x, y] = leader;
  const own = x >= box.x && x <= box.x + box.width && y >= box.y && y <= box.y + box.height;
  return !own && lineTouchesBox(leader, 0.1, box);
}

function linesCross([ax, ay, bx, by]: Line, [cx, cy, dx, dy]: Line): boolean {
  const side = (px: number, py: number, qx: number, qy: number, x: number, y: number): number =>
    (qx - px) * (y - py) - (qy - py) * (x - px);
  return (
    side(ax, ay, bx, by, cx, cy) * side(ax, ay, bx, by, dx, dy) < 0 &&
    side(cx, cy, dx, dy, ax, ay) * side(cx, cy, dx, dy, bx, by) < 0
  );
}

/** Whether a leader meets a channel before it is as near its anchor as the anchor's own strip or hole reaches. Looked at in steps. */
function crossesChannel([x1, y1, x2, y2]: Line, clear: number, ground: LabelGround): boolean {
  const free = Math.hypot(x2 - x1, y2 - y1) - clear;
  const steps = Math.ceil(free / LEADER_STEP_MM);
  for (let i = 0; i < steps; i++) {
    const share = ((i + 0.5) / steps) * (free / (free + clear));
    const half = LEADER_STEP_MM / 4;
    const at = { x: x1 + (x2 - x1) * share - half, y: y1 + (y2 - y1) * share - half };
    if (touchesChannel({ ...at, width: 2 * half, height: 2 * half }, ground)) return true;
  }
  return false;
}

/** Finer than the thinnest painted channel. */
const LEADER_STEP_MM = 0.4;
