import { describe, expect, it } from 'vitest';
import { assembleChip } from '../../src/chip/assemble.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import type { Network } from '../../src/network/types.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { readSvg } from '../../src/svg/read.ts';

/** Joins at arcs against the exact geometry of circles and lines (rules 3 to 5), within 0.1 µm at the wall. */

const EXACT_MM = 1e-4;
const SLACK_MM = 1e-3;
const RADII = [1, 10, 30, 100];

type At = (x: number, y: number) => string;

/** Turned by an angle and set far from the origin, so that nothing lies on an axis. */
function placed(turn: number): At {
  const [cos, sin] = [Math.cos(turn), Math.sin(turn)];
  return (x, y) => `${300 + x * cos - y * sin} ${300 + x * sin + y * cos}`;
}

function networkOf(paths: readonly (readonly [name: string, width: number, d: string])[]): Network {
  const drawn = paths.map(([name, width, d]) => `<path id="${name}" stroke-width="${width}" d="${d}"/>`);
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="600mm" height="600mm" viewBox="0 0 600 600" fill="none" stroke="#000">${drawn.join('')}</svg>`;
  const file = 'joins.svg';
  const sheet = parseRunSheet('depth: 50 um\njoints: centreline\n', 'joins.run.yaml');
  const layout = layOut(readSvg(svg, file), file);
  return buildNetwork(assembleChip({ layout, sheet, file }).chip);
}

function reachesOf(network: Network, channel: string): number[] {
  return [...network.reachChannel.keys()].filter(
    (r) => network.chip.channels[network.reachChannel[r]].name === channel,
  );
}

function arcOf(radius: number, half: number, at: At): string {
  const end = at(radius * Math.cos(half), radius * Math.sin(half));
  return `M${at(radius * Math.cos(half), -radius * Math.sin(half))}A${radius} ${radius} 0 0 1 ${end}`;
}

const MAIN = 0.3;
const BRANCH = 0.2;

/** A branch that points at an arc's centre, from outside or inside, and stops `short` of the arc's centreline. */
function radialBranch(radius: number, side: 1 | -1, short: number, angle: number): Network {
  const at = placed(2.1 * radius);
  const far = radius + side * Math.min(0.9 * radius, 5);
  const near = radius + side * short;
  const branch = `M${at(far * Math.cos(angle), far * Math.sin(angle))}L${at(near * Math.cos(angle), near * Math.sin(angle))}`;
  return networkOf([
    ['main', MAIN, arcOf(radius, Math.min(1.2, 15 / radius), at)],
    ['branch', BRANCH, branch],
  ]);
}

describe('a branch drawn to an arc', () => {
  const sides = [
    ['outside', 1],
    ['inside', -1],
  ] as const;
  const cases = RADII.flatMap((radius) => sides.map(([where, side]) => ({ radius, where, side })));

  it.each(cases)(
    'of radius $radius mm from $where is the same chip to the wall, between, to the centreline and past it',
    ({ radius, side }) => {
      const wall = MAIN / 2;
      const drawn = Math.min(0.9 * radius, 5);
      for (const short of [wall + 0.9 * SLACK_MM, wall, 0.99 * wall, wall / 2, 0, -0.07]) {
        // Anywhere between the cuts of the arc.
        for (const angle of [0, 0.0173]) {
          const network = radialBranch(radius, side, short, angle);
          const what = `${short} mm short at ${angle} rad`;
          expect(reachesOf(network, 'main'), what).toHaveLength(2);
          const [branch, ...others] = reachesOf(network, 'branch');
          expect(others, what).toEqual([]);
          expect(Math.abs(network.reachDrawnMm[branch] - drawn), what).toBeLessThan(EXACT_MM);
          const duct = drawn - wall * (1 - BRANCH / MAIN);
          expect(Math.abs(network.reachDuctMm[branch] - duct), what).toBeLessThan(EXACT_MM);
        }
      }
    },
  );

  it.each(cases)('of radius $radius mm from $where, and not as far as the wall, is not joined', (drawing) => {
    for (const angle of [0, 0.0071, 0.0173, -0.0301]) {
      const network = radialBranch(drawing.radius, drawing.side, MAIN / 2 + 1.2 * SLACK_MM, angle);
      expect(reachesOf(network, 'main')).toHaveLength(1);
    }
  });

  it.each(RADII)('of radius %d mm aslant is carried on to its centreline in its own direction', (radius) => {
    const at = placed(1.3 * radius);
    // A line that passes the centre at a distance, and meets the circle where x² + c² = R².
    const c = radius * Math.sin(0.5);
    const meets = Math.sqrt(radius ** 2 - c ** 2);
    const wall = Math.sqrt((radius + MAIN / 2) ** 2 - c ** 2);
    for (const x of [wall - 1e-4, (wall + meets) / 2, meets, meets - 0.05]) {
      const network = networkOf([
        ['main', MAIN, arcOf(radius, Math.min(1.2, 0.5 + 10 / radius), at)],
        ['branch', BRANCH, `M${at(meets + 4, c)}L${at(x, c)}`],
      ]);
      const [branch] = reachesOf(network, 'branch');
      expect(reachesOf(network, 'main')).toHaveLength(2);
      expect(Math.abs(network.reachDrawnMm[branch] - 4)).toBeLessThan(EXACT_MM);
      const duct = 4 - (wall - meets) * (1 - BRANCH / MAIN);
      expect(Math.abs(network.reachDuctMm[branch] - duct)).toBeLessThan(EXACT_MM);
    }
  });
});

describe('an arc drawn to a channel', () => {
  it.each(RADII)(
    'of radius %d mm ends in the direction of its tangent and leaves the strip where it does',
    (radius) => {
      const at = placed(0.7 * radius);
      // The arc comes in at 50° to the main, which runs along y at x = 0; its centre lies so that it ends on the wall.
      const slant = (50 * Math.PI) / 180;
      const wall = MAIN / 2;
      // Tangent at the end: (−sin slant', …) with the end's angle seen from the centre.
      const end = Math.PI - slant;
      const [cx, cy] = [wall - radius * Math.cos(end), -radius * Math.sin(end)];
      const turn = Math.min(0.8, 6 / radius);
      const start = end - turn;
      const point = (angle: number): string =>
        at(cx + radius * Math.cos(angle), cy + radius * Math.sin(angle));
      const network = networkOf([
        ['main', MAIN, `M${at(0, -30)}L${at(0, 30)}`],
        ['branch', BRANCH, `M${point(start)}A${radius} ${radius} 0 0 1 ${point(end)}`],
      ]);
      const [branch] = reachesOf(network, 'branch');
      expect(reachesOf(network, 'main')).toHaveLength(2);
      // The tangent there is (−sin end, cos end): to x = 0 it takes wall / sin end.
      const carriedOn = wall / Math.sin(end);
      const extension = network.trace.endExtensionMm.reduce((most, length) => Math.max(most, length), 0);
      expect(Math.abs(extension - carriedOn)).toBeLessThan(EXACT_MM);
      // What the main's strip takes of the branch is what was carried on: the arc is outside it.
      const taken = network.reachDrawnMm[branch] - network.reachDuctMm[branch];
      expect(Math.abs(taken - carriedOn * (1 - BRANCH / MAIN))).toBeLessThan(EXACT_MM);
    },
  );

  it.each(RADII)(
    'of radius %d mm to its centreline loses the length of arc that lies in the strip',
    (radius) => {
      const at = placed(0.4 * radius);
      const wall = MAIN / 2;
      const end = (130 * Math.PI) / 180;
      const [cx, cy] = [-radius * Math.cos(end), -radius * Math.sin(end)];
      // x = cx + R cos a = wall.
      const leaves = Math.acos((wall - cx) / radius);
      const start = end - Math.min(0.8, 6 / radius);
      const point = (angle: number): string =>
        at(cx + radius * Math.cos(angle), cy + radius * Math.sin(angle));
      const network = networkOf([
        ['main', MAIN, `M${at(0, -30)}L${at(0, 30)}`],
        ['branch', BRANCH, `M${point(start)}A${radius} ${radius} 0 0 1 ${point(end)}`],
      ]);
      const [branch] = reachesOf(network, 'branch');
      const taken = network.reachDrawnMm[branch] - network.reachDuctMm[branch];
      expect(Math.abs(taken - radius * (end - leaves) * (1 - BRANCH / MAIN))).toBeLessThan(EXACT_MM);
    },
  );

  it.each(RADII)(
    'of radius %d mm that leaves it along a tangent, and is wider, takes nothing of what lies behind its square end',
    (radius) => {
      const at = placed(1.9 * radius);
      const angle = Math.min(1.2, 12 / radius);
      const [x, y] = [radius * Math.sin(angle), radius * (1 - Math.cos(angle))];
      const network = networkOf([
        ['main', 0.1, `M${at(-5, 0)}L${at(20, 0)}`],
        ['branch', 0.3, `M${at(0, 0)}A${radius} ${radius} 0 0 1 ${at(x, y)}`],
      ]);
      const [behind, before] = reachesOf(network, 'main');
      expect(Math.abs(network.reachDuctMm[behind] - 5)).toBeLessThan(EXACT_MM);
      // The main's centreline leaves the branch's strip on the outside of its bend, where x² + R² = (R + w/2)².
      const inside = Math.sqrt((radius + 0.15) ** 2 - radius ** 2);
      if (inside > radius * Math.tan(angle)) return;
      expect(Math.abs(network.reachDuctMm[before] - (20 - inside * (1 - 0.1 / 0.3)))).toBeLessThan(
        20 * EXACT_MM,
      );
    },
  );

  it.each(RADII)('of radius %d mm that touches it in passing meets it once', (radius) => {
    const at = placed(2.3 * radius);
    for (const past of [0, 0.0005, -0.0005]) {
      const network = networkOf([
        ['main', MAIN, `M${at(-30, 0)}L${at(30, 0)}`],
        [
          'branch',
          BRANCH,
          `M${at(-radius * Math.sin(0.8), radius * (1 - Math.cos(0.8)) + past)}A${radius} ${radius} 0 0 1 ${at(radius * Math.sin(0.9), radius * (1 - Math.cos(0.9)) + past)}`,
        ],
      ]);
      const [mains, branches] = [reachesOf(network, 'main'), reachesOf(network, 'branch')];
      // Drawn across the line by less than the slack, it meets it where it comes and where it goes.
      if (past >= 0) expect([mains.length, branches.length]).toEqual([2, 2]);
      else expect(mains.length).toBe(branches.length);
      expect(mains.length).toBeGreaterThan(1);
    }
  });
});
