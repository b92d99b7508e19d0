import { expect, it } from 'vitest';
import { grouped, remembered } from '../src/by-key.ts';

it('items are grouped by their keys in order, and what is known is made but once', () => {
  expect([...grouped(['b1', 'a1', 'b2'], (text) => text[0])]).toEqual([
    ['b', ['b1', 'b2']],
    ['a', ['a1']],
  ]);
  const known = new Map([['a', 1]]);
  expect([remembered(known, 'a', () => 2), remembered(known, 'b', () => 3)]).toEqual([1, 3]);
  expect(known.get('b')).toBe(3);
});
