import fc from 'fast-check';
import { expect, test } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { derivativesOf } from '../../src/spread/first-order.ts';
import type { OutputQuantity } from '../../src/spread/outputs.ts';
import { outputValue } from '../../src/spread/outputs.ts';
import {
  type Modelled,
  modelOf,
  oneDuct,
  outputNamed,
  shareOf,
  spreadOfDrawing,
  varying,
} from './spread-of.ts';

const WINDOWS = `channels: { "*": { wall_shear: { max: 100 Pa }, residence_time: { min: 1 us, max: 1000 min }, walls: all } }
`;

function exponents(drive: string, profile = 'rectangle') {
  const sheet = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
layers: { lanes: { depth: 50 um, profile: ${profile} } }
ports: { feed: ${drive}, waste: open }
tolerances: { depth: 1 %, width: 1 %, viscosity: 1 % }
${WINDOWS}`;
  const { model, outputs, causes } = modelOf(varying(oneDuct(), sheet));
  const derivatives = derivativesOf(model);
  return (name: string, quantity: OutputQuantity): readonly number[] => {
    const output = outputs.find((one) => one.name === name && one.quantity === quantity);
    if (output === undefined) throw new Error(`no ${quantity} of ${name}`);
    const row = derivatives.of(output);
    const value = outputValue(output, model, model.nominalState);
    expect(causes.map(({ key }) => key)).toEqual(['depth:lanes', 'width', 'viscosity']);
    return Array.from(row ?? [], (d) => d / value);
  };
}

function expectNear(found: readonly number[], wanted: readonly number[]): void {
  found.forEach((value, i) => {
    expect(value).toBeCloseTo(wanted[i], 10);
  });
}

test('under a pressure, flow, shear and times of one duct go with the exact powers of depth, width and viscosity', () => {
  const of = exponents('{ pressure: 10 kPa }');
  const { byDepth: h, byWidth: w } = ductForm(200e-6, 50e-6);
  expectNear(of('lane', 'flow'), [-h.resistance, -w.resistance, -1]);
  // shear goes with the pressure gradient, which is given
  expectNear(of('lane', 'wall_shear_floor_mean'), [h.floorMean, w.floorMean, 0]);
  expectNear(of('lane', 'wall_shear_floor_peak'), [h.floorPeak, w.floorPeak, 0]);
  expectNear(of('lane', 'wall_shear_side_mean'), [h.sideMean, w.sideMean, 0]);
  expectNear(of('lane', 'wall_shear_side_peak'), [h.sidePeak, w.sidePeak, 0]);
  expectNear(of('lane', 'residence_time'), [1 + h.resistance, 1 + w.resistance, 1]);
  expectNear(of('lane', 'fastest_time'), [
    1 + h.resistance - h.peakOverMean,
    1 + w.resistance - w.peakOverMean,
    1,
  ]);
});

test('under a flow, pressure and shear of one duct go with the exact powers, and the time with its volume', () => {
  const of = exponents('{ flow: 2 uL/min }');
  const { byDepth: h, byWidth: w } = ductForm(200e-6, 50e-6);
  expectNear(of('feed', 'pressure'), [h.resistance, w.resistance, 1]);
  expectNear(of('lane', 'flow'), [0, 0, 0]);
  expectNear(of('lane', 'wall_shear_floor_mean'), [
    h.resistance + h.floorMean,
    w.resistance + w.floorMean,
    1,
  ]);
  expectNear(of('lane', 'residence_time'), [1, 1, 0]);
});

test('of a wet-etched duct the width grows with the depth, and the tolerance of the width is the mask’s', () => {
  const of = exponents('{ pressure: 10 kPa }', 'isotropic');
  const widthM = 200e-6 + (Math.PI * 50e-6) / 2;
  const { byDepth: h, byWidth: w } = ductForm(widthM, 50e-6);
  const undercut = (Math.PI * 50e-6) / 2 / widthM;
  expectNear(of('lane', 'flow'), [
    -h.resistance - undercut * w.resistance,
    (-w.resistance * 200e-6) / widthM,
    -1,
  ]);
});

const SERIES = `<g id="deep" fill="none" stroke="#000" stroke-width="0.2"><path id="first" d="M10 20 H30"/></g>
  <g id="flat" fill="none" stroke="#000" stroke-width="0.2"><path id="second" d="M30 20 H50"/></g>
  <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="50" cy="20" r="1"/>`;

const LAYERS = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
layers: { deep: { depth: 80 um }, flat: { depth: 40 um } }
`;

test('two ducts in series share the variance of the flow as the closed form says', async () => {
  const spread = await spreadOfDrawing(
    SERIES,
    `${LAYERS}ports: { feed: { pressure: 5 kPa }, waste: open }
tolerances: { depth: 2 % }
`,
    { draws: 2 },
  );
  const deep = ductForm(200e-6, 80e-6);
  const flat = ductForm(200e-6, 40e-6);
  // Q = p/(R₁ + R₂): d ln Q/d ln hᵢ = −(d ln Rᵢ/d ln hᵢ) Rᵢ/(R₁ + R₂); of the step at the middle the deeper duct loses its share
  const { network } = varying(SERIES, `${LAYERS}tolerances: { depth: 2 % }\n`);
  const [R1, R2] = [0, 1].map((r) => (r === 0 ? deep : flat).resistance * network.reachDuctMm[r]);
  const e1 = (-deep.byDepth.resistance * R1) / (R1 + R2);
  const e2 = (-flat.byDepth.resistance * R2) / (R1 + R2);
  const flow = outputNamed(spread, 'feed', 'flow');
  expect(flow.linearSd / flow.nominal).toBeCloseTo(0.01 * Math.hypot(e1, e2), 12);
  expect(shareOf(spread, flow, 'depth:flat')).toBeCloseTo(e2 ** 2 / (e1 ** 2 + e2 ** 2), 12);
});

const PARALLEL = `<g fill="none" stroke="#000" stroke-width="0.2"><g id="deep"><path id="first" d="M10 20 V10 H50 V20"/></g>
  <g id="flat"><path id="second" d="M10 20 V30 H50 V20"/></g></g>
  <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="50" cy="20" r="1"/>`;

test('of two ducts in parallel under a given flow each takes what the closed form says, and their own widths part them', async () => {
  const spread = await spreadOfDrawing(
    PARALLEL,
    `${LAYERS}ports: { feed: { flow: 3 uL/min }, waste: open }
tolerances: { depth: { deep: 2 % }, width_own: { limit: 1 % } }
channels: { "*": { flow: { min: 1 nL/min } } }
`,
    { draws: 2 },
  );
  const deep = ductForm(200e-6, 80e-6);
  const flat = ductForm(200e-6, 40e-6);
  // equal lengths: Q₁ = Q G₁/(G₁ + G₂), d ln Q₁/d ln G₁ = G₂/(G₁ + G₂) = −d ln Q₁/d ln G₂
  const other = deep.resistance / (deep.resistance + flat.resistance);
  const byDepth = -deep.byDepth.resistance * other * 0.01;
  const byFirst = (-deep.byWidth.resistance * other * 0.01) / Math.sqrt(3);
  const bySecond = (flat.byWidth.resistance * other * 0.01) / Math.sqrt(3);
  const first = outputNamed(spread, 'first', 'flow');
  const sd = Math.hypot(byDepth, byFirst, bySecond);
  expect(first.linearSd / first.nominal).toBeCloseTo(sd, 12);
  expect(shareOf(spread, first, 'width_own')).toBeCloseTo((byFirst ** 2 + bySecond ** 2) / sd ** 2, 10);
  expect(outputNamed(spread, 'waste', 'flow').linearSd).toBe(0);
});

test('one bias of the mask does not part two equal ducts', async () => {
  const spread = await spreadOfDrawing(
    PARALLEL,
    `fluid: water
depth: 50 um
ports: { feed: { flow: 3 uL/min }, waste: open }
tolerances: { width: 5 um }
channels: { "*": { flow: { min: 1 nL/min } } }
`,
    { draws: 50 },
  );
  const first = outputNamed(spread, 'first', 'flow');
  expect(first.linearSd).toBe(0);
  expect(first.sd).toBe(0);
  expect(first.shares).toBeNull();
});

/** A ladder of channels over two layers, with tubing, a head, a flow and a pressure: everything that can vary. */
function ladder(fluid: string, profile: string): string {
  return `fluid: ${fluid}
temperature: 30 degC
joints: centreline
layers: { deep: { depth: 90 um, profile: ${profile} }, flat: { depth: 50 um } }
ports:
  feed: { pressure: 4 kPa, tubing: [ { bore: 0.25 mm, length: 200 mm }, { bore: 0.3 mm, length: 100 mm, temperature: 20 degC } ] }
  dose: { flow: 1 uL/min, tubing: { bore: 0.1 mm, length: 50 mm } }
  level: { head: 30 mm }
  waste: open
channels: { "*": { wall_shear: { max: 100 Pa }, residence_time: { min: 1 us, max: 1000 min }, walls: all } }
targets:
  - { channel: rung-2, velocity: 1 mm/s, by: feed }
  - { port: dose, pressure: 1 kPa, by: feed }
tolerances:
  depth: { deep: 4 um, flat: { limit: 3 % } }
  width_bias: 2 um
  width_own: 1 %
  temperature: 1 degC
  viscosity: 2 %
  pressure: { feed: 1 %, level: 20 Pa, waste: 10 Pa }
  flow: 2 %
  bore: 10 um
`;
}

const LADDER = `<g fill="none" stroke="#000" stroke-width="0.3">
  <g id="deep"><path id="upper" d="M5 10 H50"/><path id="lower" d="M50 30 H5"/></g>
  <g id="flat" stroke-width="0.15"><path id="rung-1" d="M15 10 V30"/><path id="rung-2" d="M27 10 V30"/><path id="rung-3" d="M40 10 L35 20 V30"/></g></g>
  <circle id="feed" cx="5" cy="10" r="1"/><circle id="dose" cx="50" cy="10" r="1"/><circle id="level" cx="5" cy="30" r="1"/><circle id="waste" cx="50" cy="30" r="1"/>`;

/** Central differences of the whole nonlinear model, with one step of Richardson's. */
function differences({ model, outputs, variables }: Modelled, k: number): Float64Array {
  const step = 1e-3 * variables[k].tolerance.value;
  const at = (x: number): Float64Array => {
    const point = new Float64Array(variables.length);
    point[k] = x;
    const state = model.at(point);
    if (state === null) throw new Error('outside the model');
    return Float64Array.from(outputs, (output) => outputValue(output, model, state));
  };
  const [a, b, c, d] = [at(step), at(-step), at(2 * step), at(-2 * step)];
  return a.map((_, i) => (8 * (a[i] - b[i]) - (c[i] - d[i])) / (12 * step));
}

test.each([
  ['water', 'rectangle'],
  ['{ glycerol: 30 % by mass }', 'isotropic'],
])(
  'first order agrees with central differences to 1e-6 for every tolerance and every number (%s, %s)',
  (fluid, profile) => {
    const modelled = modelOf(varying(LADDER, ladder(fluid, profile)));
    const { model, outputs, variables } = modelled;
    expect(new Set(variables.map(({ kind }) => kind)).size).toBe(8);
    const derivatives = derivativesOf(model);
    const rows = outputs.map((output) => derivatives.of(output));
    let compared = 0;
    variables.forEach((variable, k) => {
      const wanted = differences(modelled, k);
      outputs.forEach((output, i) => {
        const row = rows[i];
        if (row === null) throw new Error(`${output.name} ${output.quantity} has no derivatives`);
        const value = outputValue(output, model, model.nominalState);
        // in terms of the tolerance: what x at its value brings, as a share of the number
        const [exact, found] = [row[k], wanted[i]].map(
          (d) => (d * variable.tolerance.value) / (Math.abs(value) || 1),
        );
        expect(
          Math.abs(exact - found),
          `${output.quantity} of ${output.name} by ${variable.kind}`,
        ).toBeLessThan(1e-6 * Math.max(Math.abs(exact), 1e-5));
        compared++;
      });
    });
    expect(compared).toBeGreaterThan(300);
  },
);

test('first order agrees with central differences on random ladders', () => {
  fc.assert(
    fc.property(
      fc.array(fc.double({ min: 6, max: 48, noNaN: true }), { minLength: 1, maxLength: 6 }),
      fc.integer({ min: 20, max: 200 }),
      fc.integer({ min: 20, max: 200 }),
      (places, deepUm, flatUm) => {
        const rungs = places.map((x, i) => `<path id="r${i}" d="M${x.toFixed(3)} 10 V30"/>`).join('');
        const drawing = `<g fill="none" stroke="#000" stroke-width="0.3"><g id="deep"><path id="upper" d="M3 10 H57"/><path id="lower" d="M3 30 H57"/></g>
          <g id="flat" stroke-width="0.1">${rungs}</g></g><circle id="feed" cx="3" cy="10" r="1"/><circle id="waste" cx="57" cy="30" r="1"/>`;
        const sheet = `fluid: water
depth: 50 um
layers: { deep: { depth: ${deepUm} um }, flat: { depth: ${flatUm} um } }
ports: { feed: { pressure: 4 kPa }, waste: open }
channels: { "r*": { flow: { max: 1 L/min } } }
tolerances: { depth: 5 %, width_own: 2 um, temperature: 1 degC }
`;
        const modelled = modelOf(varying(drawing, sheet));
        const derivatives = derivativesOf(modelled.model);
        const rows = modelled.outputs.map((output) => derivatives.of(output));
        modelled.variables.forEach((variable, k) => {
          const wanted = differences(modelled, k);
          modelled.outputs.forEach((output, i) => {
            const value = Math.abs(outputValue(output, modelled.model, modelled.model.nominalState)) || 1;
            const [exact, found] = [rows[i]?.[k] ?? Number.NaN, wanted[i]].map(
              (d) => (d * variable.tolerance.value) / value,
            );
            expect(Math.abs(exact - found)).toBeLessThan(1e-6 * Math.max(Math.abs(exact), 1e-4));
          });
        });
      },
    ),
    { seed: 7, numRuns: 15 },
  );
});

test('in a part that flows alone drive, the largest flow takes what the others leave', () => {
  const modelled = modelOf(
    varying(
      LADDER,
      `fluid: water
layers: { deep: { depth: 90 um }, flat: { depth: 50 um } }
ports: { feed: { flow: 1 uL/min }, dose: { flow: 3 uL/min }, level: { flow: -1.5 uL/min }, waste: { flow: -2.5 uL/min } }
channels: { "*": { flow: { max: 1 L/min } } }
tolerances: { flow: 2 %, depth: 5 % }
`,
    ),
  );
  const { model, outputs, variables } = modelled;
  const derivatives = derivativesOf(model);
  const portFlows = outputs.filter(({ on, quantity }) => on === 'port' && quantity === 'flow');
  expect(portFlows).toHaveLength(4);
  expect(model.nominal.portPressure.every(Number.isNaN)).toBe(true);
  variables.forEach((_, k) => {
    const wanted = differences(modelled, k);
    let sum = 0;
    outputs.forEach((output, i) => {
      const row = derivatives.of(output);
      if (output.unit === 'Pa' && output.on === 'port') {
        expect(row).toBeNull();
        return;
      }
      const scale = Math.abs(outputValue(output, model, model.nominalState));
      expect(
        Math.abs((row?.[k] ?? Number.NaN) - wanted[i]) / scale,
        `${output.quantity} of ${output.name}`,
      ).toBeLessThan(1e-7);
      if (portFlows.includes(output)) sum += row?.[k] ?? 0;
    });
    expect(Math.abs(sum)).toBeLessThan(1e-20);
  });
});
