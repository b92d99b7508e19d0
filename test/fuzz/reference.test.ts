/** RILLCHECK_FUZZ_CHIPS sets how many chips, RILLCHECK_FUZZ_SEED where they start: the seed of one chip replays it. */
import { expect, it } from 'vitest';
import { type Comparison, compareSeed, failureText } from '../reference/compare.ts';

const CHIPS = Number(process.env.RILLCHECK_FUZZ_CHIPS ?? 5000);
const SEED = Number(process.env.RILLCHECK_FUZZ_SEED ?? Date.now() % 2 ** 31);

it(`${CHIPS} random chips from seed ${SEED} have the network that was drawn`, () => {
  const wrong: Comparison[] = [];
  let fromSecond = 0;
  let exactly = 0;
  let fromPlan = 0;
  let flowFromPlan = 0;
  for (let seed = SEED; seed < SEED + CHIPS; seed++) {
    const one = compareSeed(seed);
    if (one.faults.length > 0) wrong.push(one);
    else {
      fromSecond = Math.max(fromSecond, one.worstFromSecond);
      if (one.isExact) exactly = Math.max(exactly, one.worstFromSecond);
      fromPlan = Math.max(fromPlan, one.worstFromPlan);
      flowFromPlan = Math.max(flowFromPlan, one.worstFlowFromPlan);
    }
  }
  console.log(
    `worst flow or pressure off the second implementation: ${fromSecond.toExponential(1)}, where all is drawn exactly ${exactly.toExponential(1)}\n` +
      `worst length off the known chip: ${fromPlan.toFixed(2)} of what slack, rounding and curves explain; worst flow ${flowFromPlan.toExponential(1)} of the largest`,
  );
  console.log(`wrong seeds: ${wrong.map(({ seed }) => seed).join(' ') || 'none'}`);
  expect(wrong.slice(0, 5).map(failureText).join('\n\n')).toBe('');
});
