/** RILLCHECK_FUZZ_RUNS sets how many drawings of each kind, RILLCHECK_FUZZ_SEED where they start. */
import { expect, it } from 'vitest';
import { pillarsCounted, saidOfExport } from '../chip/check-exports.ts';

const RUNS = Math.min(5_000, Number(process.env.RILLCHECK_FUZZ_RUNS ?? 5_000));
const SEED = Number(process.env.RILLCHECK_FUZZ_SEED ?? Date.now() % 2 ** 31);

it(`${RUNS} chips exported as areas from seed ${SEED} are held for that alone`, () => {
  for (let seed = SEED; seed < SEED + RUNS; seed++) {
    expect(saidOfExport(seed), `seed ${seed}`).toBe('hold: filled-outline');
  }
});

it(`the pillars of ${RUNS} chips from seed ${SEED} are counted in their channels`, () => {
  for (let seed = SEED; seed < SEED + RUNS; seed++) {
    const { counted, drawn, blockers } = pillarsCounted(seed);
    expect({ counted, blockers }, `seed ${seed}`).toEqual({ counted: drawn, blockers: [] });
  }
});
