import { expect, it } from 'vitest';
import { byGroup, grouped, remembered, sidesByNode } from '../src/groups.ts';

it('numbers are listed by group, rising within each, and those of no group are left out', () => {
  expect(byGroup(4, Int32Array.of(2, 0, -1, 2, 3, 0))).toEqual({
    first: Int32Array.of(0, 2, 2, 4, 5),
    member: Int32Array.of(1, 5, 0, 3, 4),
  });
  expect(byGroup(0, new Int32Array(0))).toEqual({ first: Int32Array.of(0), member: new Int32Array(0) });
});

it('both sides of an edge are listed at their nodes, those of an edge from a node to itself at the same', () => {
  const { first, member } = sidesByNode(3, Int32Array.of(0, 2, 1), Int32Array.of(1, 2, 0));
  expect([...first]).toEqual([0, 2, 4, 6]);
  expect([...member]).toEqual([0, 5, 1, 4, 2, 3]);
});

it('items are grouped by their keys in order, and what is known is made but once', () => {
  expect([...grouped(['b1', 'a1', 'b2'], (text) => text[0])]).toEqual([
    ['b', ['b1', 'b2']],
    ['a', ['a1']],
  ]);
  const known = new Map([['a', 1]]);
  expect([remembered(known, 'a', () => 2), remembered(known, 'b', () => 3)]).toEqual([1, 3]);
  expect(known.get('b')).toBe(3);
});
