import type { Pieces } from './pieces.ts';
import { ROUND, type Rounding, turnOf } from './rounding.ts';
import { distanceToSegment } from './segment.ts';
import { roundingAt } from './strip.ts';

/**
 * Outlines of pieces of strips, and what they have in common. The strip of one straight piece (a rectangle, with a round
 * at each inner vertex) is convex, so what several have in common is one convex area: a connected one. Where the round is
 * but a sector, the outline is the least convex one round both.
 *
 * An outline is flat, x0 y0 x1 y1 …, turning left in a frame with y up. Its rounds are cut into chords that stand off the
 * arc by no more than ARC_MM, or COARSE_SHARE of the radius.
 */
export type Outline = readonly number[];

/** Finer than what walls are measured to (0.1 µm). */
const ARC_MM = 5e-5;

/**
 * How the rounds are cut: `fine` to measure by, `coarse` to ask whether there is anything in common. A coarse round lies
 * within half a per cent of its radius inside the fine one, with a tenth of its corners where strips are millimetres wide.
 */
export type Rounds = 'fine' | 'coarse';

export const COARSE_SHARE = 0.005;

/** The strip of one piece, wider by growMm on every side. */
export function pieceOutline(pieces: Pieces, piece: number, growMm: number, rounds: Rounds): Outline {
  const half = pieces.half[piece] + growMm;
  const ax = pieces.x1[piece];
  const ay = pieces.y1[piece];
  const bx = pieces.x2[piece];
  const by = pieces.y2[piece];
  const ux = (bx - ax) / pieces.length[piece];
  const uy = (by - ay) / pieces.length[piece];
  const outline: number[] = [];
  const sagMm = rounds === 'fine' ? ARC_MM : Math.max(ARC_MM, COARSE_SHARE * half);
  addEnd(outline, bx, by, ux, uy, half, roundingAt(pieces, piece, 1, null, growMm), growMm, sagMm);
  addEnd(outline, ax, ay, -ux, -uy, half, roundingAt(pieces, piece, -1, null, growMm), growMm, sagMm);
  return outline;
}

/** The end of a strip at a point with direction (ux, uy) out of it: half a round, a sector of it, or two square corners. */
function addEnd(
  into: number[],
  x: number,
  y: number,
  ux: number,
  uy: number,
  half: number,
  rounding: Rounding | null,
  growMm: number,
  sagMm: number,
): void {
  const beyond = rounding === null ? growMm : 0;
  const add = (angle: number, radius: number): void => {
    const along = radius * Math.cos(angle) + beyond;
    const across = half * Math.sin(angle);
    into.push(x + along * ux - across * uy, y + along * uy + across * ux);
  };
  const turn = rounding === null || rounding === ROUND ? null : turnOf(ux, uy, rounding);
  const sweep = rounding === ROUND ? Math.PI : (turn?.angle ?? 0);
  const first = -Math.PI / 2 + (turn?.side === 1 ? Math.PI - sweep : 0);
  if (turn?.side === 1 || sweep === 0) add(-Math.PI / 2, 0);
  const count = Math.ceil(sweep / 2 / Math.acos(Math.max(0.5, 1 - sagMm / half)));
  for (let k = 0; k <= count && sweep > 0; k++) add(first + (sweep * k) / count, half);
  if (turn?.side === -1 || sweep === 0) add(Math.PI / 2, 0);
}

/**
 * What two convex outlines have in common; fewer than three points when that is nothing. Clips by one side after the
 * other (I. E. Sutherland and G. W. Hodgman, Comm. ACM 17 (1974) 32).
 */
export function commonOutline(one: Outline, two: Outline): Outline {
  let rest = one;
  for (let k = 0; k < two.length && rest.length >= 6; k += 2) {
    const ax = two[k];
    const ay = two[k + 1];
    const next = k + 2 === two.length ? 0 : k + 2;
    rest = clipped(rest, ax, ay, two[next] - ax, two[next + 1] - ay);
  }
  return rest.length >= 6 ? rest : [];
}

/** The part of a convex outline on the left of the line from (ax, ay) in direction (dx, dy). */
function clipped(outline: Outline, ax: number, ay: number, dx: number, dy: number): number[] {
  const kept: number[] = [];
  const n = outline.length;
  let px = outline[n - 2];
  let py = outline[n - 1];
  let before = dx * (py - ay) - dy * (px - ax);
  for (let k = 0; k < n; k += 2) {
    const qx = outline[k];
    const qy = outline[k + 1];
    const side = dx * (qy - ay) - dy * (qx - ax);
    if ((before < 0 && side > 0) || (before > 0 && side < 0)) {
      const t = before / (before - side);
      kept.push(px + t * (qx - px), py + t * (qy - py));
    }
    if (side >= 0) kept.push(qx, qy);
    px = qx;
    py = qy;
    before = side;
  }
  return kept;
}

/** The least width of a convex outline (mm), and the unit direction across it. */
export function leastWidth(outline: Outline): {
  readonly widthMm: number;
  readonly nx: number;
  readonly ny: number;
} {
  let best = { widthMm: Number.POSITIVE_INFINITY, nx: 1, ny: 0 };
  for (let k = 0; k < outline.length; k += 2) {
    const next = k + 2 === outline.length ? 0 : k + 2;
    const dx = outline[next] - outline[k];
    const dy = outline[next + 1] - outline[k + 1];
    const length = Math.hypot(dx, dy);
    // A side as short as rounding has no direction.
    if (length < 1e-9) continue;
    let widthMm = 0;
    for (let m = 0; m < outline.length; m += 2) {
      const across = (dx * (outline[m + 1] - outline[k + 1]) - dy * (outline[m] - outline[k])) / length;
      widthMm = Math.max(widthMm, across);
    }
    if (widthMm < best.widthMm) best = { widthMm, nx: -dy / length, ny: dx / length };
  }
  return Number.isFinite(best.widthMm) ? best : { widthMm: 0, nx: 1, ny: 0 };
}

/** The middle of an outline's corners. */
export function middleOfOutline(outline: Outline): { readonly x: number; readonly y: number } {
  let x = 0;
  let y = 0;
  for (let k = 0; k < outline.length; k += 2) {
    x += outline[k];
    y += outline[k + 1];
  }
  const count = outline.length / 2;
  return { x: x / count, y: y / count };
}

/** Distance of a point from a convex outline, 0 inside it. */
export function distanceToOutline(outline: Outline, x: number, y: number): number {
  let isInside = true;
  let least = Number.POSITIVE_INFINITY;
  for (let k = 0; k < outline.length; k += 2) {
    const next = k + 2 === outline.length ? 0 : k + 2;
    const [ax, ay, bx, by] = [outline[k], outline[k + 1], outline[next], outline[next + 1]];
    if ((bx - ax) * (y - ay) - (by - ay) * (x - ax) < 0) isInside = false;
    least = Math.min(least, distanceToSegment(x, y, ax, ay, bx, by));
  }
  return isInside ? 0 : least;
}
