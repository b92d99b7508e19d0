import { describe, expect, it } from 'vitest';
import { ARRANGEMENTS, drawing, EXACT_MM, LIMIT_MM, type Point, seeded, walls } from './curved-drawings.ts';

/** Millimetres of wall: overlaps, touching, either side of nought and of the limit, at the limit, and clear of it. */
const GAPS = [-0.02, -0.003, -0.0003, 0.0003, 0.003, 0.025, 0.045, 0.0497, 0.05, 0.0503, 0.053, 0.065, 0.1];

const CASES = Object.entries(ARRANGEMENTS).flatMap(([name, arrangement], a) =>
  GAPS.flatMap((gap, g) =>
    [0, 1, 2, 3].map((k) => {
      const random = seeded(1000 * a + 10 * g + k + 1);
      // The first generated numbers of small seeds are all small.
      for (let skip = 0; skip < 5; skip++) random();
      const radius = k === 3 ? 100 : 100 ** random();
      return { name, gap, radius, svg: drawing(arrangement, random, radius, gap) };
    }),
  ),
);

describe('walls beside arcs', () => {
  it.each(Object.keys(ARRANGEMENTS))(
    'of radii from 1 to 100 mm are as thick as they are, within 0.1 µm, and judged so: %s',
    (wanted) => {
      for (const { name, gap, radius, svg } of CASES) {
        if (name !== wanted) continue;
        const found = walls(svg);
        const what = `${name}: radius ${radius} mm, wall ${gap} mm\n${svg}`;
        if (gap >= LIMIT_MM) {
          expect(found, what).toEqual([]);
          continue;
        }
        expect(
          found.map(({ rule }) => rule),
          what,
        ).toEqual([gap > 0 ? 'thin-wall' : 'merged-walls']);
        const measuredMm = (found[0].measured ?? Number.NaN) * 1e3;
        expect(Math.abs(measuredMm - gap), what).toBeLessThan(EXACT_MM);
      }
    },
  );

  it('between Bézier curves and ellipses are as thick as a fine sampling of the curves says', () => {
    for (let k = 1; k <= 24; k++) {
      const random = seeded(77 * k);
      for (let skip = 0; skip < 5; skip++) random();
      const [one, two] = [arch(random, 0, 1, k), arch(random, 4.6 + 0.4 * random(), -1, k + 1)];
      const distance = distanceBetween(one.at, two.at);
      const gap = [-0.0041, 0.0123, 0.0481, 0.0519][k % 4];
      const width = distance - gap;
      const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="500mm" height="500mm" viewBox="-250 -250 500 500" fill="none" stroke="#000">
<g transform="rotate(${360 * random()})"><path id="one" stroke-width="${width}" d="${one.d}"/><path id="two" stroke-width="${width}" d="${two.d}"/></g></svg>`;
      const found = walls(svg);
      if (gap >= LIMIT_MM) expect(found, svg).toEqual([]);
      else {
        expect(
          found.map(({ rule }) => rule),
          svg,
        ).toEqual([gap > 0 ? 'thin-wall' : 'merged-walls']);
        expect(Math.abs((found[0].measured ?? Number.NaN) * 1e3 - gap), svg).toBeLessThan(EXACT_MM);
      }
    }
  });

  it('beside a fork of arcs that part along a tangent are none, whatever the radius and however coordinates are rounded', () => {
    for (let k = 1; k <= 40; k++) {
      const random = seeded(991 * k);
      for (let skip = 0; skip < 5; skip++) random();
      const digits = 3 + (k % 6);
      const turn = 6 * random();
      const at = (x: number, y: number): string =>
        [200 + x * Math.cos(turn) - y * Math.sin(turn), 200 + x * Math.sin(turn) + y * Math.cos(turn)]
          .map((value) => value.toFixed(digits))
          .join(' ');
      const radius = 100 ** random();
      const other = k % 2 === 0 ? radius : 100 ** random();
      const arm = (r: number, side: 1 | -1): string => {
        const angle = Math.min(1.5, 20 / r);
        return `M${at(0, 0)}A${r} ${r} 0 0 ${side === 1 ? 1 : 0} ${at(r * Math.sin(angle), side * r * (1 - Math.cos(angle)))}`;
      };
      const feed = k % 3 === 0 ? `M${at(-5, 0)}L${at(30, 0)}` : `M${at(-5, 0)}L${at(0, 0)}`;
      const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="400mm" height="400mm" viewBox="0 0 400 400" fill="none" stroke="#000" stroke-width="0.2">
<path d="${feed}"/><path d="${arm(radius, 1)}"/><path d="${arm(other, -1)}"/></svg>`;
      expect(walls(svg), svg).toEqual([]);
    }
  });
});

/** An arch 10 mm wide from the height y, about 1.5 mm high: a cubic or half an ellipse. */
function arch(random: () => number, y: number, up: 1 | -1, k: number) {
  if (k % 3 === 0) {
    const high = 1.2 + 0.5 * random();
    return {
      d: `M0 ${y}A5 ${high} 0 0 ${up === 1 ? 0 : 1} 10 ${y}`,
      at: (t: number): Point => [5 - 5 * Math.cos(Math.PI * t), y + up * high * Math.sin(Math.PI * t)],
    };
  }
  const inner = [2 + 2 * random(), 1.6 + random(), 6 + 2 * random(), 1.6 + random()];
  const xs = [0, inner[0], inner[2], 10];
  const ys = [y, y + up * inner[1], y + up * inner[3], y];
  return {
    d: `M0 ${y}C${xs[1]} ${ys[1]} ${xs[2]} ${ys[2]} 10 ${y}`,
    at: (t: number): Point => {
      const r = 1 - t;
      const weights = [r ** 3, 3 * r * r * t, 3 * r * t * t, t ** 3];
      const sum = (of: readonly number[]): number => weights.reduce((total, w, i) => total + w * of[i], 0);
      return [sum(xs), sum(ys)];
    },
  };
}

/** Least distance of two curves: the best of a grid of points, and again round the best, ever finer. */
function distanceBetween(one: (t: number) => Point, two: (t: number) => Point): number {
  let [bestS, bestT, best] = [0.5, 0.5, Number.POSITIVE_INFINITY];
  for (let span = 0.5; span > 1e-8; span /= 8) {
    const [midS, midT] = [bestS, bestT];
    for (let i = -30; i <= 30; i++) {
      const s = Math.min(1, Math.max(0, midS + (span * i) / 30));
      const [x, y] = one(s);
      for (let j = -30; j <= 30; j++) {
        const t = Math.min(1, Math.max(0, midT + (span * j) / 30));
        const [u, v] = two(t);
        const distance = Math.hypot(x - u, y - v);
        if (distance < best) [bestS, bestT, best] = [s, t, distance];
      }
    }
  }
  return best;
}
