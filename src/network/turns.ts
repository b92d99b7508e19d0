/** A T, cross or step within this angle of its computed one is that case; a corner that turns by less needs no room. */
export const ANGLE_TOLERANCE_RAD = (5 * Math.PI) / 180;

/** Turn from one straight piece (its vector and bend radius, 0 for straight) to the next, without the part of their curves. */
export function turnBetween(
  ux: number,
  uy: number,
  radius1: number,
  vx: number,
  vy: number,
  radius2: number,
): number {
  const turn = Math.abs(Math.atan2(ux * vy - uy * vx, ux * vx + uy * vy));
  const curved = halfAngle(Math.hypot(ux, uy), radius1) + halfAngle(Math.hypot(vx, vy), radius2);
  if (curved === 0) return turn;
  // Where the radius changes along a curve, a chord's own radius is only near the mean: leave it some room.
  return Math.max(0, turn - 1.25 * curved - 1e-3);
}

function halfAngle(chord: number, radius: number): number {
  return radius === 0 ? 0 : Math.asin(Math.min(1, chord / (2 * radius)));
}
