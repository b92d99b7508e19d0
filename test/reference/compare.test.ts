import { describe, expect, it } from 'vitest';
import { compareSeed, failureText } from './compare.ts';

/** Some drawings here; thousands in `npm run fuzz` (test/fuzz/reference.test.ts). */
const FIRST = 1;
const COUNT = 40;

/** Seeds that once told the program, the second implementation or the known chip apart. */
const ONCE_WRONG = [
  // Strokes end to end on one line: the program lost up to 0.4 µm.
  10537, 4560, 1212,
  // A branch drawn as several strokes, its first bit left out: the program led it nowhere.
  3057,
  // Seams, wells, ends carried on aside or along a centreline, walls along a piece: the second implementation.
  10485,
  13144, 11845, 13273, 14489, 2648, 3707, 12278, 3792, 2181, 15866,
  // Nodes of two ducts close to another: the comparison.
  11282, 11447, 12321, 14421, 4269,
  // A hairline loop round the middle of a port, which is an outline by the rules: the drawing.
  11328, 23363,
];

describe('random chips known before they were drawn', () => {
  const seeds = [...Array.from({ length: COUNT }, (_, i) => FIRST + i), ...ONCE_WRONG];

  it(`have the network that was drawn, node by node and duct by duct, in ${seeds.length} drawings and three ways of each`, () => {
    const wrong = seeds.map(compareSeed).filter(({ faults }) => faults.length > 0);
    expect(wrong.map(failureText).join('\n\n')).toBe('');
  }, 120_000);
});
