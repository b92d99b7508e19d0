import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { distanceToSegment, nearestParameter, segmentDistance } from '../../src/geometry/segment.ts';

const whole = fc.integer({ min: -6, max: 6 });
const points = (count: number) => fc.tuple(...new Array<typeof whole>(2 * count).fill(whole));
const RUNS = { numRuns: 300, seed: 12 };

/** Least distance of p from many points of a→b. */
function byBruteForce(px: number, py: number, [ax, ay, bx, by]: readonly number[]): number {
  let least = Number.POSITIVE_INFINITY;
  for (let k = 0; k <= 1000; k++) {
    const t = k / 1000;
    least = Math.min(least, Math.hypot(px - ax - t * (bx - ax), py - ay - t * (by - ay)));
  }
  return least;
}

describe('a point and a segment', () => {
  it('are as far apart as the nearest of the segment’s points', () => {
    fc.assert(
      fc.property(points(3), ([px, py, ax, ay, bx, by]) => {
        const found = distanceToSegment(px, py, ax, ay, bx, by);
        const brute = byBruteForce(px, py, [ax, ay, bx, by]);
        expect(found).toBeLessThanOrEqual(brute + 1e-12);
        expect(found).toBeGreaterThan(brute - 0.02);
      }),
      RUNS,
    );
  });

  it('have their foot inside, or at the end that is nearer; a segment of no length is its point', () => {
    expect(nearestParameter(1, 5, 0, 0, 4, 0)).toBe(0.25);
    expect(nearestParameter(-1, 5, 0, 0, 4, 0)).toBe(0);
    expect(nearestParameter(9, -5, 0, 0, 4, 0)).toBe(1);
    expect(nearestParameter(9, 5, 2, 2, 2, 2)).toBe(0);
    expect(distanceToSegment(5, 6, 2, 2, 2, 2)).toBe(5);
    expect(distanceToSegment(7, 4, 0, 0, 4, 0)).toBe(5);
  });
});

describe('two segments', () => {
  it('are as far apart as the nearest points of both, the other way round and turned too', () => {
    fc.assert(
      fc.property(points(4), ([ax, ay, bx, by, cx, cy, dx, dy]) => {
        const found = segmentDistance(ax, ay, bx, by, cx, cy, dx, dy);
        let brute = Number.POSITIVE_INFINITY;
        for (let k = 0; k <= 200; k++) {
          const t = k / 200;
          brute = Math.min(brute, distanceToSegment(ax + t * (bx - ax), ay + t * (by - ay), cx, cy, dx, dy));
        }
        expect(found).toBeLessThanOrEqual(brute + 1e-12);
        expect(found).toBeGreaterThan(brute - 0.05);
        expect(segmentDistance(cx, cy, dx, dy, bx, by, ax, ay)).toBeCloseTo(found, 12);
        expect(segmentDistance(-ay, ax, -by, bx, -cy, cx, -dy, dx)).toBeCloseTo(found, 12);
      }),
      RUNS,
    );
  });

  it.each([
    ['cross', [0, 0, 4, 4, 0, 4, 4, 0], 0],
    ['meet in a T', [0, 0, 4, 0, 2, 0, 2, 3], 0],
    ['share an end', [0, 0, 4, 0, 4, 0, 5, 5], 0],
    ['overlap on one line', [0, 0, 4, 0, 3, 0, 9, 0], 0],
    ['follow on one line', [0, 0, 4, 0, 6, 0, 9, 0], 2],
    ['run beside each other', [0, 0, 4, 0, 1, 3, 9, 3], 3],
    ['would cross further on', [0, 0, 4, 0, 5, 1, 5, 9], Math.SQRT2],
    ['would cross further back', [0, 0, 4, 0, -1, -1, -1, -9], Math.SQRT2],
    ['point at the other’s middle', [0, 0, 4, 0, 2, 1, 2, 9], 1],
  ])('that %s', (_, [ax, ay, bx, by, cx, cy, dx, dy], wanted) => {
    expect(segmentDistance(ax, ay, bx, by, cx, cy, dx, dy)).toBeCloseTo(wanted, 15);
  });
});
