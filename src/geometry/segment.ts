/**
 * Plane geometry of straight pieces and points, in plain doubles and differences only, so that a drawing far from the
 * origin loses no more than its own coordinates have lost.
 */

/** Parameter 0…1 on the segment a→b of the point nearest to p. */
export function nearestParameter(
  px: number,
  py: number,
  ax: number,
  ay: number,
  bx: number,
  by: number,
): number {
  const dx = bx - ax;
  const dy = by - ay;
  const lengthSquared = dx * dx + dy * dy;
  if (lengthSquared === 0) return 0;
  const t = ((px - ax) * dx + (py - ay) * dy) / lengthSquared;
  return Math.max(0, Math.min(1, t));
}

/** Distance of p from the segment a→b. */
export function distanceToSegment(
  px: number,
  py: number,
  ax: number,
  ay: number,
  bx: number,
  by: number,
): number {
  const t = nearestParameter(px, py, ax, ay, bx, by);
  return Math.hypot(px - (ax + t * (bx - ax)), py - (ay + t * (by - ay)));
}

/** Parameter 0…1 on the segment a→b of the point where c→d crosses it; NaN where none does, or both are parallel. */
export function crossingParameter(
  ax: number,
  ay: number,
  bx: number,
  by: number,
  cx: number,
  cy: number,
  dx: number,
  dy: number,
): number {
  const ux = bx - ax;
  const uy = by - ay;
  const vx = dx - cx;
  const vy = dy - cy;
  const cross = ux * vy - uy * vx;
  if (cross === 0) return Number.NaN;
  const wx = cx - ax;
  const wy = cy - ay;
  const s = (wx * vy - wy * vx) / cross;
  const t = (wx * uy - wy * ux) / cross;
  return s >= 0 && s <= 1 && t >= 0 && t <= 1 ? s : Number.NaN;
}

/**
 * Distance between the segments a→b and c→d: 0 where they cross, else the least of the four end-to-segment distances.
 */
export function segmentDistance(
  ax: number,
  ay: number,
  bx: number,
  by: number,
  cx: number,
  cy: number,
  dx: number,
  dy: number,
): number {
  if (crossingParameter(ax, ay, bx, by, cx, cy, dx, dy) >= 0) return 0;
  return Math.min(
    distanceToSegment(ax, ay, cx, cy, dx, dy),
    distanceToSegment(bx, by, cx, cy, dx, dy),
    distanceToSegment(cx, cy, ax, ay, bx, by),
    distanceToSegment(dx, dy, ax, ay, bx, by),
  );
}
