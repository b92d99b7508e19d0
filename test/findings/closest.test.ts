import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { boxRound, closestPoints, type Line, linesAlong, stretchWithin } from '../../src/findings/closest.ts';

const coordinate = fc.integer({ min: -40, max: 40 }).map((n) => n / 8);
const line: fc.Arbitrary<Line> = fc
  .tuple(coordinate, coordinate, coordinate, coordinate)
  .filter(([ax, ay, bx, by]) => ax !== bx || ay !== by);

function pointOf([ax, ay, bx, by]: Line, t: number): [number, number] {
  return [ax + t * (bx - ax), ay + t * (by - ay)];
}

/** Least distance by trying many places on both lines: an oracle that knows no geometry. */
function triedDistance(one: Line, two: Line): number {
  let least = Number.POSITIVE_INFINITY;
  for (let i = 0; i <= 200; i++) {
    for (let j = 0; j <= 200; j++) {
      const [x1, y1] = pointOf(one, i / 200);
      const [x2, y2] = pointOf(two, j / 200);
      least = Math.min(least, Math.hypot(x2 - x1, y2 - y1));
    }
  }
  return least;
}

describe('nearest places of two straight lines', () => {
  it('is never farther than any two places tried, and its own two points are that far apart', () => {
    fc.assert(
      fc.property(line, line, (one, two) => {
        const { distanceMm, x1, y1, x2, y2 } = closestPoints(one, two);
        expect(Math.hypot(x2 - x1, y2 - y1)).toBeCloseTo(distanceMm, 9);
        const tried = triedDistance(one, two);
        expect(distanceMm).toBeLessThanOrEqual(tried + 1e-9);
        // neighbouring places tried are at most 0.08 mm apart on each line
        expect(distanceMm).toBeGreaterThan(tried - 0.16);
      }),
      { numRuns: 100, seed: 4 },
    );
  });

  it('gives the stretch of a line within a distance of another, to where the distance is just that', () => {
    fc.assert(
      fc.property(line, line, fc.double({ min: 0.05, max: 3, noNaN: true }), (one, two, within) => {
        const span = Math.hypot(one[2] - one[0], one[3] - one[1]);
        const stretch = stretchWithin(one, two, within);
        const distanceAt = (s: number): number => {
          const [x, y] = pointOf(one, s / span);
          return closestPoints([x, y, x, y], two).distanceMm;
        };
        for (let i = 0; i <= 50; i++) {
          const s = (span * i) / 50;
          const distance = distanceAt(s);
          const isIn = stretch !== null && s >= stretch[0] - 1e-9 && s <= stretch[1] + 1e-9;
          if (distance < within - 1e-9) expect(isIn).toBe(true);
          if (distance > within + 1e-6)
            expect(stretch !== null && s > stretch[0] + 1e-5 && s < stretch[1] - 1e-5).toBe(false);
        }
      }),
      { numRuns: 300, seed: 5 },
    );
  });
});

describe('lines along points', () => {
  it('go from each point to the next, and none from a single one', () => {
    expect(linesAlong(Float64Array.of(0, 1, 2, 3, 4, 0))).toEqual([
      [0, 1, 2, 3],
      [2, 3, 4, 0],
    ]);
    expect(linesAlong(Float64Array.of(0, 1))).toEqual([]);
  });

  it('lie in an upright box, whichever way they run', () => {
    expect(boxRound([4, 1, 2, 3], 0.5)).toEqual([1.5, 0.5, 4.5, 3.5]);
  });
});
