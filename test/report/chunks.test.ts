import { expect, test } from 'vitest';
import { inChunks } from '../../src/report/chunks.ts';

test('pieces come out whole and in order, in chunks of 64 kB or a little more', () => {
  const pieces = Array.from({ length: 40 }, (_, i) => String(i % 10).repeat(5000));
  const chunks = [...inChunks(pieces)];
  expect(chunks.join('')).toBe(pieces.join(''));
  expect(chunks.slice(0, -1).every(({ length }) => length >= 65_536 && length < 71_000)).toBe(true);
  expect(chunks.length).toBe(3);
});
