import { describe, expect, test } from 'vitest';
import { spreadOf } from '../../src/spread/spread.ts';
import { goodDraws } from './judged-anew.ts';
import { randomLadder } from './random-ladder.ts';
import { oneDuct, outputNamed, spreadOfDrawing, varying } from './spread-of.ts';

const SHEET = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
depth: 50 um
ports: { feed: { pressure: 10 kPa }, waste: open }
tolerances: { depth: 6 % }
`;

describe('everything that is asked is judged in every draw', () => {
  test('draw by draw as if each were a chip of its own under the rules of a check: 60 random chips', async () => {
    let mixed = 0;
    for (let seed = 1; seed <= 60; seed++) {
      const { shapes, sheet } = randomLadder(seed);
      const made = varying(shapes, sheet);
      const spread = await spreadOf(made, made.tolerances, { draws: 24, seed });
      const good = goodDraws(made, 24, seed);
      expect([...spread.isGood], `seed ${seed}\n${sheet}\n${shapes}`).toEqual(good);
      if (good.includes(0) && good.includes(1)) mixed++;
    }
    // what is always or never kept proves little
    expect(mixed).toBeGreaterThan(12);
  });

  const nominal = async (quantity: 'flow' | 'wall_shear_floor_mean' | 'residence_time'): Promise<number> => {
    const window =
      'channels: { lane: { flow: { min: 0 uL/min }, wall_shear: { min: 0 Pa }, residence_time: { max: 9 min } } }\n';
    const spread = await spreadOfDrawing(oneDuct(), `${SHEET}${window}`, { draws: 2 });
    return outputNamed(spread, 'lane', quantity).nominal;
  };

  test.each([
    ['flow', 'flow', 'm^3/s', 'flow: 1 uL/min', 'min'],
    ['wall_shear', 'wall_shear_floor_mean', 'Pa', 'wall_shear: 1 Pa', 'min'],
    ['residence_time', 'residence_time', 's', 'residence_time: 1 s', 'max'],
  ] as const)(
    'a target on a channel leaves its window of %s in force',
    async (key, quantity, unit, target, side) => {
      const limit = await nominal(quantity);
      const text = quantity === 'flow' ? `${limit * 6e10} uL/min` : `${limit} ${unit}`;
      const spread = await spreadOfDrawing(
        oneDuct(),
        `${SHEET}channels: { lane: { ${key}: { ${side}: ${text} } } }\ntargets: [ { channel: lane, ${target}, by: feed } ]\n`,
      );
      const output = outputNamed(spread, 'lane', quantity);
      expect(output).toMatchObject({ isTarget: true, hasWindow: true });
      expect(output[side]).toBeCloseTo(limit, 15);
      expect(spread.yield?.share).toBeGreaterThan(0.45);
      expect(spread.yield?.share).toBeLessThan(0.55);
      expect(output.failures).toBe(1000 - 1000 * (spread.yield?.share ?? 0));
    },
  );

  test('where a draw turns the flow of a reach round, its window is asked of the reaches that fluid then passes', async () => {
    const shapes = `<g id="lanes" fill="none" stroke="#000" stroke-width="0.2"><path id="lane" d="M10 20 H50"/><path id="side" d="M30 20 V10"/></g>
      <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="50" cy="20" r="1"/><circle id="tap" cx="30" cy="10" r="1"/>`;
    let regrouped = 0;
    for (const waste of [300, 305, 310, 330, 335, 340]) {
      const sheet = `fluid: water
depth: 50 um
ports: { feed: { pressure: 1 kPa }, waste: { pressure: ${waste} Pa }, tap: open }
channels: { lane: { residence_time: { min: 2 s } } }
tolerances: { pressure: 5 % }
`;
      const made = varying(shapes, sheet);
      const spread = await spreadOf(made, made.tolerances, { draws: 60, seed: 1 });
      expect([...spread.isGood], `${waste} Pa`).toEqual(goodDraws(made, 60, 1));
      const fastest = spread.outputs.find(
        ({ on, quantity }) => on === 'channel' && quantity === 'fastest_time',
      );
      fastest?.column.forEach((value, draw) => {
        if (value >= 2 && spread.isGood[draw] === 0) regrouped++;
      });
    }
    expect(regrouped).toBeGreaterThan(10);
  });

  test('a window as a target is judged beside that of the channel, and a limit of the pump beside a target on its port', async () => {
    const flow = (await nominal('flow')) * 6e10;
    const chanceOf = async (asked: string): Promise<number> =>
      (await spreadOfDrawing(oneDuct(), `${SHEET}${asked}`)).yield?.share ?? Number.NaN;
    const most = `channels: { lane: { flow: { max: ${1.02 * flow} uL/min } } }\n`;
    const least = `targets: [ { channel: lane, flow: { min: ${0.98 * flow} uL/min }, by: feed } ]\n`;
    const [below, above, both] = [await chanceOf(most), await chanceOf(least), await chanceOf(most + least)];
    expect(below).toBeGreaterThan(0.5);
    expect(above).toBeGreaterThan(0.5);
    expect(both).toBeCloseTo(below + above - 1, 12);
    const pump = `pump_limits: { feed: { max_flow: ${1.02 * flow} uL/min } }\n`;
    const port = `targets: [ { port: feed, flow: { min: ${0.98 * flow} uL/min }, by: feed } ]\n`;
    expect(await chanceOf(pump + port)).toBe(both);
  });

  test('a target asks for a flow with its sign, from → to, and a window of the channel for its size', async () => {
    const drawnBackwards = oneDuct().replace('M10 20 H32', 'M32 20 H10');
    const flow = (await nominal('flow')) * 6e10;
    const least = `{ min: ${0.5 * flow} uL/min }`;
    const chanceOf = async (asked: string): Promise<number | undefined> =>
      (await spreadOfDrawing(drawnBackwards, `${SHEET}${asked}`, { draws: 50 })).yield?.share;
    expect(await chanceOf(`channels: { lane: { flow: ${least} } }\n`)).toBe(1);
    expect(await chanceOf(`targets: [ { channel: lane, flow: ${least}, by: feed } ]\n`)).toBe(0);
    expect(
      await chanceOf(`targets: [ { channel: lane, flow: { max: ${-0.5 * flow} uL/min }, by: feed } ]\n`),
    ).toBe(1);
  });
});
