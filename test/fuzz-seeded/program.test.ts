/** A part of the fuzzing of test/fuzz that is the same every time. */
import fc from 'fast-check';
import { expect, it } from 'vitest';
import { fuzzCase } from '../fuzz/cases.ts';
import { faultsOf, runOn } from '../hostile/run-on.ts';

it('300 runs on rubbish end with a documented exit code, whole files and no stack trace', async () => {
  const codes = new Set<number>();
  await fc.assert(
    fc.asyncProperty(fuzzCase, async ({ files, argv }) => {
      const ran = await runOn(files, argv);
      codes.add(ran.code);
      expect(faultsOf(ran, argv)).toEqual([]);
    }),
    { numRuns: 300, seed: 20260504 },
  );
  // Rubbish that never gets past the door would prove nothing.
  expect([...codes].sort()).toEqual(expect.arrayContaining([0, 1, 2]));
}, 120_000);
