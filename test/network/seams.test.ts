import { describe, expect, it } from 'vitest';
import { buildNetwork } from '../../src/network/build.ts';
import type { Network } from '../../src/network/types.ts';
import { randomFrom } from '../solve/graphs.ts';
import { type ChannelSpec, chipOf, type PortSpec } from './chip-of.ts';

/** A seam of equal ducts is no node (rules 3, 5 and 8): a stroke drawn in several is the stroke drawn in one. */

interface Path {
  readonly points: (readonly [number, number])[];
  readonly radii: number[];
}

/** A random walk of straight legs, corners and round bends, always to the right on the whole, so that it never meets itself. */
function randomPath(random: () => number, width: number): Path {
  const points: [number, number][] = [[0, 0]];
  const radii: number[] = [];
  let [x, y] = [0, 0];
  let angle = 0;
  const step = (length: number, radius: number): void => {
    x += length * Math.cos(angle);
    y += length * Math.sin(angle);
    points.push([x, y]);
    radii.push(radius);
  };
  for (let leg = 0; leg < 12; leg++) {
    step(width * (leg === 0 ? 6 + 6 * random() : 0.5 + 6 * random()), 0);
    // No chord comes down to the slack of 1 µm, where lengths may chain away.
    const turn = (angle > 0 ? -1 : 1) * (0.5 + 0.9 * random());
    if (random() < 0.5) {
      angle += turn;
      continue;
    }
    const radius = width * (0.8 + 3 * random());
    const chords = 3 + Math.floor(random() * 8);
    for (let k = 0; k < chords; k++) {
      angle += turn / chords / 2;
      step(2 * radius * Math.sin(Math.abs(turn) / chords / 2), radius);
      angle += turn / chords / 2;
    }
  }
  step(width * 4, 0);
  return { points, radii };
}

/** The path as strokes of their own, cut at vertices and between them, each drawn in either direction. */
function inStrokes(
  { points, radii }: Path,
  cuts: number,
  random: () => number,
  widthMm: number,
): ChannelSpec[] {
  const line: (readonly [number, number])[] = [points[0]];
  const bend: number[] = [];
  const isCut: boolean[] = [true];
  for (const [k, radius] of radii.entries()) {
    const [ax, ay] = points[k];
    const [bx, by] = points[k + 1];
    if (radius === 0 && random() < cuts) {
      // Clear of the T on the first leg by more than the slack.
      const t = k === 0 ? 0.1 + 0.19 * random() : 0.1 + 0.8 * random();
      line.push([ax + t * (bx - ax), ay + t * (by - ay)]);
      bend.push(0);
      isCut.push(true);
    }
    line.push([bx, by]);
    bend.push(radius);
    isCut.push(random() < cuts);
  }
  const strokes: ChannelSpec[] = [];
  let start = 0;
  for (let k = 1; k < line.length; k++) {
    if (!isCut[k] && k + 1 < line.length) continue;
    const part = line.slice(start, k + 1);
    const partRadii = bend.slice(start, k);
    const isReversed = random() < 0.5;
    strokes.push({
      name: `s${strokes.length}`,
      widthMm,
      lines: [(isReversed ? [...part].reverse() : part).flat()],
      radii: [isReversed ? [...partRadii].reverse() : partRadii],
    });
    start = k;
  }
  return strokes;
}

function totals(network: Network) {
  const sum = (values: Float64Array): number => values.reduce((total, value) => total + value, 0);
  return {
    duct: sum(network.reachDuctMm),
    joint: sum(network.reachJointMm),
    bound: sum(network.reachJointBoundMm),
    kinds: Object.fromEntries(network.joints.map(({ kind, count }) => [kind, count])),
  };
}

describe('a channel drawn as many strokes', () => {
  it('has the duct length, joints and bounds of the same channel drawn as one', () => {
    const random = randomFrom(7);
    for (let run = 0; run < 120; run++) {
      const width = 0.05 + 0.2 * random();
      const path = randomPath(random, width);
      const [endX, endY] = path.points[path.points.length - 1];
      const ports: PortSpec[] = [
        { name: 'in', x: 0, y: 0, radiusMm: 0.4 * width },
        { name: 'out', x: endX, y: endY, radiusMm: 0.4 * width },
      ];
      // A side channel at a random place, so that a T with its room stands among the seams.
      const at = path.points[1][0] * (0.31 + 0.6 * random());
      const side: ChannelSpec = {
        name: 'side',
        widthMm: width * (random() < 0.5 ? 1 : 0.5),
        lines: [[at, 8 * width, at, 0]],
      };
      const whole: ChannelSpec = {
        name: 'whole',
        widthMm: width,
        lines: [path.points.flat()],
        radii: [path.radii],
      };
      for (const joints of ['resolved', 'centreline'] as const) {
        const build = (channels: readonly ChannelSpec[]) =>
          totals(buildNetwork({ ...chipOf([...channels, side], ports), joints }));
        const one = build([whole]);
        const many = build(inStrokes(path, 0.4, random, width));
        const drawing = JSON.stringify({
          run,
          joints,
          many: many.kinds,
          one: one.kinds,
          width,
          at,
          points: path.points,
        });
        expect(many.duct, drawing).toBeCloseTo(one.duct, 9);
        expect(many.joint, drawing).toBeCloseTo(one.joint, 9);
        // With centrelines alone a reach's bound is that of the sum of its joints, which differs with the reaches.
        if (joints === 'resolved') expect(many.bound, drawing).toBeCloseTo(one.bound, 9);
        expect(many.kinds, drawing).toEqual(one.kinds);
      }
    }
  });
});

describe('strokes end to end on one straight line', () => {
  it('keep their length, whatever rounding makes of their directions', () => {
    const random = randomFrom(7);
    let worst = 0;
    for (let k = 0; k < 1000; k++) {
      const turn = random() * 2 * Math.PI;
      const rounding = 10 ** -(9 + 5 * random());
      const at = (along: number): [number, number] => [
        20 + along * Math.cos(turn) + (random() - 0.5) * rounding,
        20 + along * Math.sin(turn) + (random() - 0.5) * rounding,
      ];
      const spot = 1 + 7 * random();
      const seam = at(spot);
      const lines = [
        [...at(0), ...seam],
        [...at(9), ...(random() < 0.7 ? seam : at(spot))],
      ];
      const network = buildNetwork(chipOf([{ name: 'a', widthMm: 0.2, lines }]));
      worst = Math.max(worst, Math.abs(network.reachDuctMm.reduce((sum, length) => sum + length, 0) - 9));
    }
    expect(worst).toBeLessThan(1e-8);
  });
});

describe('a branch of small angle whose first bit is a stroke of its own', () => {
  it('stays joined where the rest of it and the main are one path', () => {
    const random = randomFrom(8);
    for (let k = 0; k < 200; k++) {
      const angle = ((6 + 8.5 * random()) * Math.PI) / 180;
      const bit = (0.05 + 0.02 * random()) / Math.sin(angle) / 2;
      const along = (t: number): [number, number] => [
        Number((10 + t * Math.cos(angle)).toFixed(6)),
        Number((10 + t * Math.sin(angle)).toFixed(6)),
      ];
      const tip = along(bit);
      const far = along(8);
      const main = [2, 10, 10, 10, 18, 10];
      const first = [10, 10, ...tip];
      const rest = [...far, ...tip];
      const asOne: ChannelSpec[] = [
        { name: 'all', widthMm: 0.15, lines: random() < 0.5 ? [rest, main] : [main, rest] },
        { name: 'bit', widthMm: 0.15, lines: [random() < 0.5 ? first : [...tip, 10, 10]] },
      ];
      const apart: ChannelSpec[] = [
        { name: 'main', widthMm: 0.15, lines: [main] },
        { name: 'rest', widthMm: 0.15, lines: [rest] },
        asOne[1],
      ];
      const ports: PortSpec[] = [
        { name: 'a', x: 2, y: 10, radiusMm: 0.5 },
        { name: 'b', x: 18, y: 10, radiusMm: 0.5 },
        { name: 'c', x: far[0], y: far[1], radiusMm: 0.5 },
      ];
      for (const channels of [asOne, apart]) {
        const network = buildNetwork(chipOf(channels, ports));
        const total = network.reachDuctMm.reduce((sum, length) => sum + length, 0);
        // Two arms of the main and the branch, each to its rim.
        expect(total).toBeCloseTo(22.5, 4);
        expect(network.nodeCount - network.reachCount).toBe(1);
      }
    }
  });
});
