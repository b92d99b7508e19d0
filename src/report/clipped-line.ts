import type { Box, Line } from './map-geometry.ts';

/**
 * The parts of a polyline (x0 y0 x1 y1 …) that lie in a box, each a polyline again.
 * Y.-D. Liang & B. A. Barsky, ACM Trans. Graph. 3 (1984) 1, piece by piece. Cost: linear.
 */
export function clippedLine(points: readonly number[], box: Box): number[][] {
  const parts: number[][] = [];
  let part: number[] | null = null;
  for (let i = 0; i + 3 < points.length; i += 2) {
    const [x1, y1, x2, y2] = [points[i], points[i + 1], points[i + 2], points[i + 3]];
    const inside = stretchInside([x1, y1, x2, y2], box);
    if (inside === null) {
      part = null;
      continue;
    }
    const [from, to] = inside;
    if (part === null || from > 0) {
      part = [x1 + from * (x2 - x1), y1 + from * (y2 - y1)];
      parts.push(part);
    }
    part.push(x1 + to * (x2 - x1), y1 + to * (y2 - y1));
    if (to < 1) part = null;
  }
  return parts;
}

/** From where to where, as shares, a line lies inside a box; null where it does not. */
function stretchInside([x, y, x2, y2]: Line, box: Box): readonly [number, number] | null {
  const [dx, dy] = [x2 - x, y2 - y];
  let from = 0;
  let to = 1;
  for (const [slope, room] of [
    [-dx, x - box.x],
    [dx, box.x + box.width - x],
    [-dy, y - box.y],
    [dy, box.y + box.height - y],
  ]) {
    if (slope === 0) {
      if (room < 0) return null;
    } else if (slope < 0) from = Math.max(from, room / slope);
    else to = Math.min(to, room / slope);
  }
  return from < to ? [from, to] : null;
}
