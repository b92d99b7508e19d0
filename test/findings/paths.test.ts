import { describe, expect, it } from 'vitest';
import { channelPaths, routeLength } from '../../src/findings/paths.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { type ChannelSpec, chipOf, type PortSpec, runOf } from '../network/chip-of.ts';

/** Length along the channels between two places, each [centreline, position]. */
function way(
  channels: readonly ChannelSpec[],
  ports: readonly PortSpec[],
  [ca, s]: readonly [number, number],
  [cb, t]: readonly [number, number],
  withinMm = 100,
): number {
  const chip = chipOf(channels, ports);
  const paths = channelPaths({ chip, run: runOf(chip), network: buildNetwork(chip), flow: null });
  const routes = paths.routes(paths.arcAt(ca, s), paths.arcAt(cb, t), withinMm);
  return routes.reduce((least, route) => Math.min(least, routeLength(route, s, t)), Number.POSITIVE_INFINITY);
}

const RAIL: ChannelSpec = { name: 'rail', widthMm: 0.2, lines: [[0, 0, 10, 0]] };
const LADDER: readonly ChannelSpec[] = [
  RAIL,
  { name: 'other', widthMm: 0.2, lines: [[0, 2, 10, 2]] },
  { name: 'rung-1', widthMm: 0.2, lines: [[1, 0, 1, 2]] },
  { name: 'rung-2', widthMm: 0.2, lines: [[9, 0, 9, 2]] },
];

describe('the way along the channels', () => {
  it('goes over the nearest rung of a ladder', () => {
    expect(way(LADDER, [], [0, 3], [1, 3])).toBeCloseTo(2 + 2 + 2, 12);
    expect(way(LADDER, [], [0, 8], [1, 8])).toBeCloseTo(1 + 2 + 1, 12);
    expect(way(LADDER, [], [0, 0.5], [1, 0.5])).toBeCloseTo(0.5 + 2 + 0.5, 12);
  });

  it('takes the shorter way round a closed channel, also past its first point', () => {
    const loop: ChannelSpec = {
      name: 'loop',
      widthMm: 0.2,
      closed: true,
      lines: [[0, 0, 4, 0, 4, 4, 0, 4, 0, 0]],
    };
    expect(way([loop], [], [0, 1], [0, 15])).toBeCloseTo(2, 12);
    expect(way([loop], [], [0, 1], [0, 8])).toBeCloseTo(7, 12);
  });

  it('takes no length across an open well', () => {
    const parts: readonly ChannelSpec[] = [
      { name: 'one', widthMm: 0.2, lines: [[0, 0, 5, 0]] },
      { name: 'two', widthMm: 0.2, lines: [[5, 0, 10, 0]] },
    ];
    expect(way(parts, [{ name: 'p', x: 5, y: 0, radiusMm: 1 }], [0, 3], [1, 2])).toBeCloseTo(1 + 1, 12);
  });

  it('goes on where two strokes of one channel meet end to end in no node', () => {
    const parts: readonly ChannelSpec[] = [
      {
        name: 'lane',
        widthMm: 0.2,
        lines: [
          [0, 0, 5, 0],
          [5, 0, 10, 0],
          [10, 0, 10, 5],
        ],
      },
    ];
    expect(way(parts, [], [0, 1], [2, 2])).toBeCloseTo(4 + 5 + 2, 12);
  });

  it('is endless between channels that nothing joins, and beyond what was asked for', () => {
    const apart: readonly ChannelSpec[] = [RAIL, { name: 'other', widthMm: 0.2, lines: [[0, 2, 10, 2]] }];
    expect(way(apart, [], [0, 3], [1, 3])).toBe(Number.POSITIVE_INFINITY);
    expect(way(LADDER, [], [0, 3], [1, 3], 1.5)).toBe(Number.POSITIVE_INFINITY);
  });
});
