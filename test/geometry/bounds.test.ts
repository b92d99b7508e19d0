import { expect, it } from 'vitest';
import { Bounds } from '../../src/geometry/bounds.ts';
import { indexBoxes } from '../../src/geometry/box-index.ts';

it('bounds hold all places with what reaches from them, and nothing at first', () => {
  const bounds = new Bounds();
  expect(bounds.left > bounds.right && bounds.top > bounds.bottom).toBe(true);
  bounds.add(3, -1, 0.25);
  bounds.addLine([0, 2, 1, 5], 0.5);
  expect(bounds).toMatchObject({ left: -0.5, top: -1.25, right: 3.25, bottom: 5.5 });
});

it('an index finds the boxes that touch a rectangle, and one of no boxes finds nothing', () => {
  const index = indexBoxes([0, 0, 1, 1, 5, 5, 6, 7]);
  expect([index.search(1, 1, 2, 2), index.search(2, 2, 4, 4), index.neighbors(4, 4)]).toEqual([
    [0],
    [],
    [1, 0],
  ]);
  expect(index.maxY).toBe(7);
  const none = indexBoxes([]);
  expect([none.search(-9, -9, 9, 9), none.neighbors(0, 0), none.minX > none.maxX]).toEqual([[], [], true]);
});
