/** A part of the fuzzing of test/fuzz that is the same every time. */
import { expect, it } from 'vitest';
import { fuzz } from '../fuzz/program.ts';

it('300 runs on rubbish end with a documented exit code, whole files and no stack trace', async () => {
  const codes = await fuzz(300, 20260504);
  // Rubbish that never gets past the door would prove nothing.
  expect([...codes.keys()].sort()).toEqual(expect.arrayContaining([0, 1, 2]));
}, 120_000);
