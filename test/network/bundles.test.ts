import { describe, expect, it } from 'vitest';
import { buildNetwork } from '../../src/network/build.ts';
import type { Network } from '../../src/network/types.ts';
import { randomFrom } from '../solve/graphs.ts';
import { type ChannelSpec, chipOf, type PortSpec } from './chip-of.ts';

/** Ends of several strokes at one place (rule 3), in drawings whose answer is known by construction. */

const rounded = (value: number, decimals: number): number => Number(value.toFixed(decimals));

/** Duct length of the longest reach of each channel, by name, and in how many parts the ports are. */
function look(network: Network) {
  const longest: Record<string, number> = {};
  const root = Int32Array.from({ length: network.nodeCount }, (_, n) => n);
  const find = (n: number): number => (root[n] === n ? n : find(root[n]));
  let total = 0;
  for (let r = 0; r < network.reachCount; r++) {
    const { name } = network.chip.channels[network.reachChannel[r]];
    longest[name] = Math.max(longest[name] ?? 0, network.reachDuctMm[r]);
    root[find(network.reachFrom[r])] = find(network.reachTo[r]);
    total += network.reachDuctMm[r];
  }
  return { longest, total, parts: new Set([...network.portNode].map(find)).size };
}

const port = (name: string, x: number, y: number): PortSpec => ({ name, x, y, radiusMm: 0.3 });

/** A main at any angle and feeders that end at one point `off` mm beside its centreline, coordinates rounded as editors do. */
function feedersOnMain(random: () => number, off: (half: number) => number) {
  const decimals = 3 + Math.floor(random() * 7);
  const turn = random() * 2 * Math.PI;
  const width = 0.2 + random();
  const at = (along: number, across: number): [number, number] => [
    rounded(20 + along * Math.cos(turn) - across * Math.sin(turn), decimals),
    rounded(20 + along * Math.sin(turn) + across * Math.cos(turn), decimals),
  ];
  const start = at(-6, 0);
  const end = at(5, 0);
  const meet = at(0, off(width / 2));
  const channels: ChannelSpec[] = [{ name: 'main', widthMm: width, lines: [[...start, ...end]] }];
  const ports = [port('start', ...start), port('end', ...end)];
  const expected: Record<string, number> = {};
  const count = 2 + Math.floor(random() * 4);
  for (let k = 0; k < count; k++) {
    // From 25° to 155° round the main, on the side of the meeting point, never along each other.
    const angle = ((25 + (130 * (k + 0.2 + 0.6 * random())) / count) * Math.PI) / 180;
    const across = off(width / 2) + 5 * Math.sin(angle);
    const outer = at(5 * Math.cos(angle), across);
    const own = width * (0.2 + 0.7 * random());
    const points = [...outer, ...meet];
    const line = random() < 0.5 ? points : [...meet, ...outer];
    channels.splice(Math.floor(random() * (channels.length + 1)), 0, {
      name: `f${k}`,
      widthMm: own,
      lines: [line],
    });
    ports.push(port(`p${k}`, ...outer));
    const outside = (across - width / 2) / Math.sin(angle) - 0.3;
    expected[`f${k}`] = outside;
  }
  return { channels, ports, expected, angles: count };
}

describe('a bundle of ends', () => {
  it('on the centreline of an oblique main joins all of it, whatever the rounding', () => {
    const random = randomFrom(11);
    for (let run = 0; run < 150; run++) {
      const { channels, ports, expected } = feedersOnMain(random, () => 0);
      const network = buildNetwork(chipOf(channels, ports));
      const { longest, parts } = look(network);
      const drawing = JSON.stringify({ channels, ports });
      expect(parts, drawing).toBe(1);
      const main = channels.find(({ name }) => name === 'main')?.widthMm ?? 0;
      for (const [name, outside] of Object.entries(expected)) {
        const own = channels.find((channel) => channel.name === name)?.widthMm ?? 0;
        // To the wall in full, from there to the meeting point in proportion; less where a neighbour's strip is wider.
        expect(longest[name], drawing).toBeLessThan(
          outside + ((main / 2) * (own / main)) / Math.sin(0.43) + 0.01,
        );
      }
      expect(longest.main, drawing).toBeGreaterThan(5.69);
      expect(longest.main, drawing).toBeLessThan(5.71);
    }
  });

  it('on the wall of a main joins all of it, each member carried on alone', () => {
    const random = randomFrom(12);
    for (let run = 0; run < 150; run++) {
      const { channels, ports } = feedersOnMain(random, (half) => half);
      const network = buildNetwork(chipOf(channels, ports));
      const drawing = JSON.stringify({ channels, ports });
      expect(look(network).parts, drawing).toBe(1);
      for (const channel of channels) {
        if (channel.name === 'main') continue;
        const reaches = [...network.reachChannel].filter(
          (c) => network.chip.channels[c].name === channel.name,
        ).length;
        // From the port to the bundle and from there to the main.
        expect(reaches, drawing).toBe(2);
      }
    }
  });

  it('gives the flows of the same chip drawn with one inner vertex, in any order of the strokes', () => {
    const arms: readonly (readonly [number, number])[] = [
      [0, 4],
      [4, 0],
      [0, -4],
      [-4, 0],
      [3, 3],
      [-3, 2],
    ];
    const random = randomFrom(13);
    for (let run = 0; run < 60; run++) {
      const offset = 10 ** -(3.1 + 9 * random());
      const used = arms.slice(0, 3 + Math.floor(random() * 4));
      const channels = used.map(([x, y], k): ChannelSpec => {
        const dx = offset * (random() - 0.5);
        const dy = offset * (random() - 0.5);
        const line = [5 + x + dx, 5 + y + dy, 5 + dx, 5 + dy];
        return {
          name: `a${k}`,
          widthMm: 0.2,
          lines: [random() < 0.5 ? line : [line[2], line[3], line[0], line[1]]],
        };
      });
      const ports = used.map(([x, y], k) => port(`p${k}`, 5 + x, 5 + y));
      const network = buildNetwork(chipOf(channels, ports));
      const { longest, parts } = look(network);
      expect(parts, JSON.stringify(channels)).toBe(1);
      expect(network.reachCount).toBe(used.length);
      used.forEach(([x, y], k) => {
        expect(longest[`a${k}`]).toBeCloseTo(Math.hypot(x, y) - 0.3, 2);
      });
    }
  });

  it('that a stroke of it reaches the centreline with is carried on there by no other member', () => {
    // One feeder runs on to the centreline; the other ends where it ends.
    const network = buildNetwork(
      chipOf(
        [
          { name: 'main', widthMm: 1, lines: [[0, 0, 10, 0]] },
          { name: 'through', widthMm: 0.2, lines: [[5, 5, 5, -0.1]] },
          { name: 'late', widthMm: 0.2, lines: [[9, -3.9, 5, -0.1]] },
        ],
        [port('in', 0, 0), port('out', 10, 0), port('a', 5, 5), port('b', 9, -3.9)],
      ),
    );
    expect(look(network).parts).toBe(1);
    expect([...network.trace.endExtensionMm]).toEqual([0, 0, 0, 0, 0, 0]);
    expect(network.reachCount).toBe(5);
  });

  it('keeps the length of a curve drawn as strokes shorter than the slack, with a branch on every place of it', () => {
    const channels: ChannelSpec[] = [];
    const step = 0.0006;
    for (let k = 0; k < 500; k++) {
      channels.push({ name: `bit-${k}`, widthMm: 0.1, lines: [[5 + k * step, 5, 5 + (k + 1) * step, 5]] });
    }
    channels.push({ name: 'before', widthMm: 0.1, lines: [[1, 5, 5, 5]] });
    channels.push({ name: 'after', widthMm: 0.1, lines: [[5 + 500 * step, 5, 9, 5]] });
    const network = buildNetwork(chipOf(channels, [port('in', 1, 5), port('out', 9, 5)]));
    const { total, parts } = look(network);
    expect(parts).toBe(1);
    expect(total).toBeCloseTo(8 - 0.6, 3);
  });
});

describe('widths and depths within a millionth of each other', () => {
  /** A corner of two strokes that a third channel meets on its inside, near the corner. */
  function third(second: number, depth: number): number {
    const network = buildNetwork(
      chipOf(
        [
          { name: 'one', widthMm: 0.4, lines: [[0, 0, 5, 0]] },
          { name: 'two', widthMm: second, depthMm: depth, lines: [[5, 0, 5, 5]] },
          { name: 'third', widthMm: 0.1, lines: [[9, -4, 5, 0]] },
        ],
        [port('in', 0, 0), port('out', 5, 5), port('side', 9, -4)],
      ),
    );
    return look(network).longest.third;
  }

  for (const share of [1e-15, 1e-11, 1e-7, 9e-7]) {
    it(`are equal: a corner whose strokes differ by ${share} of their width or depth is one strip`, () => {
      expect(third(0.4 * (1 + share), 0.1)).toBeCloseTo(third(0.4, 0.1), 6);
      expect(third(0.4 * (1 - share), 0.1)).toBeCloseTo(third(0.4, 0.1), 6);
      expect(third(0.4, 0.1 * (1 + share))).toBeCloseTo(third(0.4, 0.1), 6);
    });
  }

  it('and beyond that are two strips', () => {
    expect(Math.abs(third(0.4 * (1 + 1e-4), 0.1) - third(0.4, 0.1))).toBeGreaterThan(1e-3);
  });
});
