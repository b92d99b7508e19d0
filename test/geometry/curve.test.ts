import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Curve, departure, directionAtEnd, finePieces } from '../../src/geometry/curve.ts';
import { distanceToSegment } from '../../src/geometry/segment.ts';

/** Against brute force: many points of the curve, straight from its definition. */
function pointOn(curve: Curve, share: number): readonly [number, number] {
  if (curve.kind === 'arc') {
    const { ellipse: e, from, to } = curve;
    const t = from + share * (to - from);
    return [e.cx + e.ux * Math.cos(t) + e.vx * Math.sin(t), e.cy + e.uy * Math.cos(t) + e.vy * Math.sin(t)];
  }
  const r = 1 - share;
  const weights = [r ** 3, 3 * r * r * share, 3 * r * share * share, share ** 3];
  const along = (k: number): number => weights.reduce((sum, w, i) => sum + w * curve.points[2 * i + k], 0);
  return [along(0), along(1)];
}

const coordinate = fc.double({ min: -20, max: 20, noNaN: true });
const cubic = fc
  .tuple(...new Array(8).fill(coordinate))
  .map((points): Curve => ({ kind: 'cubic', points: points as number[] }));
const arc = fc
  .record({
    cx: coordinate,
    cy: coordinate,
    rx: fc.double({ min: 0.5, max: 100, noNaN: true }),
    flat: fc.double({ min: 0.2, max: 1, noNaN: true }),
    turn: fc.double({ min: 0, max: 6.28, noNaN: true }),
    from: fc.double({ min: -3, max: 3, noNaN: true }),
    sweep: fc.double({ min: 0.01, max: 1.5, noNaN: true }),
    back: fc.boolean(),
  })
  .map(({ cx, cy, rx, flat, turn, from, sweep, back }): Curve => {
    const [cos, sin] = [Math.cos(turn), Math.sin(turn)];
    const ellipse = { cx, cy, ux: rx * cos, uy: rx * sin, vx: -rx * flat * sin, vy: rx * flat * cos };
    return { kind: 'arc', ellipse, from, to: back ? from - sweep : from + sweep };
  });
const curve = fc.oneof(cubic, arc);
const RUNS = { numRuns: 100, seed: 4 };
const SAMPLES = 200;

describe('a curve', () => {
  it('lies no further from its chord than it says', () => {
    fc.assert(
      fc.property(curve, (drawn) => {
        const [ax, ay] = pointOn(drawn, 0);
        const [bx, by] = pointOn(drawn, 1);
        const most = departure(drawn);
        let farthest = 0;
        for (let k = 0; k <= SAMPLES; k++) {
          const [x, y] = pointOn(drawn, k / SAMPLES);
          farthest = Math.max(farthest, distanceToSegment(x, y, ax, ay, bx, by));
        }
        expect(farthest).toBeLessThanOrEqual(most + 1e-9);
        if (drawn.kind === 'arc') expect(farthest).toBeGreaterThan(most * (1 - 1e-3));
      }),
      RUNS,
    );
  });

  it('is cut into pieces that it departs from by no more than asked, each as far as it says', () => {
    fc.assert(
      fc.property(curve, fc.constantFrom(1e-2, 1e-3), (drawn, tolerance) => {
        const fine = finePieces(drawn, tolerance);
        const [firstX, firstY] = pointOn(drawn, 0);
        expect(Math.max(...fine.map(({ departure: off }) => off))).toBeLessThanOrEqual(tolerance);
        const lines = fine.map(({ x, y }, k) => {
          return [fine[k - 1]?.x ?? firstX, fine[k - 1]?.y ?? firstY, x, y] as const;
        });
        const [lastX, lastY] = pointOn(drawn, 1);
        expect(Math.hypot(fine[fine.length - 1].x - lastX, fine[fine.length - 1].y - lastY)).toBeLessThan(
          1e-9,
        );
        // The nearest piece is at or next to the one before: the points follow one another.
        let at = 0;
        let farthest = 0;
        for (let k = 0; k <= SAMPLES; k++) {
          const [x, y] = pointOn(drawn, k / SAMPLES);
          let best = Number.POSITIVE_INFINITY;
          for (let i = at; i < lines.length; i++) {
            const distance = distanceToSegment(x, y, ...lines[i]);
            if (distance < best) [best, at] = [distance, i];
            if (best <= tolerance) break;
          }
          farthest = Math.max(farthest, best);
        }
        expect(farthest).toBeLessThanOrEqual(tolerance + 1e-9);
      }),
      RUNS,
    );
  });

  it('is cut into about as few pieces as a circle needs', () => {
    for (const radius of [1, 10, 100]) {
      const ellipse = { cx: 3, cy: 4, ux: radius, uy: 0, vx: 0, vy: radius };
      const fine = finePieces({ kind: 'arc', ellipse, from: 0.3, to: 0.348 }, 4e-5);
      // Sagitta r(1 − cos(θ/2)) of a piece of angle θ.
      const needed = 0.048 / (2 * Math.acos(1 - 4e-5 / radius));
      expect(fine.length).toBeGreaterThanOrEqual(needed);
      expect(fine.length).toBeLessThan(1.1 * needed + 2);
    }
  });

  it('starts and ends in the direction of its first and last points', () => {
    fc.assert(
      fc.property(curve, (drawn) => {
        for (const [end, from, to] of [
          ['start', 0, 1e-7],
          ['end', 1 - 1e-7, 1],
        ] as const) {
          const [ax, ay] = pointOn(drawn, from);
          const [bx, by] = pointOn(drawn, to);
          const step = Math.hypot(bx - ax, by - ay);
          // A control point all but on its end, where the direction turns at once.
          if (step < 1e-8) continue;
          const [ux, uy] = directionAtEnd(drawn, end) ?? [0, 0];
          expect(((bx - ax) * ux + (by - ay) * uy) / step).toBeGreaterThan(1 - 1e-4);
        }
      }),
      RUNS,
    );
  });

  it('whose control points lie on its ends still has a direction; one that is a point has none', () => {
    expect(directionAtEnd({ kind: 'cubic', points: [0, 0, 0, 0, 3, 4, 3, 4] }, 'start')).toEqual([0.6, 0.8]);
    expect(directionAtEnd({ kind: 'cubic', points: [0, 0, 0, 0, 3, 4, 3, 4] }, 'end')).toEqual([0.6, 0.8]);
    expect(directionAtEnd({ kind: 'cubic', points: [1, 1, 1, 1, 1, 1, 1, 1] }, 'end')).toBeNull();
  });
});
