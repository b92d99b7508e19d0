/** RILLCHECK_FUZZ_RUNS sets how many runs, RILLCHECK_FUZZ_SEED where they start. */
import { expect, it } from 'vitest';
import { fuzz } from './program.ts';

const RUNS = Number(process.env.RILLCHECK_FUZZ_RUNS ?? 20_000);
const SEED = Number(process.env.RILLCHECK_FUZZ_SEED ?? Date.now() % 2 ** 31);

it(`${RUNS} runs on rubbish from seed ${SEED} end with a documented exit code, whole files and no stack trace`, async () => {
  const codes = await fuzz(RUNS, SEED);
  console.log('runs by exit code:', Object.fromEntries([...codes].sort(([a], [b]) => a - b)));
  expect([...codes.keys()].sort()).toEqual(expect.arrayContaining([0, 1, 2]));
});
