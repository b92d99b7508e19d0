import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { smallestRectangle } from '../../src/chip/rectangle.ts';

const turned = (points: readonly number[], degrees: number): Float64Array => {
  const [c, s] = [Math.cos((degrees * Math.PI) / 180), Math.sin((degrees * Math.PI) / 180)];
  return Float64Array.from(points, (_, i) =>
    i % 2 === 0 ? c * points[i]! - s * points[i + 1]! : s * points[i - 1]! + c * points[i]!,
  );
};

describe('smallestRectangle', () => {
  it('gives the sides of a rectangle drawn at any angle, the longer first', () => {
    for (const angle of [0, 1, 37, 45, 90, 123, 180, 271]) {
      for (const corners of [
        [0, 0, 76, 0, 76, 26, 0, 26, 0, 0],
        [0, 0, 0, 26, 76, 26, 76, 0, 0, 0],
      ]) {
        const { longSide, shortSide } = smallestRectangle(turned(corners, angle))!;
        expect(longSide).toBeCloseTo(76, 10);
        expect(shortSide).toBeCloseTo(26, 10);
      }
    }
  });

  it('knows points, lines and nothing', () => {
    expect(smallestRectangle(new Float64Array(0))).toBeNull();
    expect(smallestRectangle(Float64Array.of(3, 4))).toEqual({ longSide: 0, shortSide: 0 });
    expect(smallestRectangle(Float64Array.of(0, 0, 3, 4, 6, 8))).toEqual({ longSide: 10, shortSide: 0 });
  });

  it('is as small as the best of all hull directions, found one by one', () => {
    const point = fc.tuple(fc.integer({ min: -50, max: 50 }), fc.integer({ min: -50, max: 50 }));
    fc.assert(
      fc.property(fc.array(point, { minLength: 3, maxLength: 25 }), (points) => {
        const found = smallestRectangle(Float64Array.from(points.flat()))!;
        expect(found.longSide * found.shortSide).toBeCloseTo(bruteArea(points), 6);
      }),
      { seed: 7, numRuns: 1500 },
    );
  });

  it('turns a whole ring of many points in little more than a sort', () => {
    const n = 200_000;
    const ring = Float64Array.from({ length: 2 * n }, (_, i) => {
      const angle = (2 * Math.PI * Math.floor(i / 2)) / n;
      return i % 2 === 0 ? 3 * Math.cos(angle) : Math.sin(angle);
    });
    const { longSide, shortSide } = smallestRectangle(ring)!;
    expect(longSide).toBeCloseTo(6, 8);
    expect(shortSide).toBeCloseTo(2, 8);
  });
});

/** The smallest area over the directions of all pairs of points: a side of the hull is among them. */
function bruteArea(points: readonly (readonly [number, number])[]): number {
  let best = Infinity;
  for (const [ax, ay] of points) {
    for (const [bx, by] of points) {
      const size = Math.hypot(bx - ax, by - ay);
      if (size === 0) continue;
      const [ux, uy] = [(bx - ax) / size, (by - ay) / size];
      const along = points.map(([x, y]) => x * ux + y * uy);
      const across = points.map(([x, y]) => y * ux - x * uy);
      best = Math.min(
        best,
        (Math.max(...along) - Math.min(...along)) * (Math.max(...across) - Math.min(...across)),
      );
    }
  }
  return best === Infinity ? 0 : best;
}
