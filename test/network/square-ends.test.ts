import { describe, expect, it } from 'vitest';
import { buildNetwork } from '../../src/network/build.ts';
import { randomFrom } from '../solve/graphs.ts';
import { type ChannelSpec, chipOf, type PortSpec } from './chip-of.ts';

/** A strip ends square, also where a vertex or a seam stands less than half a width before its end. */

type Point = readonly [number, number];

/** A chamber 2 mm wide that starts at 0, 0 towards +x, with vertices less than half its width from there. */
function chamber(random: () => number): ChannelSpec {
  const turn = random() < 0.3 ? 0 : random() - 0.5;
  const line = [0, 0];
  let x = 0;
  let y = 0;
  let angle = 0;
  for (let k = 1 + Math.floor(3 * random()); k > 0; k--) {
    const step = 0.05 + 0.25 * random();
    x += step * Math.cos(angle);
    y += step * Math.sin(angle);
    line.push(x, y);
    angle = turn;
  }
  line.push(x + 10 * Math.cos(angle), y + 10 * Math.sin(angle));
  return { name: 'chamber', widthMm: 2, lines: [line] };
}

describe('before the square end of a chamber with a vertex near it', () => {
  const random = randomFrom(11);
  const cases = Array.from({ length: 200 }, () => {
    const gap = 0.01 + 0.9 * random();
    return { chamber: chamber(random), gap, aside: gap * (2 * random() - 1) };
  });

  it('a channel is not joined across the wall, and on it or past it is', () => {
    for (const { chamber, gap, aside } of cases) {
      const feeder = (end: number): ChannelSpec => ({
        name: 'feeder',
        widthMm: 0.1,
        lines: [[-6, aside, end, aside]],
      });
      for (const end of [-gap, 0, 0.02]) {
        const { reachCount, nodeCount } = buildNetwork(chipOf([chamber, feeder(end)]));
        // Apart they are two ducts of two nodes each.
        expect(nodeCount - reachCount === 2, JSON.stringify({ chamber, aside, end })).toBe(end < 0);
      }
    }
  });

  it('a well is not opened across the wall, and on it or past it is', () => {
    for (const { chamber, gap } of cases) {
      for (const off of [-gap, 0, 0.02]) {
        const well: PortSpec = { name: 'well', x: off - 0.4, y: 0, radiusMm: 0.4 };
        const { portNode, reachFrom, reachTo } = buildNetwork(chipOf([chamber], [well]));
        const isMet = [...reachFrom, ...reachTo].includes(portNode[0]);
        expect(isMet, JSON.stringify({ chamber, off })).toBe(off >= 0);
      }
    }
  });
});

describe('a wide branch drawn with vertices, or in strokes, less than half its width from its end', () => {
  it('takes the same of each arm as drawn in one piece', () => {
    const random = randomFrom(12);
    for (let k = 0; k < 200; k++) {
      const width = 0.2 + 0.6 * random();
      const angle = (0.15 + 0.7 * random()) * Math.PI;
      const at = (s: number): Point => [6 + s * Math.cos(angle), s * Math.sin(angle)];
      const [s, t] = [0.1 + 0.3 * random(), 0.5 + 0.4 * random()].map((share) => (share * width) / 2);
      const whole = [[...at(0), ...at(5)]];
      const vertices = [[...at(0), ...at(s), ...at(t), ...at(5)]];
      const strokes = [
        [...at(0), ...at(s)],
        [...at(s), ...at(t)],
        [...at(t), ...at(5)],
      ];
      const wanted = arms(whole, width);
      expect(Math.min(...wanted)).toBeLessThan(5.99);
      for (const drawn of [vertices, strokes, strokes.map(reversed)]) {
        const got = arms(drawn, width);
        expect(got[0], `case ${k}`).toBeCloseTo(wanted[0], 7);
        expect(got[1], `case ${k}`).toBeCloseTo(wanted[1], 7);
      }
    }

    function arms(lines: readonly (readonly number[])[], widthMm: number): readonly number[] {
      const network = buildNetwork(
        chipOf([
          { name: 'main', widthMm: 0.1, lines: [[0, 0, 12, 0]] },
          ...lines.map((line, n): ChannelSpec => ({ name: `branch-${n}`, widthMm, lines: [line] })),
        ]),
      );
      return [...network.reachDuctMm].filter((_, r) => network.reachChannel[r] === 0);
    }
  });
});

function reversed([x1, y1, x2, y2]: readonly number[]): number[] {
  return [x2, y2, x1, y1];
}
