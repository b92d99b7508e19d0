import { describe, expect, it } from 'vitest';
import { findNearPairs, piecesNear } from '../../src/geometry/near.ts';
import { toPieces } from '../../src/geometry/pieces.ts';
import { segmentDistance } from '../../src/geometry/segment.ts';
import { type ChannelSpec, chipOf } from '../network/chip-of.ts';
import { randomFrom } from '../solve/graphs.ts';

function nearPairs(specs: readonly ChannelSpec[], withinMm: number) {
  const near = findNearPairs(toPieces(chipOf(specs).channels), withinMm, () => 1, 'test.svg');
  const pairs = Array.from(near.pairA, (a, k) => `${a}-${near.pairB[k]}`);
  return { near, pairs: pairs.sort() };
}
const line = (name: string, x1: number, y1: number, x2: number, y2: number): ChannelSpec => ({
  name,
  widthMm: 0.2,
  lines: [[x1, y1, x2, y2]],
});

describe('the list of near pairs', () => {
  it('holds what brute force finds among random strokes of three widths and two planes, each once', () => {
    const random = randomFrom(3);
    const specs = Array.from({ length: 120 }, (_, i): ChannelSpec => {
      const [x, y, angle] = [30 * random(), 30 * random(), 7 * random()];
      const length = 0.5 + 6 * random();
      return {
        name: `c${i}`,
        widthMm: [0.1, 0.3, 1][i % 3],
        plane: i % 2,
        lines: [[x, y, x + length * Math.cos(angle), y + length * Math.sin(angle)]],
      };
    });
    const { near, pairs } = nearPairs(specs, 0.4);
    const { x1, y1, x2, y2, half, plane, count } = near.pieces;
    const wanted: string[] = [];
    for (let i = 0; i < count; i++) {
      for (let j = i + 1; j < count; j++) {
        const distance = segmentDistance(x1[i], y1[i], x2[i], y2[i], x1[j], y1[j], x2[j], y2[j]);
        if (plane[i] === plane[j] && distance <= half[i] + half[j] + 0.4) wanted.push(`${i}-${j}`);
      }
    }
    expect(wanted.length).toBeGreaterThan(60);
    expect(pairs).toEqual(wanted.sort());
    // and every piece lists its own
    const ofPieces: string[] = [];
    for (let i = 0; i < count; i++) {
      for (const j of piecesNear(near, i)) if (i < j) ofPieces.push(`${i}-${j}`);
      expect(piecesNear(near, i).length).toBe(near.firstPair[i + 1] - near.firstPair[i]);
    }
    expect(ofPieces.sort()).toEqual(pairs);
    expect(near.pairOf.length).toBe(2 * near.pairCount);
  });

  it('ends where strips are as far apart as asked', () => {
    const apart = (gap: number) =>
      nearPairs([line('a', 0, 0, 5, 0), line('b', 0, 0.2 + gap, 5, 0.2 + gap)], 0.5);
    expect(apart(0.49).pairs).toEqual(['0-1']);
    expect(apart(0.49).near.pairDistance[0]).toBeCloseTo(0.69, 12);
    expect(apart(0.51).pairs).toEqual([]);
  });

  it('leaves out pieces that follow on each other, round a closed centreline too', () => {
    const zigzag = { name: 'z', widthMm: 0.2, lines: [[0, 0, 5, 0, 5, 5, 0, 5]] };
    expect(nearPairs([zigzag], 0.1).pairs).toEqual([]);
    const ring = { name: 'r', widthMm: 0.2, closed: true, lines: [[0, 0, 5, 0, 5, 5, 0, 5, 0, 0]] };
    expect(nearPairs([ring], 0.1).pairs).toEqual([]);
    expect(nearPairs([{ ...ring, closed: false }], 0.1).pairs).toEqual(['0-3']);
  });

  it('takes a turn within two widths for one duct bending, unless it touches itself', () => {
    // up 0.1, along `top`, down 0.1: two widths are 0.4
    const turn = (top: number): ChannelSpec => ({
      name: 't',
      widthMm: 0.2,
      lines: [[0, 0.1, 0, 0, top, 0, top, 0.1]],
    });
    expect(nearPairs([turn(0.19)], 0.1).pairs).toEqual([]);
    expect(nearPairs([turn(0.21)], 0.1).pairs).toEqual(['0-2']);
    const touching = { ...turn(0.19), lines: [[0, 0.1, 0, 0, 0.1, 0, 0, 0.05]] };
    expect(nearPairs([touching], 0.1).pairs).toEqual(['0-2']);
  });

  it('of a drawing without channels is empty', () => {
    const { near, pairs } = nearPairs([], 1);
    expect([pairs, near.index.search(-9, -9, 9, 9), near.pairCount]).toEqual([[], [], 0]);
  });
});
