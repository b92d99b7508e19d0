import { describe, expect, it } from 'vitest';
import { onlyGrows } from '../../src/findings/growth.ts';
import {
  coveredLength,
  extentOf,
  type Facing,
  groupStretches,
  rangeOf,
} from '../../src/findings/stretches.ts';

const facing = (from: number, to: number, otherFrom: number, otherTo: number, a = 0, b = 1): Facing => ({
  a,
  b,
  from,
  to,
  otherFrom,
  otherTo,
});

describe('stretches that face each other', () => {
  it('are one place when they follow each other along both centrelines, in whatever order they come', () => {
    const parts = [facing(4, 6, 6, 4), facing(0, 2, 10, 8), facing(2, 4, 8, 6)];
    expect(groupStretches(parts, () => 0.1)).toHaveLength(1);
    expect(groupStretches([...parts].reverse(), () => 0.1)).toHaveLength(1);
  });

  it('are two places where one follows along one centreline only, as the legs of a serpentine do', () => {
    expect(groupStretches([facing(0, 2, 4, 2), facing(2, 4, 20, 18)], () => 0.1)).toHaveLength(2);
  });

  it('are one place over a bridge, and two when it is longer than asked', () => {
    const parts = [facing(0, 2, 0, 2), facing(3, 5, 2, 4)];
    expect(groupStretches(parts, () => 1)).toHaveLength(1);
    expect(groupStretches(parts, () => 0.99)).toHaveLength(2);
  });

  it('keep two pairs of centrelines apart', () => {
    expect(groupStretches([facing(0, 2, 0, 2, 0, 1), facing(0, 2, 0, 2, 0, 2)], () => 1)).toHaveLength(2);
  });

  it('reach as far on both centrelines as any of a group, whichever way the second runs', () => {
    const group = [facing(0, 5, 4, 9, 3, 7), facing(1, 3, 2, 8, 3, 7), facing(2, 3, 7, 6, 3, 7)];
    expect(extentOf(group)).toEqual({ centrelineA: 3, centrelineB: 7, fromA: 0, toA: 5, fromB: 2, toB: 9 });
    expect(rangeOf([])).toEqual([Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]);
  });

  it('count length that several cover once', () => {
    expect(
      coveredLength([
        [3, 5],
        [0, 2],
        [1, 4],
        [7, 8],
      ]),
    ).toBe(6);
    expect(coveredLength([])).toBe(0);
  });
});

describe('two sides that part', () => {
  const samples = (...pairs: readonly (readonly [number, number])[]) =>
    pairs.map(([way, apart]) => ({ way, apart }));

  it('only grow apart, however slowly', () => {
    expect(onlyGrows(samples([0, 0], [1, 0.01], [2, 0.5]), 1, 0.001)).toBe(true);
  });

  it('do not when they come back or run along each other', () => {
    expect(onlyGrows(samples([0, 0], [1, 0.3], [2, 0.2]), 1, 0.001)).toBe(false);
    expect(onlyGrows(samples([0, 0], [1, 0.3], [5, 0.3]), 1, 0.001)).toBe(false);
  });
});
