import { expect, test } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { makeJudge } from '../../src/spread/judge.ts';
import { drawSource } from '../../src/spread/low-discrepancy.ts';
import { outputValue } from '../../src/spread/outputs.ts';
import { drawer, emptyColumns } from '../../src/spread/sample.ts';
import { spreadOf } from '../../src/spread/spread.ts';
import { deviate } from '../../src/spread/variables.ts';
import { modelOf, oneDuct, outputNamed, spreadOfDrawing, varying } from './spread-of.ts';

const SHEET = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
layers: { lanes: { depth: 50 um } }
ports: { feed: { pressure: 10 kPa }, waste: open }
channels: { lane: { flow: { min: 10 uL/min } } }
`;

const TWO_LAYERS = `<g id="deep" fill="none" stroke="#000" stroke-width="0.2"><path id="first" d="M10 20 H30"/></g>
  <g id="flat" fill="none" stroke="#000" stroke-width="0.1"><path id="second" d="M30 20 H50"/></g>
  <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="50" cy="20" r="1"/>`;

test('every draw is the whole chip computed anew: two ducts in series against their closed form', async () => {
  const sheet = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
layers: { deep: { depth: 80 um }, flat: { depth: 40 um } }
ports: { feed: { pressure: 5 kPa }, waste: open }
tolerances: { depth: { deep: 10 %, flat: { limit: 4 um } }, width: 20 um, viscosity: 6 % }
`;
  const spread = await spreadOfDrawing(TWO_LAYERS, sheet, { draws: 200, seed: 5 });
  const { network } = varying(TWO_LAYERS, sheet);
  const { causes, variables } = modelOf(varying(TWO_LAYERS, sheet));
  expect(causes.map(({ key }) => key)).toEqual(['depth:deep', 'depth:flat', 'width', 'viscosity']);
  const { uniform } = drawSource(5);
  const { column } = outputNamed(spread, 'feed', 'flow');
  const [first, second] = network.reachDuctMm;
  for (let i = 0; i < 200; i++) {
    const [deep, flat, width, viscosity] = variables.map(({ tolerance }, k) =>
      deviate(tolerance, uniform(k, i)),
    );
    const R1 = (ductForm(200e-6 + width, 80e-6 * (1 + deep)).resistance * first) / 1000;
    const R2 = (ductForm(100e-6 + width, 40e-6 + flat).resistance * second) / 1000;
    const flow = 5000 / (1e-3 * (1 + viscosity) * (R1 + R2));
    expect(Math.abs(column[i] / flow - 1)).toBeLessThan(1e-12);
  }
});

test('a draw depends on the seed and its number alone: any split gives the same bytes, and more draws begin with the same', async () => {
  const made = varying(oneDuct(), `${SHEET}tolerances: { depth: 5 %, width_own: 2 um, pressure: 1 % }\n`);
  const whole = emptyColumns(3, 60);
  const split = emptyColumns(3, 60);
  for (const [columns, order] of [
    [whole, Array.from({ length: 60 }, (_, i) => i)],
    [split, [...Array.from({ length: 30 }, (_, i) => 59 - i), ...Array.from({ length: 30 }, (_, i) => i)]],
  ] as const) {
    const { model, outputs } = modelOf(made);
    const nominal = Float64Array.from(outputs, (output) => outputValue(output, model, model.nominalState));
    const draw = drawer(model, outputs, 3, makeJudge(model, outputs, nominal), 11);
    for (const i of order) draw(i, columns);
  }
  expect(split).toEqual(whole);
  const { tolerances } = made;
  const [short, long] = [
    await spreadOf(made, tolerances, { draws: 100, seed: 3 }),
    await spreadOf(made, tolerances, { draws: 250, seed: 3 }),
  ];
  short.outputs.forEach(({ column }, o) => {
    expect(long.outputs[o].column.subarray(0, 100)).toEqual(column);
  });
  expect(await spreadOf(made, tolerances, { draws: 100, seed: 3 })).toEqual(short);
  expect((await spreadOf(made, tolerances, { draws: 100, seed: 4 })).outputs[0].column).not.toEqual(
    short.outputs[0].column,
  );
});

test('at small tolerances the sample agrees with first order within its error, for every number', async () => {
  for (const seed of [1, 2, 3]) {
    const spread = await spreadOfDrawing(
      TWO_LAYERS,
      `fluid: water
layers: { deep: { depth: 80 um }, flat: { depth: 40 um } }
ports: { feed: { pressure: 5 kPa }, waste: open }
channels: { "*": { wall_shear: { max: 100 Pa }, walls: all } }
tolerances: { depth: 0.02 %, width_bias: 0.03 %, width_own: { limit: 0.02 % }, temperature: 0.01 degC, pressure: 0.01 % }
`,
      { draws: 4000, seed },
    );
    let compared = 0;
    for (const { nominal, mean, sd, linearSd, isLinear, name, quantity } of spread.outputs) {
      if (linearSd === 0) continue;
      compared++;
      // independent draws of a nearly normal number: sd errs by sd/√2n, the mean by sd/√n
      expect(Math.abs(sd / linearSd - 1), `${quantity} of ${name}`).toBeLessThan(3 / Math.sqrt(2 * 4000));
      expect(Math.abs(mean - nominal)).toBeLessThan((3 * sd) / Math.sqrt(4000));
      expect(isLinear).toBe(true);
    }
    expect(compared).toBeGreaterThanOrEqual(12);
  }
});

test('where the response bends, it is said to: the flow at 40 % of depth, and not at 2 %', async () => {
  const flowAt = async (percent: number) =>
    outputNamed(
      await spreadOfDrawing(oneDuct(), `${SHEET}tolerances: { depth: ${percent} % }\n`, { draws: 4000 }),
      'feed',
      'flow',
    );
  expect((await flowAt(2)).isLinear).toBe(true);
  const bent = await flowAt(40);
  expect(bent.isLinear).toBe(false);
  // E[(1 + σz)^e] ≈ 1 + e(e − 1)/2 σ²: 3σ² for plates, 2.4σ² for a duct of a quarter's aspect
  expect(bent.mean / bent.nominal).toBeGreaterThan(1 + 2.2 * 0.2 ** 2);
  expect(bent.mean / bent.nominal).toBeLessThan(1 + 3 * 0.2 ** 2);
});

test('a flow that goes with a uniform pressure has its uniform quantiles and its share inside a window', async () => {
  const spread = await spreadOfDrawing(
    oneDuct(),
    `${SHEET.replace('min: 10 uL/min', 'max: 1 L/min')}tolerances: { pressure: { limit: 10 % } }\n`,
    { draws: 5000 },
  );
  const flow = outputNamed(spread, 'lane', 'flow');
  expect(flow.mean / flow.nominal).toBeCloseTo(1, 4);
  expect(flow.sd / flow.nominal).toBeCloseTo(0.1 / Math.sqrt(3), 4);
  expect(flow.p2_5 / flow.nominal).toBeCloseTo(0.905, 3);
  expect(flow.p97_5 / flow.nominal).toBeCloseTo(1.095, 3);
});

test('the interval of the yield covers the true one at least as often as it says', async () => {
  const { network } = varying(oneDuct(), `${SHEET}tolerances: { pressure: 8 % }\n`);
  const nominal = 10_000 / resistanceOf(network.reachDuctMm[0]);
  // flow goes with the pressure, sd 4 %: it stays above one sd below nominal with Φ(1)
  const truth = 0.8413447460685429;
  const sheet = SHEET.replace('10 uL/min', `${(nominal * 0.96 * 6e10).toPrecision(15)} uL/min`);
  const made = varying(oneDuct(), `${sheet}tolerances: { pressure: 8 %, viscosity: 0.001 % }\n`);
  let covered = 0;
  const seeds = 200;
  for (let seed = 0; seed < seeds; seed++) {
    const { yield: chance } = await spreadOf(made, made.tolerances, { draws: 150, seed });
    if (chance !== null && chance.low <= truth && truth <= chance.high) covered++;
  }
  expect(covered / seeds).toBeGreaterThanOrEqual(0.95);
  const { yield: fine } = await spreadOf(made, made.tolerances, { draws: 20_000, seed: 1 });
  expect(fine?.share).toBeCloseTo(truth, 3);
});

function resistanceOf(lengthMm: number): number {
  return (1e-3 * ductForm(200e-6, 50e-6).resistance * lengthMm) / 1000;
}

test('draws with a closed duct or a temperature that no data cover count as not good and are in no mean', async () => {
  const closed = await spreadOfDrawing(oneDuct(), `${SHEET}tolerances: { depth: { limit: 60 um } }\n`, {
    draws: 1200,
  });
  // depth uniform from −10 to 110 µm
  expect(closed.outside / 1200).toBeCloseTo(1 / 12, 2);
  expect(closed.yield?.share).toBeLessThanOrEqual(1 - closed.outside / 1200);
  const flow = outputNamed(closed, 'feed', 'flow');
  expect(flow.column.filter(Number.isNaN)).toHaveLength(closed.outside);
  expect(Number.isFinite(flow.mean)).toBe(true);
  const hot = await spreadOfDrawing(
    oneDuct(),
    `${SHEET.replace(/fluid.*\n/, 'fluid: water\ntemperature: 100 degC\n')}tolerances: { temperature: { limit: 20 degC } }\n`,
    { draws: 1000 },
  );
  // water is known up to 110 °C
  expect(hot.outside / 1000).toBeCloseTo(0.25, 2);
});
