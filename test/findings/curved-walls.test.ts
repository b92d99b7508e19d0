import { describe, expect, it } from 'vitest';
import { findingsOf } from './findings-of.ts';

/**
 * Walls beside arcs against the exact distance of circles and lines. Of every pair the nearest places lie inside both
 * strokes, and their ends are far apart.
 */

const LIMIT_MM = 0.05;
const EXACT_MM = 1e-4;

type Point = readonly [number, number];

/** Strokes of two channels, as path data round the origin, that leave a wall of `gap` between them. */
type Arrangement = (draw: Draw) => readonly [string, string];

interface Draw {
  readonly radius: number;
  readonly other: number;
  readonly half: number;
  readonly otherHalf: number;
  readonly gap: number;
  readonly at: (x: number, y: number) => string;
}

const ARRANGEMENTS: Readonly<Record<string, Arrangement>> = {
  'a straight beside an arc': ({ radius, half, otherHalf, gap, at }) => {
    const x = radius + half + otherHalf + gap;
    return [arc(0, radius, apart(radius), 0, at), `M${at(x, -40)}L${at(x, 40)}`];
  },
  'an arc beside an arc that bends the other way': ({ radius, other, half, otherHalf, gap, at }) => {
    const centre = radius + other + half + otherHalf + gap;
    return [arc(0, radius, apart(radius), 0, at), arc(centre, other, apart(other), Math.PI, at)];
  },
  'a small arc inside a large one': ({ radius, half, otherHalf, gap, at }) => {
    const small = radius / 2.5;
    const centre = radius - small - half - otherHalf - gap;
    return [
      arc(0, radius, apart(radius), 0, at),
      arc(centre, small, Math.min(2, Math.sqrt(5 / small)), 0, at),
    ];
  },
  'two arcs round one centre': ({ radius, half, otherHalf, gap, at }) => {
    const outer = radius + half + otherHalf + gap;
    const angle = Math.min(1, 8 / radius);
    return [nested(radius, radius * 0.4, angle, at), nested(outer, outer + 3, 0.83 * angle, at)];
  },
};

/** Half the angle of an arc that has gone aside by a millimetre and more at its ends. */
function apart(radius: number): number {
  return Math.min(2, Math.acos(Math.max(-1, 1 - 1.5 / radius)));
}

function arc(cx: number, r: number, half: number, towards: number, at: Draw['at']): string {
  const [x1, y1] = onCircle(cx, r, towards - half);
  const [x2, y2] = onCircle(cx, r, towards + half);
  return `M${at(x1, y1)}A${r} ${r} 0 ${half > Math.PI / 2 ? 1 : 0} 1 ${at(x2, y2)}`;
}

/** An arc whose ends turn square into the radius, to the distance `to` from the centre. */
function nested(r: number, to: number, half: number, at: Draw['at']): string {
  const [x0, y0] = onCircle(0, to, -half);
  const [x1, y1] = onCircle(0, r, -half);
  const [x2, y2] = onCircle(0, r, half);
  const [x3, y3] = onCircle(0, to, half);
  return `M${at(x0, y0)}L${at(x1, y1)}A${r} ${r} 0 0 1 ${at(x2, y2)}L${at(x3, y3)}`;
}

function onCircle(cx: number, r: number, angle: number): Point {
  return [cx + r * Math.cos(angle), r * Math.sin(angle)];
}

/** Millimetres of wall: overlaps, touching, either side of nought and of the limit, at the limit, and clear of it. */
const GAPS = [-0.02, -0.003, -0.0003, 0.0003, 0.003, 0.025, 0.045, 0.0497, 0.05, 0.0503, 0.053, 0.065, 0.1];

function drawing(arrangement: Arrangement, random: () => number, radius: number, gap: number): string {
  const half = 0.05 + 0.15 * random();
  const otherHalf = 0.05 + 0.15 * random();
  const turn = 2 * Math.PI * random();
  const [x0, y0] = [200 + 50 * random(), 200 + 50 * random()];
  const at = (x: number, y: number): string =>
    `${x0 + x * Math.cos(turn) - y * Math.sin(turn)} ${y0 + x * Math.sin(turn) + y * Math.cos(turn)}`;
  const other = 100 ** random();
  const [one, two] = arrangement({ radius, other, half, otherHalf, gap, at });
  return `<svg xmlns="http://www.w3.org/2000/svg" width="500mm" height="500mm" viewBox="0 0 500 500" fill="none" stroke="#000">
<path id="one" stroke-width="${2 * half}" d="${one}"/><path id="two" stroke-width="${2 * otherHalf}" d="${two}"/></svg>`;
}

/** A small generator of our own, so that a failing case can be drawn again (Park and Miller 1988). */
function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
}

const SHEET = `depth: 50 um\nlimits: { min_wall: ${LIMIT_MM} mm }\n`;

function walls(svg: string) {
  return findingsOf(svg, SHEET).findings.filter(({ rule }) =>
    ['thin-wall', 'merged-walls', 'near-miss', 'double-stroke'].includes(rule),
  );
}

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
});
