import { expect, test } from 'vitest';
import { acceptedLimits } from '../../src/asked/accepted.ts';
import { reachName } from '../../src/network/names.ts';
import { ductForm } from '../../src/physics/duct.ts';
import { readTargets } from '../../src/solve/targets-wanted.ts';
import { outputValue } from '../../src/spread/outputs.ts';
import { spreadOf } from '../../src/spread/spread.ts';
import { modelOf, oneDuct, outputNamed, spreadOfDrawing, varying } from './spread-of.ts';

const FLUID = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
`;
const DUCT = `${FLUID}layers: { lanes: { depth: 50 um } }
ports: { feed: { pressure: 10 kPa }, waste: open }
`;

const TWO_LANES = `<g fill="none" stroke="#000" stroke-width="0.2"><g id="left"><path id="a" d="M10 20 V10 H50 V20"/></g>
  <g id="right"><path id="b" d="M10 20 V30 H50 V20"/></g></g>
  <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="50" cy="20" r="1"/>`;
const TWO = `${FLUID}depth: 50 um
ports: { feed: { pressure: 10 kPa }, waste: open }
channels: { "*": { flow: { max: 1 L/min } } }
`;

test('a depth is common to a layer and independent between layers', async () => {
  const spread = await spreadOfDrawing(TWO_LANES, `${TWO}tolerances: { depth: 4 % }\n`, { draws: 4000 });
  expect(spread.causes.map(({ key }) => key)).toEqual(['depth:left', 'depth:right']);
  const [a, b] = ['a', 'b'].map((name) => outputNamed(spread, name, 'flow'));
  expect(Math.abs(correlation(a.column, b.column))).toBeLessThan(0.03);
  const together = await spreadOfDrawing(TWO_LANES, `${TWO}tolerances: { width: 10 um }\n`, { draws: 500 });
  const [c, d] = ['a', 'b'].map((name) => outputNamed(together, name, 'flow'));
  expect(correlation(c.column, d.column)).toBeCloseTo(1, 12);
  const own = await spreadOfDrawing(TWO_LANES, `${TWO}tolerances: { width_own: 10 um }\n`, { draws: 4000 });
  const [e, f] = ['a', 'b'].map((name) => outputNamed(own, name, 'flow'));
  expect(Math.abs(correlation(e.column, f.column))).toBeLessThan(0.03);
  expect(own.causes.map(({ key }) => key)).toEqual(['width_own']);
});

function correlation(a: Float64Array, b: Float64Array): number {
  const centred = (column: Float64Array) => {
    const mean = column.reduce((sum, value) => sum + value, 0) / column.length;
    return column.map((value) => value - mean);
  };
  const [x, y] = [centred(a), centred(b)];
  const dot = (u: Float64Array, v: Float64Array) => u.reduce((sum, value, i) => sum + value * v[i], 0);
  return dot(x, y) / Math.sqrt(dot(x, x) * dot(y, y));
}

test('a layer’s own tolerance goes before that for all, whatever the case of its name', async () => {
  const { variables } = modelOf(
    varying(TWO_LANES, `${TWO}tolerances: { depth: { default: 4 %, Left: { limit: 1 um } } }\n`),
  );
  expect(variables.map(({ kind, tolerance }) => [kind, tolerance.value, tolerance.distribution])).toEqual([
    ['depth', 1e-6, 'uniform'],
    ['depth', 0.04, 'normal'],
  ]);
});

test('what can not move anything is named with why, and varies nothing', async () => {
  const { idle, variables } = modelOf(
    varying(
      oneDuct(),
      `${DUCT}tolerances: { depth: 5 %, temperature: 1 degC, bore: 5 %, flow: 1 %, viscosity: 0 %, pressure: { feed: 1 %, waste: 1 % } }\n`,
    ),
  );
  expect(variables.map(({ kind }) => kind)).toEqual(['depth', 'pressure']);
  expect(idle).toEqual([
    'temperature: the fluid is given by its viscosity and density',
    'viscosity: it is nought',
    'bore: no port has tubing',
    'pressure:waste: a share of nought is nought',
    'flow: no port is given a flow',
  ]);
  const mixed = modelOf(varying(oneDuct(), `${DUCT}tolerances: { depth: 5 %, flow: { feed: 1 nL/min } }\n`));
  expect(mixed.idle).toEqual(['flow:feed: the port is given a pressure']);
});

test('a pressure tolerance for all leaves open wells alone unless they are named', () => {
  const kinds = (tolerances: string) =>
    modelOf(varying(oneDuct(), `${DUCT}tolerances: ${tolerances}\n`)).causes.map(({ key }) => key);
  expect(kinds('{ pressure: 50 Pa }')).toEqual(['pressure:feed']);
  expect(kinds('{ pressure: { feed: 50 Pa, waste: 50 Pa } }')).toEqual(['pressure:feed', 'pressure:waste']);
});

test('the warmth of a chip moves a head through the density and the flow through the viscosity', async () => {
  const spread = await spreadOfDrawing(
    oneDuct(),
    `fluid: water
temperature: 60 degC
depth: 50 um
ports: { feed: { head: 100 mm }, waste: open }
tolerances: { temperature: 2 degC }
`,
    { draws: 500 },
  );
  const pressure = outputNamed(spread, 'feed', 'pressure');
  // thermal expansion of water at 60 °C is 5.2e-4 per kelvin
  expect(pressure.linearSd / pressure.nominal).toBeCloseTo(5.2e-4, 5);
  const flow = outputNamed(spread, 'feed', 'flow');
  expect(flow.linearSd / flow.nominal).toBeGreaterThan(0.01);
});

test('the nominal numbers are those of the check itself', async () => {
  const made = varying(TWO_LANES, `${TWO}tolerances: { depth: 5 % }\n`);
  const { network } = made;
  const { model, outputs } = modelOf(made);
  for (const output of outputs) {
    if (output.quantity !== 'flow' || output.on !== 'reach') continue;
    const reach = [0, 1].find((r) => reachName(network, r) === output.name) ?? -1;
    expect(outputValue(output, model, model.nominalState)).toBe(Math.abs(model.nominal.reachFlow[reach]));
  }
});

test('each number is listed once, also when it is a target and has a window', async () => {
  const spread = await spreadOfDrawing(
    oneDuct(),
    `${DUCT}channels: { lane: { wall_shear: { max: 10 Pa }, residence_time: { max: 60 s } } }
targets:
  - { channel: lane, wall_shear: 1 Pa, at: mean, by: feed }
  - { channel: lane, velocity: 1 mm/s, by: feed }
  - { port: waste, flow: -1 uL/min, by: feed }
  - { node: waste, pressure: 0 Pa, by: feed }
tolerances: { depth: 5 % }
`,
  );
  const named = spread.outputs.map(
    ({ on, name, quantity, isTarget }) => `${on} ${name} ${quantity}${isTarget ? ' *' : ''}`,
  );
  expect(new Set(named).size).toBe(named.length);
  expect(named).toEqual([
    'port feed flow',
    'port feed pressure',
    'port waste flow *',
    'port waste pressure',
    'reach lane wall_shear_floor_mean *',
    'reach lane velocity *',
    'node waste pressure *',
    'reach lane flow',
    'reach lane wall_shear_floor_peak',
    'reach lane residence_time',
  ]);
});

test('a target at a node that the network lacks is refused at its line, with the nearest name', async () => {
  const sheet = `${DUCT}targets: [{ node: wast, pressure: 0 Pa, by: feed }]
tolerances: { depth: 5 % }
`;
  await expect(spreadOfDrawing(oneDuct(), sheet)).rejects.toThrow(
    'test.run.yaml:5: targets[0]: node: the network has no node "wast"; did you mean "waste"? (the maps of the report show them)',
  );
});

test('a target on a channel of several reaches is refused at its line unless it names one, as the command pump does', async () => {
  const crossed = `<g fill="none" stroke="#000" stroke-width="0.2"><path id="lane" d="M10 20 H32"/><path id="side" d="M21 20 V32"/></g>
    <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="32" cy="20" r="1"/><circle id="drain" cx="21" cy="32" r="1"/>`;
  const sheet = (reach: string): string => `${FLUID}depth: 50 um
ports: { feed: { pressure: 10 kPa }, waste: open, drain: open }
targets: [{ channel: lane, ${reach}velocity: 1 mm/s, by: feed }]
tolerances: { depth: 5 % }
`;
  const refused =
    'test.run.yaml:5: targets[0]: channel "lane" has 2 reaches; add reach: and one of "lane:1", "lane:2"';
  await expect(spreadOfDrawing(crossed, sheet(''))).rejects.toThrow(refused);
  expect(() => readTargets(varying(crossed, sheet('')))).toThrow(refused);
  const { outputs } = await spreadOfDrawing(crossed, sheet('reach: "lane:2", '), { draws: 4 });
  expect(outputs.filter(({ isTarget }) => isTarget).map(({ name }) => name)).toEqual(['lane:2']);
});

test('the yield counts draws in which every window and limit holds, and each number counts its own failures', async () => {
  const { network } = varying(oneDuct(), `${DUCT}tolerances: { depth: 5 % }\n`);
  const nominal = modelOf(varying(oneDuct(), `${DUCT}tolerances: { depth: 5 % }\n`)).model.nominal
    .portFlow[0];
  const least = `${(nominal * 6e10 * 0.97).toPrecision(9)} uL/min`;
  const sheet = `${DUCT}channels: { lane: { flow: { min: ${least} } } }
limits: { max_pressure: 10.3 kPa }
tolerances: { depth: 5 %, pressure: 4 % }
`;
  const spread = await spreadOfDrawing(oneDuct(), sheet, { draws: 3000 });
  const [flow, pressure] = [outputNamed(spread, 'lane', 'flow'), outputNamed(spread, 'feed', 'pressure')];
  const held = flow.column.filter((q, i) => q >= nominal * 0.97 && pressure.column[i] <= 10_300).length;
  expect(spread.yield?.share).toBeCloseTo(held / 3000, 12);
  expect(flow.failures).toBe(flow.column.filter((q) => q < nominal * 0.97).length);
  // Φ(−1.5): 10.3 kPa is 1.5 of the pressure's 2 % above nominal
  expect(pressure.failures / 3000).toBeCloseTo(0.0668, 2);
  expect(network.reachCount).toBe(1);
});

test('a flow that turns round keeps a window on its magnitude', async () => {
  const bridge = `<g fill="none" stroke="#000" stroke-width="0.2"><path id="a" d="M10 10 H50"/><path id="b" d="M10 30 H50"/><path id="bridge" d="M30 10 V30"/></g>
    <circle id="in-1" cx="10" cy="10" r="1"/><circle id="in-2" cx="10" cy="30" r="1"/><circle id="out-1" cx="50" cy="10" r="1"/><circle id="out-2" cx="50" cy="30" r="1"/>`;
  const spread = await spreadOfDrawing(
    bridge,
    `${FLUID}depth: 50 um
ports: { in-1: { pressure: 1.01 kPa }, in-2: { pressure: 1 kPa }, out-1: open, out-2: open }
channels: { bridge: { flow: { max: 1 L/min } } }
tolerances: { pressure: 5 % }
`,
  );
  const flow = outputNamed(spread, 'bridge', 'flow');
  expect(flow.nominal).toBeGreaterThan(0);
  expect(flow.p2_5).toBeLessThan(0);
  expect(flow.failures).toBe(0);
  const time = outputNamed(spread, 'bridge', 'residence_time');
  // near a flow of nought the time has no end: not linear, and said so
  expect(time.isLinear).toBe(false);
});

test('limits move out as far as the run sheet accepts, so a chip that is ready is judged by the same limits', async () => {
  const chip = (accept: string) => varying(oneDuct(), `${DUCT}${accept}tolerances: { depth: 5 % }\n`);
  const entry = (rest: string) =>
    `accept: [{ rule: flow-window, at: lane, ${rest}because: "so", by: AM, on: 2026-05-04 }]\n`;
  const low = chip(entry('up_to: 1 nL/min, '));
  const [one, two] = [1e-12 / 60, 2e-12 / 60].map((value) => value);
  expect(acceptedLimits(low, 'flow-window', ['lane'], 'm³/s', two, 9 * two)).toEqual({
    min: expect.closeTo(one, 20),
    max: 9 * two,
  });
  expect(acceptedLimits(low, 'flow-window', ['other'], 'm³/s', two, null)).toEqual({ min: two, max: null });
  expect(acceptedLimits(low, 'shear-window', ['lane'], 'Pa', two, null)).toEqual({ min: two, max: null });
  expect(acceptedLimits(chip(''), 'flow-window', ['lane'], 'm³/s', two, null)).toEqual({
    min: two,
    max: null,
  });
});

test('the worst corner of a monotone chip is the worst of all corners', async () => {
  const made = varying(
    oneDuct(),
    `fluid: water
layers: { lanes: { depth: 50 um } }
ports: { feed: { flow: 10 uL/min, tubing: { bore: 0.1 mm, length: 100 mm } }, waste: open }
channels: { lane: { wall_shear: { max: 2.5 Pa } } }
tolerances: { depth: { limit: 6 % }, width: 8 um, temperature: 3 degC, flow: 2 %, bore: 1 um }
`,
  );
  const { corner, outputs } = await spreadOf(made, made.tolerances, { draws: 50, seed: 1 });
  if (corner === null) throw new Error('no corner');
  expect(outputs[corner.output]).toMatchObject({ name: 'lane', quantity: 'wall_shear_floor_peak' });
  const { model, variables, outputs: listed } = modelOf(made);
  const output = listed[corner.output];
  let worst = 0;
  for (let bits = 0; bits < 2 ** variables.length; bits++) {
    const x = Float64Array.from(
      variables,
      ({ tolerance }, k) => ((bits >> k) & 1 ? 1 : -1) * tolerance.value,
    );
    const state = model.at(x);
    if (state !== null) worst = Math.max(worst, outputValue(output, model, state));
  }
  expect(corner.value).toBe(worst);
  expect(corner.isKept).toBe(worst <= 2.5);
  // depth, width, temperature, bore and flow: the bore moves nothing here
  expect(corner.signs).toEqual([-1, -1, -1, 0, 1]);
});

test('stopped early it gives the draws made so far, and the first-order numbers even before any', async () => {
  const made = varying(oneDuct(), `${DUCT}tolerances: { depth: 5 % }\n`);
  const { tolerances } = made;
  const asked: number[] = [];
  const pace = (stopAt: number) => ({
    due: () => true,
    rest: async (done: number) => {
      asked.push(done);
      return done >= stopAt ? ('stop' as const) : ('go on' as const);
    },
  });
  const part = await spreadOf(made, tolerances, { draws: 1000, seed: 1 }, pace(40));
  expect(part).toMatchObject({ asked: 1000, draws: 40 });
  const whole = await spreadOf(made, tolerances, { draws: 40, seed: 1 });
  expect({ ...part, asked: 40 }).toEqual(whole);
  const none = await spreadOf(made, tolerances, { draws: 1000, seed: 1 }, pace(0));
  expect(none).toMatchObject({ draws: 0, yield: null });
  expect(outputNamed(none, 'feed', 'flow').mean).toBeNaN();
  expect(outputNamed(none, 'feed', 'flow').linearSd).toBeGreaterThan(0);
});

test('numbers of a part that nothing drives do not exist, and a window there leaves the yield unknown', async () => {
  const shapes = `${oneDuct()}<g id="loose" fill="none" stroke="#000" stroke-width="0.2"><path id="idle" d="M10 5 H30"/></g>
    <circle id="x" cx="10" cy="5" r="1"/><circle id="y" cx="30" cy="5" r="1"/>`;
  const sheet = `${FLUID}depth: 50 um
ports: { feed: { pressure: 1 kPa }, waste: open }
channels: { idle: { flow: { min: 1 nL/min } } }
tolerances: { depth: 5 % }
`;
  const spread = await spreadOfDrawing(shapes, sheet, { draws: 20 });
  expect(outputNamed(spread, 'idle', 'flow')).toMatchObject({
    nominal: Number.NaN,
    mean: Number.NaN,
    shares: null,
  });
  expect(spread.yield).toBeNull();
  expect(spread.unknownWindows).toEqual(['flow of idle']);
  expect(outputNamed(spread, 'feed', 'flow').sd).toBeGreaterThan(0);
});

test('a window over a share of the floor is judged by that share in every draw', async () => {
  const sheet = (
    percent: string,
  ) => `${DUCT.replace('10 kPa', '1 kPa')}channels: { lane: { wall_shear: { min: 0.9 Pa, max: 2 Pa, over: ${percent} % } } }
tolerances: { depth: 20 % }
`;
  const { nominal } = outputNamed(
    await spreadOfDrawing(oneDuct(), sheet('50')),
    'lane',
    'floor_share_inside_window',
  );
  const least = Number((nominal * 100).toPrecision(4));
  const spread = await spreadOfDrawing(oneDuct(), sheet(`${least}`), { draws: 400 });
  const share = outputNamed(spread, 'lane', 'floor_share_inside_window');
  expect(share).toMatchObject({ min: least / 100, hasWindow: true, shares: null, isLinear: null });
  expect(share.failures).toBe(share.column.filter((value) => value < least / 100).length);
  expect(share.failures).toBeGreaterThan(100);
  expect(share.failures).toBeLessThan(300);
  expect(spread.yield?.share).toBeCloseTo(1 - share.failures / 400, 12);
});

test('a channel of several reaches in series has one residence time through all of them', async () => {
  const shapes = `<g id="lanes" fill="none" stroke="#000" stroke-width="0.2"><path id="lane" d="M10 20 H50"/><path id="side" d="M30 20 V10"/></g>
    <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="50" cy="20" r="1"/><circle id="tap" cx="30" cy="10" r="1"/>`;
  const spread = await spreadOfDrawing(
    shapes,
    `${FLUID}depth: 50 um
ports: { feed: { pressure: 1 kPa }, waste: open, tap: open }
channels: { lane: { residence_time: { min: 1 ms, max: 60 s } } }
tolerances: { depth: 5 % }
`,
    { draws: 100 },
  );
  const whole = outputNamed(spread, 'lane', 'residence_time');
  expect(whole.on).toBe('channel');
  expect(outputNamed(spread, 'lane', 'fastest_time').nominal).toBeLessThan(whole.nominal);
  // volume over flow, and under a pressure flow goes as 1/R: all depths move together
  const { resistance } = ductForm(200e-6, 50e-6).byDepth;
  expect(whole.linearSd / whole.nominal).toBeCloseTo(-0.025 * (1 + resistance), 10);
});
