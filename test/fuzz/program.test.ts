/**
 * 20 000 runs of the whole program on rubbish: RILLCHECK_FUZZ_RUNS sets another number, RILLCHECK_FUZZ_SEED another start.
 * What fails is shrunk and printed with its seed.
 */
import fc from 'fast-check';
import { expect, it } from 'vitest';
import { faultsOf, runOn } from '../hostile/run-on.ts';
import { fuzzCase } from './cases.ts';

const RUNS = Number(process.env.RILLCHECK_FUZZ_RUNS ?? 20_000);
const SEED = Number(process.env.RILLCHECK_FUZZ_SEED ?? Date.now() % 2 ** 31);

it(`${RUNS} runs from seed ${SEED} end with a documented exit code, whole files and no stack trace`, async () => {
  const codes = new Map<number, number>();
  await fc.assert(
    fc.asyncProperty(fuzzCase, async ({ files, argv }) => {
      const ran = await runOn(files, argv);
      codes.set(ran.code, (codes.get(ran.code) ?? 0) + 1);
      expect(faultsOf(ran, argv)).toEqual([]);
    }),
    { numRuns: RUNS, seed: SEED, interruptAfterTimeLimit: 3_000_000, markInterruptAsFailure: true },
  );
  console.log('runs by exit code:', Object.fromEntries([...codes].sort(([a], [b]) => a - b)));
});
