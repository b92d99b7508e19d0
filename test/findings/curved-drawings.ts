import type { Finding } from '../../src/findings/types.ts';
import { findingsOf } from './findings-of.ts';

/**
 * Drawings of two channels beside each other, arcs among them, with a wall that is known exactly: the distance of circles
 * and lines. Of every pair the nearest places lie inside both strokes, and their ends are far apart.
 */

export const LIMIT_MM = 0.05;
export const EXACT_MM = 1e-4;

export type Point = readonly [number, number];

/** Strokes of two channels, as path data round the origin, that leave a wall of `gap` between them. */
export type Arrangement = (draw: Draw) => readonly [string, string];

interface Draw {
  readonly radius: number;
  readonly other: number;
  readonly half: number;
  readonly otherHalf: number;
  readonly gap: number;
  readonly at: (x: number, y: number) => string;
}

export const ARRANGEMENTS: Readonly<Record<string, Arrangement>> = {
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

export function drawing(arrangement: Arrangement, random: () => number, radius: number, gap: number): string {
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
export function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
}

const SHEET = `depth: 50 um\nlimits: { min_wall: ${LIMIT_MM} mm }\n`;

export function walls(svg: string): readonly Finding[] {
  return findingsOf(svg, SHEET).findings.filter(({ rule }) =>
    ['thin-wall', 'merged-walls', 'near-miss', 'double-stroke'].includes(rule),
  );
}
