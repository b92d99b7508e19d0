/** RILLCHECK_FUZZ_SEED sets where the cut chips start. */
import { it } from 'vitest';
import { expectCutsToBeNamed } from '../findings/cut-chip-checks.ts';

const RUNS = 2500;
const SEED = Number(process.env.RILLCHECK_FUZZ_SEED ?? Date.now() % 2 ** 31);

it(`${RUNS} nets and forks from seed ${SEED}, cut at one place, never pass in silence`, () => {
  expectCutsToBeNamed(SEED, RUNS);
});
