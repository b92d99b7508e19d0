import { expect, test } from 'vitest';
import { remarks } from '../../src/report/spread-rows.ts';
import { spreadOfDrawing } from './spread-of.ts';

/** Two lanes of one length on separate pumps; how wide each comes out is its own matter, but a given flow is not. */
const LANES = [0, 1]
  .map(
    (i) =>
      `<path id="lane-${i}" d="M10 ${10 + 10 * i}H32" fill="none" stroke="#000" stroke-width="0.2"/><circle id="in-${i}" cx="10" cy="${10 + 10 * i}" r="1"/><circle id="out-${i}" cx="32" cy="${10 + 10 * i}" r="1"/>`,
  )
  .join('');
const SHEET = `depth: 0.1 mm\nports: { "in-*": { flow: 10 uL/min }, "out-*": open }\n`;

/** Share of draws in which two flows, each ±2 % (2 sigma), lie within ±e of their mean: |a − b|/(a + b) ≤ e. */
function shareWithin(even: number): number {
  // a − b is normal with sigma 0.01·√2 of the flow, a + b is 2 of it to first order; erf by its series
  const z = (even * 2) / (0.01 * Math.SQRT2) / Math.SQRT2;
  let [term, sum] = [z, z];
  for (let n = 1; n < 60; n++) {
    term *= -(z * z) / n;
    sum += term / (2 * n + 1);
  }
  return (2 / Math.sqrt(Math.PI)) * sum;
}

test.each([0.5, 1, 2])(
  'the chance of success counts draws in which lanes that are to be even within %f %% are so',
  async (percent) => {
    const spread = await spreadOfDrawing(
      LANES,
      `${SHEET}channels: { "lane-*": { even: ${percent} % } }\ntolerances: { flow: 2 % }\n`,
      { draws: 4000 },
    );
    expect(spread.yield).not.toBeNull();
    const good = spread.isGood.reduce((sum, flag) => sum + flag, 0) / spread.draws;
    expect(Math.abs(good - shareWithin(percent / 100))).toBeLessThan(0.02);
    const failures = Math.round((1 - good) * spread.draws);
    expect(spread.evenGroups).toEqual([{ key: 'lane-*', most: percent / 100, failures }]);
    // else nobody could tell why draws fail: no number that is followed does
    expect(spread.outputs.every((output) => output.failures === 0)).toBe(true);
    expect(remarks(spread).join('\n')).toMatch(
      new RegExp(
        `in [\\d.]+ % of the draws the flows of lane-\\* are not within ±${percent} % of their mean`,
      ),
    );
  },
);

test('an accepted unevenness is judged by what is accepted', async () => {
  const accept =
    'accept: [{ rule: uneven-flow, at: "lane-*", up_to: 20 %, because: "a test", by: AM, on: 2026-05-04 }]';
  const spread = await spreadOfDrawing(
    LANES,
    `${SHEET}channels: { "lane-*": { even: 0.5 % } }\ntolerances: { flow: 2 % }\n${accept}\n`,
    { draws: 500 },
  );
  expect(spread.isGood.every((flag) => flag === 1)).toBe(true);
});
