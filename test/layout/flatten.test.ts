import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { flatten } from '../../src/layout/flatten.ts';
import type { Centreline } from '../../src/layout/types.ts';
import { parsePath } from '../../src/svg/path-data.ts';
import type { Matrix } from '../../src/svg/types.ts';

const IDENTITY: Matrix = [1, 0, 0, 1, 0, 0];
const budget = () => ({ piecesLeft: 2_000_000 });
const flat = (d: string, matrix: Matrix = IDENTITY) => flatten(parsePath(d), matrix, budget());
const only = (d: string, matrix?: Matrix): Centreline => {
  const { subpaths } = flat(d, matrix);
  expect(subpaths).toHaveLength(1);
  return subpaths[0];
};

const lengthOf = ({ points }: Centreline): number => {
  let sum = 0;
  for (let i = 2; i < points.length; i += 2)
    sum += Math.hypot(points[i] - points[i - 2], points[i + 1] - points[i - 1]);
  return sum;
};

/** Chords are never longer than the curve, and within 1e-4 of it. */
const expectLength = (subpath: Centreline, exact: number): void => {
  const loss = 1 - lengthOf(subpath) / exact;
  expect(loss).toBeGreaterThan(-1e-12);
  expect(loss).toBeLessThan(1e-4);
};

/** Length of a curve by Simpson's rule on its speed. */
const simpson = (speed: (t: number) => number, from: number, to: number, n = 20_000): number => {
  const h = (to - from) / n;
  let sum = speed(from) + speed(to);
  for (let i = 1; i < n; i++) sum += (i % 2 === 1 ? 4 : 2) * speed(from + i * h);
  return (sum * h) / 3;
};

const cubicSpeed = (p: readonly number[]) => (t: number) => {
  const s = 1 - t;
  const part = (i: number) =>
    3 * (s * s * (p[2 + i] - p[i]) + 2 * s * t * (p[4 + i] - p[2 + i]) + t * t * (p[6 + i] - p[4 + i]));
  return Math.hypot(part(0), part(1));
};

describe('summed pieces are within 1e-4 of the curve', () => {
  it.each([
    ['a half circle', 'M0 0a3 3 0 01 6 0', 3 * Math.PI],
    ['three quarters of a circle', 'M3 0A3 3 0 1 1 0-3', 4.5 * Math.PI],
    ['a sliver of a circle', 'M0 0A1000 1000 0 0 1 1 0', 2000 * Math.asin(1 / 2000)],
    ['an arc whose radii are too small', 'M0 0a1 1 0 01 6 0', 3 * Math.PI],
    ['a circle drawn as two arcs', 'M-2 0a2 2 0 114 0 2 2 0 11-4 0z', 4 * Math.PI],
    ['a parabola', 'M-1 1Q0-1 1 1', Math.sqrt(5) + Math.asinh(2) / 2],
    ['a straight cubic', 'M0 0C1 1 2 2 3 3', 3 * Math.SQRT2],
    ['an arc without a radius', 'M0 0A0 1 0 0 0 3 4', 5],
  ])('%s', (_what, d, exact) => {
    expectLength(only(d), exact);
  });

  it('an ellipse, turned, of any flatness', () => {
    for (const b of [3, 1, 0.1, 1e-3]) {
      const exact = simpson((t) => Math.hypot(3 * Math.sin(t), b * Math.cos(t)), 0, 2 * Math.PI, 200_000);
      expectLength(only(`M-3 0A3 ${b} 0 1 1 3 0A3 ${b} 0 1 1-3 0`), exact);
      const [c, s] = [Math.cos(1), Math.sin(1)];
      expectLength(only(`M-3 0A3 ${b} 0 1 1 3 0A3 ${b} 0 1 1-3 0`, [c, s, -s, c, 5, 6]), exact);
    }
  });

  it('random cubics, with loops and cusps among them', () => {
    const coordinate = fc.integer({ min: -20, max: 20 });
    fc.assert(
      fc.property(fc.array(coordinate, { minLength: 8, maxLength: 8 }), (p) => {
        const { subpaths } = flat(`M${p[0]} ${p[1]}C${p.slice(2).join(' ')}`);
        const exact = simpson(cubicSpeed(p), 0, 1);
        if (subpaths.length > 0) expectLength(subpaths[0], exact);
        else expect(exact).toBe(0);
      }),
      { seed: 11, numRuns: 400, examples: [[[0, 0, 10, 10, 0, 10, 10, 0]], [[0, 0, 20, 0, -10, 0, 10, 0]]] },
    );
  });

  it('a circle is cut into no more pieces than the tolerance asks for', () => {
    expect(only('M-2 0a2 2 0 114 0 2 2 0 11-4 0z').bendRadius.length).toBeLessThan(136);
  });
});

describe('every piece keeps the radius of its curve', () => {
  it('of a circle exactly, scaled by a similarity', () => {
    const arc = only('M0 0a3 3 0 01 6 0', [0, 2, 2, 0, 1, 1]);
    for (const radius of arc.bendRadius) expect(radius).toBeCloseTo(6, 12);
    for (let i = 0; i < arc.points.length; i += 2) {
      expect(Math.hypot(arc.points[i] - 1, arc.points[i + 1] - 7)).toBeCloseTo(6, 12);
    }
  });

  it('of straight pieces as 0, between round corners too', () => {
    const { bendRadius } = only('M0 0H5A1 1 0 0 1 6 1V4C6 5 6 6 6 7');
    expect(bendRadius[0]).toBe(0);
    expect(bendRadius.at(-1)).toBe(0);
    expect(bendRadius.at(-2)).toBe(0);
    expect(bendRadius.filter((radius) => Math.abs(radius - 1) < 1e-12).length).toBe(bendRadius.length - 3);
  });

  it('of a parabola and an ellipse where they bend most and least', () => {
    // y = 2x² has radius 1/4 at its vertex; the ellipse a²/b at the ends of its short axis, b²/a at those of its long one.
    expect(Math.min(...only('M-1 2Q0-2 1 2').bendRadius)).toBeCloseTo(0.25, 3);
    const { bendRadius } = only('M-3 0A3 1 0 1 1 3 0A3 1 0 1 1-3 0');
    expect(Math.min(...bendRadius)).toBeCloseTo(1 / 3, 2);
    expect(Math.max(...bendRadius)).toBeCloseTo(9, 1);
  });

  it('of a circle that an editor wrote as cubics as that cubic bends', () => {
    const k = 0.5522847498;
    const { bendRadius } = only(`M1 0C1 ${k} ${k} 1 0 1`);
    // The cubic's own radius at its ends is 3/2 · k² / (1 − k) = 1.022; it crosses 1 in between.
    expect(Math.max(...bendRadius)).toBeLessThan((1.5 * k * k) / (1 - k));
    expect(Math.max(...bendRadius)).toBeGreaterThan(1.01);
    expect(Math.min(...bendRadius)).toBeGreaterThan(0.98);
    expect(Math.min(...bendRadius)).toBeLessThan(1);
  });

  it('of a circle stretched to an ellipse as the ellipse bends', () => {
    const { bendRadius } = only('M-1 0A1 1 0 1 1 1 0', [3, 0, 0, 1, 0, 0]);
    expect(Math.max(...bendRadius)).toBeCloseTo(9, 1);
  });
});

describe('subpaths', () => {
  const points = (d: string) => flat(d).subpaths.map((subpath) => [...subpath.points]);

  it.each([
    [
      'M0 0H1M2 0H3',
      [
        [0, 0, 1, 0],
        [2, 0, 3, 0],
      ],
    ],
    ['M0 0H1V1z', [[0, 0, 1, 0, 1, 1, 0, 0]]],
    ['M0 0H1V1H0V0z', [[0, 0, 1, 0, 1, 1, 0, 1, 0, 0]]],
    [
      'M0 0H1V1zL5 5',
      [
        [0, 0, 1, 0, 1, 1, 0, 0],
        [0, 0, 5, 5],
      ],
    ],
    ['M0 0H1H1L1 0V1', [[0, 0, 1, 0, 1, 1]]],
    ['M0 0H1z', [[0, 0, 1, 0]]],
    ['M5 5', []],
    ['', []],
  ])('%s', (d, expected) => {
    expect(points(d)).toEqual(expected);
  });

  it('one without length is dropped and counted, a lone move is not drawn at all', () => {
    expect(flat('M1 1L1 1M2 2zM3 3M4 4a1 1 0 0 0 0 0M0 0H1')).toMatchObject({ zeroLength: 3 });
  });

  it('closed means drawn closed; ends that meet to rounding are made to meet', () => {
    expect(only('M0 0H1V1z').closed).toBe(true);
    expect(only('M0 0H1z')).toMatchObject({ closed: false, points: Float64Array.of(0, 0, 1, 0) });
    const open = only('M0.1 0l.1 0 0 .1-.1 0 0-.1');
    expect(open.closed).toBe(false);
    expect([...open.points.slice(-2)]).toEqual([0.1, 0]);
  });

  it('a path that has come back to its start to rounding gets no closing piece', () => {
    const { points, closed } = only('M0.1 0l.7 0 0 .1-.7 0 0-.1000000001z');
    expect(points.length / 2).toBe(5);
    expect(closed).toBe(true);
    expect([...points.slice(-2)]).toEqual([0.1, 0]);
  });

  it('one that goes back over itself and closes with less than rounding has no piece without length', () => {
    const { points } = only('M0 0H35H0V1e-9z');
    expect([...points]).toEqual([0, 0, 35, 0]);
  });

  it('has one radius for each piece', () => {
    for (const d of ['M0 0H1V1z', 'M0 0a1 1 0 0 1 2 0h0h3z', 'M0 0C1 1 2 1 3 0']) {
      const { points, bendRadius } = only(d);
      expect(bendRadius.length).toBe(points.length / 2 - 1);
    }
  });
});

it('the pieces are the same drawn forwards and backwards, mirrored and turned', () => {
  const there = only('M0 0C5 9 7-3 12 4');
  const back = only('M12 4C7-3 5 9 0 0');
  const turned = only('M0 0C5 9 7-3 12 4', [0, 1, 1, 0, 0, 0]);
  expect(back.points.length).toBe(there.points.length);
  there.points.forEach((value, i) => {
    const point = there.points.length - 2 - (i - (i % 2)) + (i % 2);
    expect(back.points[point]).toBeCloseTo(value, 12);
    expect(turned.points[i ^ 1]).toBeCloseTo(value, 12);
  });
});

it('more pieces than the budget, or a point too far away, is refused', () => {
  expect(() => flatten(parsePath('M0 0H1H2'), IDENTITY, { piecesLeft: 1 })).toThrow(
    'more than 2000000 segments (the limit)',
  );
  expect(() => flat('M0 0H1e13')).toThrow('a point lies beyond');
  expect(() => flat('M0 0C1e200 1 1 1e200 0 5')).toThrow('a point lies beyond');
  expect(() => flat('M0 0A1e200 1e200 0 0 0 1 1', [1, 0, 0, 1, 0, 0])).toThrow('a point lies beyond');
});
