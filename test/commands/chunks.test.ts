import { expect, test } from 'vitest';
import { inChunks } from '../../src/commands/chunks.ts';

test('pieces go out whole and in order, each but the last as long as asked or longer', () => {
  expect([...inChunks(['ab', 'c', 'defg', '', 'h'], 3)]).toEqual(['abc', 'defg', 'h']);
  expect([...inChunks([], 3)]).toEqual([]);
  expect([...inChunks(['abc'], 3)]).toEqual(['abc']);
});
