import { describe, expect, it } from 'vitest';
import { compareSeed, failureText } from './compare.ts';

/** Some drawings here; thousands in `npm run fuzz` (test/fuzz/reference.test.ts). */
const FIRST = 1;
const COUNT = 90;

describe('random chips known before they were drawn', () => {
  it(`have the network that was drawn, node by node and duct by duct, in ${COUNT} drawings and three ways of each`, () => {
    const wrong = Array.from({ length: COUNT }, (_, i) => compareSeed(FIRST + i)).filter(
      ({ faults }) => faults.length > 0,
    );
    expect(wrong.map(failureText).join('\n\n')).toBe('');
  }, 120_000);
});
