/** Results that a second way to them must give again, on thousands of random chips. RILLCHECK_FUZZ_RUNS and RILLCHECK_FUZZ_SEED as in program.test.ts. */
import { expect, it } from 'vitest';
import { spreadOf } from '../../src/spread/spread.ts';
import { expectClose, randomGrid, sharesAnew, sharesOf } from '../solve/joint-shares-anew.ts';
import { goodDraws } from '../spread/judged-anew.ts';
import { randomLadder } from '../spread/random-ladder.ts';
import { varying } from '../spread/spread-of.ts';

const RUNS = Math.ceil(Number(process.env.RILLCHECK_FUZZ_RUNS ?? 20_000) / 10);
const SEED = Number(process.env.RILLCHECK_FUZZ_SEED ?? Date.now() % 2 ** 31);
const DRAWS = 30;

it(`every draw of ${RUNS} spreads from seed ${SEED} is judged as a chip of its own would be`, async () => {
  for (let seed = SEED; seed < SEED + RUNS; seed++) {
    const { shapes, sheet } = randomLadder(seed);
    const made = varying(shapes, sheet);
    const { isGood } = await spreadOf(made, made.tolerances, { draws: DRAWS, seed: seed % 1000 });
    expect([...isGood], `seed ${seed}\n${sheet}\n${shapes}`).toEqual(goodDraws(made, DRAWS, seed % 1000));
  }
});

it(`joint shares of ${RUNS} random chips from seed ${SEED} are those of finite differences`, () => {
  for (let seed = SEED; seed < SEED + RUNS; seed++) {
    const grid = randomGrid(seed);
    const wanted = sharesAnew(grid, 1e-3);
    const all = sharesOf(grid);
    for (const name of ['portFlow', 'portPressure', 'reachFlow'] as const)
      expectClose(all[name], wanted[name], 1e-4, `seed ${seed} ${name}`);
  }
});
