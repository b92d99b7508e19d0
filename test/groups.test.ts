import { describe, expect, it } from 'vitest';
import { firstOfGroups, itemsOf, sidesByNode, toGroups } from '../src/groups.ts';

describe('items by group', () => {
  it('lists the items of every group in ascending order, and leaves out those of group −1', () => {
    const groups = toGroups(4, [2, 0, -1, 2, 3, 0]);
    expect([0, 1, 2, 3].map((group) => [...itemsOf(groups, group)])).toEqual([[1, 5], [], [0, 3], [4]]);
    expect([...groups.first]).toEqual([0, 2, 2, 4, 5]);
  });

  it('says where each group begins, the last end included, also when there is no item', () => {
    expect([...firstOfGroups(3, [0, 0, 2])]).toEqual([0, 2, 2, 3]);
    expect([...firstOfGroups(2, [])]).toEqual([0, 0, 0]);
  });
});

it('both sides of an edge are listed at their nodes, those of an edge from a node to itself at the same', () => {
  const { first, item } = sidesByNode(3, Int32Array.of(0, 2, 1), Int32Array.of(1, 2, 0));
  expect([...first]).toEqual([0, 2, 4, 6]);
  expect([...item]).toEqual([0, 5, 1, 4, 2, 3]);
});
