import { distanceToSegment } from '../geometry/segment.ts';

/** "Round within 1 %": the largest and the smallest distance of an outline from its middle differ by at most that. */
export const ROUNDNESS = 0.01;

export interface Circle {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
}

/**
 * The circle that a closed ring draws, or null when the ring is not round within 1 %.
 * Least squares in the algebraic distance (I. Kåsa, IEEE Trans. Instrum. Meas. 25 (1976) 8), each point weighted by the
 * outline it stands for: exact when the points lie on a circle, however unevenly. Cost: linear.
 * @param ring x0 y0 x1 y1 … , the first point repeated at the end.
 */
export function roundRing(ring: Float64Array): Circle | null {
  const circle = fitCircle(ring);
  if (circle === null) return null;
  let farthest = 0;
  let nearest = Number.POSITIVE_INFINITY;
  let doubleArea = 0;
  for (let i = 0; i + 3 < ring.length; i += 2) {
    const x0 = ring[i] - circle.x;
    const y0 = ring[i + 1] - circle.y;
    const x1 = ring[i + 2] - circle.x;
    const y1 = ring[i + 3] - circle.y;
    farthest = Math.max(farthest, Math.hypot(x0, y0));
    nearest = Math.min(nearest, distanceToSegment(0, 0, x0, y0, x1, y1));
    doubleArea += x0 * y1 - x1 * y0;
  }
  const isRound = farthest <= (1 + ROUNDNESS) * nearest;
  // An arc drawn there and back keeps its distance too, but holds no area.
  const isFull = Math.abs(doubleArea) / 2 >= 0.95 * Math.PI * circle.radius ** 2;
  return isRound && isFull ? circle : null;
}

function fitCircle(ring: Float64Array): Circle | null {
  const count = ring.length / 2 - 1;
  if (count < 3) return null;
  const weights = pieceWeights(ring, count);
  let total = 0;
  let meanX = 0;
  let meanY = 0;
  for (let i = 0; i < count; i++) {
    total += weights[i];
    meanX += weights[i] * (ring[2 * i] - ring[0]);
    meanY += weights[i] * (ring[2 * i + 1] - ring[1]);
  }
  if (!(total > 0)) return null;
  meanX = meanX / total + ring[0];
  meanY = meanY / total + ring[1];
  let [uu, uv, vv, uz, vz] = [0, 0, 0, 0, 0];
  for (let i = 0; i < count; i++) {
    const u = ring[2 * i] - meanX;
    const v = ring[2 * i + 1] - meanY;
    const z = u * u + v * v;
    uu += weights[i] * u * u;
    uv += weights[i] * u * v;
    vv += weights[i] * v * v;
    uz += weights[i] * u * z;
    vz += weights[i] * v * z;
  }
  const determinant = uu * vv - uv * uv;
  if (!(determinant > 0)) return null;
  const x = (uz * vv - vz * uv) / (2 * determinant);
  const y = (vz * uu - uz * uv) / (2 * determinant);
  return { x: meanX + x, y: meanY + y, radius: Math.sqrt(x * x + y * y + (uu + vv) / total) };
}

/** Half the length of the two pieces that meet in each point. */
function pieceWeights(ring: Float64Array, count: number): Float64Array {
  const weights = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    const half = Math.hypot(ring[2 * i + 2] - ring[2 * i], ring[2 * i + 3] - ring[2 * i + 1]) / 2;
    weights[i] += half;
    weights[(i + 1) % count] += half;
  }
  return weights;
}
