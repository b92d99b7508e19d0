import { describe, expect, it } from 'vitest';
import { parseDocument } from 'yaml';
import { InputError } from '../../src/errors.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { SHEET_KEYS } from '../../src/runsheet/schema.ts';
import { lineAt } from '../../src/runsheet/tree.ts';
import { CONTRACT_SHEET, FULL_SHEET } from './full-sheet.ts';

const parse = (text: string) => parseRunSheet(text, 'c.run.yaml');

describe('parseRunSheet', () => {
  const sheet = parse(FULL_SHEET);

  it('reads every key of a full sheet into SI values', () => {
    expect(sheet).toMatchObject({
      file: 'c.run.yaml',
      title: 'Four-lane culture chip',
      drawing: { number: 'C-114', revision: 'B', drawnBy: 'AM' },
      unitMm: 1,
      sizeMm: [76, 26],
      outline: 'chip-edge',
      portsLayer: 'holes',
      ignore: ['dim-*', 'marks'],
      joinWithinMm: 1e-3,
      joints: 'resolved',
      process: 'cast elastomer',
      fluid: { kind: 'water' },
      temperatureK: 310.15,
      depthM: 50e-6,
      show: { flow: 'uL/min', pressure: 'mbar', wall_shear: 'dyn/cm^2' },
    });
    expect(sheet.text).toBe(FULL_SHEET);
  });

  it('reads layers, ports and tubing', () => {
    expect(sheet.layers.lanes).toMatchObject({
      kind: 'etched',
      depthM: 120e-6,
      profile: 'rectangle',
      plane: null,
    });
    expect(sheet.layers.upper).toMatchObject({ kind: 'etched', depthM: 80e-6, profile: null, plane: 'top' });
    expect(sheet.layers.control).toMatchObject({ kind: 'ignore' });
    expect(sheet.ports.feed).toMatchObject({
      condition: { kind: 'pressure', pressurePa: 12000 },
      tubing: [{ boreM: 0.5e-3, lengthM: 0.3, temperatureK: null }],
      expect: null,
    });
    expect(sheet.ports.dose!.tubing).toEqual([
      { boreM: 0.5e-3, lengthM: 0.3, temperatureK: 295.15 },
      { boreM: 50e-6, lengthM: 0.08, temperatureK: null },
    ]);
    expect(sheet.ports.dose!.condition).toEqual({ kind: 'flow', flowM3s: 2 / 6e10 });
    expect(sheet.ports.vent!.condition).toEqual({ kind: 'head', headM: 0.04 });
    expect(sheet.ports.waste).toMatchObject({
      condition: { kind: 'pressure', pressurePa: 0 },
      expect: 'out',
    });
    expect(sheet.ports.drain!.condition).toEqual({ kind: 'open' });
    expect(sheet.ports.spare!.condition).toEqual({ kind: 'sealed' });
  });

  it('reads windows, targets, pump limits, limits, tolerances and accepted findings', () => {
    expect(sheet.channels['lane-*']).toMatchObject({
      wallShear: { min: 0.05, max: 0.5, over: 0.8 },
      residenceTime: { min: 1, max: 60 },
      flow: { min: 1 / 6e10, max: null },
      walls: 'floor',
    });
    expect(sheet.targets).toMatchObject([
      {
        on: 'channel',
        name: 'lane-1',
        reach: null,
        quantity: 'wall_shear',
        at: 'mean',
        value: 0.3,
        by: 'feed',
      },
      { on: 'port', name: 'waste', quantity: 'flow', value: -5 / 6e10, by: 'dose' },
    ]);
    expect(sheet.pumpLimits.feed).toMatchObject({
      maxPressurePa: 200e3,
      minPressurePa: null,
      maxFlowM3s: 1e-6 / 60,
    });
    expect(sheet.limits).toEqual({
      minWidthM: 20e-6,
      minWallM: 40e-6,
      maxWidthToDepth: 10,
      maxDepthToWidth: 2,
      edgeMarginM: 1e-3,
      portGapM: 1e-3,
      portDiameterM: [0.3e-3, 8e-3],
      portGridM: 1.5e-3,
      maxPressurePa: 150e3,
      minPressurePa: -30e3,
      maxReynolds: 1000,
      minCornerAngleRad: (30 * Math.PI) / 180,
      stiffnessPa: 1.5e6,
    });
    expect(sheet.tolerances).toMatchObject({
      depth: { kind: 'relative', value: 0.05, distribution: 'normal' },
      width: { kind: 'absolute', value: 2e-6, distribution: 'normal' },
      temperature: { kind: 'absolute', value: 1, distribution: 'normal' },
      viscosity: null,
    });
    expect(sheet.accept).toMatchObject([
      {
        rule: 'thin-wall',
        at: 'lane-1',
        upTo: 35e-6,
        because: 'measured on the last batch',
        by: 'AM',
        on: '2026-05-04',
      },
    ]);
  });

  it('knows the line of every key', () => {
    const lines = FULL_SHEET.split('\n');
    expect(lines[lineAt(sheet.tree, ['ports', 'dose', 'flow'])! - 1]).toContain('dose:');
    expect(lines[lineAt(sheet.tree, ['targets', 1])! - 1]).toContain('port: waste');
    expect(lines[sheet.ports.vent!.line - 1]).toContain('vent:');
    expect(lines[lineAt(sheet.tree, ['cases', 'culture'])! - 1]).toContain('culture:');
    expect(lineAt(sheet.tree, ['ports', 'nobody'])).toBeNull();
  });

  it('takes an empty file, and a section with nothing in it, as not written', () => {
    for (const text of [
      '',
      '\n# nothing yet\n',
      'ports:\n  # feed: { pressure: 12 kPa }\ndepth:\n',
      '\ufeff',
    ]) {
      expect(parse(text)).toMatchObject({ title: null, depthM: null, ports: {}, channels: {}, cases: [] });
    }
  });

  it('reads names as text', () => {
    expect(
      Object.keys(parse('ports: { 007: open, no: sealed, 1e3: open, null: open }').ports).sort(),
    ).toEqual(['007', '1e3', 'no', 'null']);
    expect(parse('title: 007').title).toBe('007');
  });

  it('gives records in which only written names are found', () => {
    const { ports } = parse('ports: { feed: open }');
    expect('toString' in ports).toBe(false);
  });

  it('reads a port without a condition as unset, and keeps what is said about it', () => {
    expect(
      parse('ports: { feed: { expect: in, tubing: { bore: 0.5 mm, length: 1 m } } }').ports.feed,
    ).toMatchObject({
      condition: { kind: 'unset' },
      expect: 'in',
      tubing: [{ boreM: 0.5e-3 }],
    });
  });

  it('reads fluids by viscosity and density, and glycerol by mass or volume', () => {
    expect(parse('fluid: { viscosity: 0.94 mPa s, density: 1003 kg/m^3 }').fluid).toEqual({
      kind: 'custom',
      viscosityPaS: 0.94e-3,
      densityKgM3: 1003,
    });
    expect(parse('fluid: { glycerol: 30 % by mass }').fluid).toEqual({
      kind: 'glycerol',
      share: 0.3,
      by: 'mass',
    });
    expect(parse('fluid: { glycerol: 20% by volume }').fluid).toEqual({
      kind: 'glycerol',
      share: 0.2,
      by: 'volume',
    });
  });

  it('reads targets of every kind, also windows', () => {
    const text = `targets:
  - { channel: a, flow: { min: 1 uL/min, max: 2 uL/min }, by: p }
  - { channel: a, reach: a/2, velocity: -1 mm/s, by: p }
  - { channel: a, residence_time: 10 s, by: p }
  - { channel: a, wall_shear: { max: 0.5 Pa }, at: peak, by: p }
  - { port: q, pressure: 2 kPa, by: p }
  - { node: junction-1, pressure: 2 kPa, by: p }`;
    expect(parse(text).targets).toMatchObject([
      { quantity: 'flow', value: { min: 1 / 6e10, max: 2 / 6e10 } },
      { quantity: 'velocity', reach: 'a/2', value: -1e-3 },
      { quantity: 'residence_time', value: 10 },
      { quantity: 'wall_shear', at: 'peak', value: { min: null, max: 0.5 } },
      { on: 'port', name: 'q', quantity: 'pressure', value: 2000 },
      { on: 'node', name: 'junction-1', quantity: 'pressure' },
    ]);
  });

  it('reads what is computed only later: what fluids carry, how they meet, switching, chambers and pillars', () => {
    expect(sheet.solutes.drug).toEqual({ diffusionM2s: 5e-10, unit: 'uM' });
    expect(sheet.ports.carrier).toMatchObject({ concentration: { drug: 10 }, tubing: [] });
    expect(sheet.ports.feed!.concentration).toBeNull();
    expect(sheet.channels.mixer).toMatchObject({
      concentration: { drug: { min: 2, max: 4, over: 0.95 } },
      mixing: { drug: 0.9 },
      even: null,
    });
    expect(sheet.channels['branch-*']!.even).toBe(0.05);
    expect(sheet.junctions).toBe('laminar');
    expect(sheet.switch).toMatchObject({ from: ['feed'], reach: 'lane-*', to: 0.95, withinS: 120 });
    expect([sheet.fields, sheet.pillars]).toEqual([['chamber'], ['posts']]);
    expect(sheet.concentrationTargets).toMatchObject([
      {
        index: 2,
        on: 'port',
        name: 'out-3',
        quantity: 'concentration',
        solute: 'drug',
        value: 3,
        by: 'dose',
      },
    ]);
    expect(sheet.targets.map(({ index }) => index)).toEqual([0, 1]);
    expect(parse('joints: computed').joints).toBe('computed');
  });

  it('reads the example of the contract word for word', () => {
    expect(() => parse(CONTRACT_SHEET)).not.toThrow();
    expect(parse(CONTRACT_SHEET).cases.map(({ name }) => name)).toEqual(['seed', 'culture']);
  });

  it('reads a full sheet without any one of its parts, and without any part of these', () => {
    const whole = parseDocument(FULL_SHEET, { schema: 'failsafe' });
    const plain: Readonly<Record<string, unknown>> = whole.toJS();
    expect(Object.keys(plain).sort()).toEqual([...SHEET_KEYS].sort());
    const parts = Object.entries(plain).flatMap(([key, value]): (readonly (string | number)[])[] => {
      // a size has two sides, and what is said of a solute needs the solute
      if (key === 'solutes' || typeof value !== 'object' || value === null)
        return key === 'solutes' ? [] : [[key]];
      const inner = key === 'size' ? [] : Object.keys(value);
      return [[key], ...inner.map((name) => [key, Array.isArray(value) ? Number(name) : name])];
    });
    expect(parts.length).toBeGreaterThan(60);
    for (const path of parts) {
      const less = whole.clone();
      less.deleteIn(path);
      expect(() => parse(String(less)), path.join('.')).not.toThrow();
    }
  });

  it('reads tolerances as shares, values, hard limits, and by name with a default', () => {
    const text = `tolerances:
  depth: { lanes: 5 %, upper: { limit: 3 um }, default: 4 % }
  width_bias: 2 um
  width_own: { limit: 1 um }
  viscosity: 3 %
  pressure: { feed: 1 % }
  flow: { limit: 2 % }
  temperature: 1.8 degF
  bore: 10 um`;
    const { tolerances } = parse(text);
    expect(tolerances).toMatchObject({
      depth: { kind: 'relative', value: 0.04, distribution: 'normal' },
      depthByLayer: {
        lanes: { kind: 'relative', value: 0.05, distribution: 'normal' },
        upper: { kind: 'absolute', value: 3e-6, distribution: 'uniform' },
      },
      width: null,
      widthBias: { kind: 'absolute', value: 2e-6, distribution: 'normal' },
      widthOwn: { kind: 'absolute', value: 1e-6, distribution: 'uniform' },
      pressure: null,
      pressureByPort: { feed: { kind: 'relative', value: 0.01 } },
      flow: { kind: 'relative', value: 0.02, distribution: 'uniform' },
      bore: { kind: 'absolute', value: 1e-5 },
    });
    expect(tolerances!.temperature!.value).toBeCloseTo(1, 12);
    expect(Object.keys(tolerances!.depthByLayer)).toEqual(['lanes', 'upper']);
  });

  it('reads ceilings in the quantity of each rule', () => {
    const entry = (rule: string, upTo: string) =>
      parse(`accept: [{ rule: ${rule}, at: x, up_to: ${upTo}, because: b, by: c, on: 2026-05-04 }]`)
        .accept[0]!.upTo;
    expect(entry('roof-span', '12')).toBe(12);
    expect(entry('soft-walls', '8 %')).toBe(0.08);
    expect(entry('over-pressure', '160 kPa')).toBe(160e3);
    expect(entry('shear-window', '6 dyn/cm^2')).toBeCloseTo(0.6, 12);
    expect(entry('sharp-corner', '20 deg')).toBeCloseTo(Math.PI / 9, 12);
    expect(
      parse('accept: [{ rule: open-end, at: x, because: b, by: c, on: 2026-05-04 }]').accept[0]!.upTo,
    ).toBeNull();
  });
});

/** Text of a sheet → the whole message after "c.run.yaml:". */
const WRONG: readonly (readonly [string, string])[] = [
  [
    'ports:\n  feed:\n    pressure: 12',
    '3: ports.feed.pressure: "12" has no unit; write for example "12 kPa"',
  ],
  [
    'ports: { feed: { pressure: 12 um } }',
    '1: ports.feed.pressure: "12 um" is a length; a pressure is needed; write for example "12 kPa"',
  ],
  ['title: x\ndpeth: 50 um', '2: dpeth: unknown key; did you mean "depth"?'],
  ['ports: { feed: { presure: 12 kPa } }', '1: ports.feed.presure: unknown key; did you mean "pressure"?'],
  ['drawing: { nummer: 3, colour: red }', '1: drawing.nummer: unknown key; did you mean "number"?'],
  ['drawing: { colour: red }', '1: drawing.colour: unknown key; known here: number, revision, drawn_by'],
  ['dpeth:', '1: dpeth: unknown key; did you mean "depth"?'],
  [
    'limits: { toString: 3 }',
    '1: limits.toString: unknown key; known here: min_width, min_wall, max_width_to_depth, max_depth_to_width, edge_margin, port_gap, port_diameter, port_grid, max_pressure, min_pressure, max_reynolds, min_corner_angle, stiffness',
  ],
  ['depth: -50 um', '1: depth: "-50 um" is below 0; a depth must be above 0; write for example "50 um"'],
  ['depth: 0 um', '1: depth: "0 um" is zero; a depth must be above 0; write for example "50 um"'],
  ['depth: NaN um', '1: depth: "NaN um" is not a number with a unit; write for example "50 um"'],
  [
    'layers: { lanes: { depth: 50,5 um } }',
    '1: layers.lanes.depth: "50,5 um" has a comma; decimals take a point; write for example "50.5 um"',
  ],
  [
    'limits:\n  min_width: 0 um',
    '2: limits.min_width: "0 um" is zero; a width must be above 0; write for example "20 um"',
  ],
  [
    'limits: { max_width_to_depth: 10 um }',
    '1: limits.max_width_to_depth: "10 um" has a unit; this is a plain ratio; write for example "10"',
  ],
  [
    'limits: { port_diameter: [3 mm, 1 mm] }',
    '1: limits.port_diameter: has the larger value first; write for example [0.3 mm, 8 mm]',
  ],
  [
    'limits: { min_corner_angle: 200 deg }',
    '1: limits.min_corner_angle: "200 deg" is not between 0 deg and 180 deg; write for example "30 deg"',
  ],
  ['size: [76 mm]', '1: size: has 1 values and needs 2; write for example [76 mm, 26 mm]'],
  ['size: 76 mm', '1: size: is one text; write for example [76 mm, 26 mm]'],
  ['depth: [50 um]', '1: depth: is a list; write for example "50 um"'],
  ['depth: { lanes: 50 um }', '1: depth: is a map of keys and values; write for example "50 um"'],
  ['ports: [feed]', '1: ports: is a list; write for example { feed: { pressure: 12 kPa } }'],
  ['layers: [ignore]', '1: layers: is a list; write for example { lanes: { depth: 120 um } }'],
  ['ports: { feed: opne }', '1: ports.feed: "opne" is not one of open, sealed; did you mean "open"?'],
  [
    'ports: { feed: { pressure: 1 kPa, flow: 1 uL/min } }',
    '1: ports.feed: has pressure and flow; a port has one of pressure, flow and head; write for example { pressure: 12 kPa }',
  ],
  ['ports: { feed: { pressure: } }', '1: ports.feed.pressure: is empty; write for example "12 kPa"'],
  [
    'ports: { feed: { tubing: { bore: 1 mm } } }',
    '1: ports.feed.tubing: needs the key length; write for example { bore: 0.5 mm, length: 300 mm }',
  ],
  [
    'ports: { feed: { tubing: [{ bore: 1 mm, lenght: 3 mm }] } }',
    '1: ports.feed.tubing[0].lenght: unknown key; did you mean "length"?',
  ],
  [
    'ports: { feed: { tubing: { bore: 0 mm, length: 3 mm } } }',
    '1: ports.feed.tubing.bore: "0 mm" is zero; a bore must be above 0; write for example "0.5 mm"',
  ],
  [
    'channels: { a: { flow: { min: 3 uL/min, max: 1 uL/min } } }',
    '1: channels.a.flow: has min above max; swap them',
  ],
  [
    'channels: { a: { wall_shear: { over: 80 % } } }',
    '1: channels.a.wall_shear: needs min, max or both; write for example { min: 0.05 Pa, max: 0.5 Pa }',
  ],
  [
    'channels: { a: { wall_shear: { min: 1 Pa, over: 120 % } } }',
    '1: channels.a.wall_shear.over: "120 %" is not above 0 % and at most 100 %; write for example "80 %"',
  ],
  ['channels: { a: { walls: side } }', '1: channels.a.walls: "side" is not one of floor, all'],
  [
    'fluid: ethanol',
    '1: fluid: "ethanol" is not a fluid known here; write "water", or for example { viscosity: 0.94 mPa s, density: 1003 kg/m^3 }',
  ],
  [
    'fluid: { viscosity: 1 cP }',
    '1: fluid: needs the key density; write for example { viscosity: 0.94 mPa s, density: 1003 kg/m^3 }',
  ],
  [
    'fluid: { viscosity: 1 cP, glycerol: 3 % by mass }',
    '1: fluid: has glycerol and a viscosity or density; keep one kind; write for example { glycerol: 30 % by mass }',
  ],
  [
    'fluid: { glycerol: 30 % }',
    '1: fluid.glycerol: "30 %" is not a share by mass or by volume; write for example "30 % by mass"',
  ],
  [
    'fluid: { glycerol: 130 % by mass }',
    '1: fluid.glycerol: "130 % by mass" is not between 0 % and 100 %; write for example "30 % by mass"',
  ],
  [
    'joints: resolvd',
    '1: joints: "resolvd" is not one of resolved, centreline, computed; did you mean "resolved"?',
  ],
  [
    'process: etched glas',
    '1: process: "etched glas" is not one of cast elastomer, etched glass, etched silicon, milled thermoplastic, moulded thermoplastic; did you mean "etched glass"?',
  ],
  [
    'targets: [{ flow: 1 uL/min, by: p }]',
    '1: targets[0]: has no channel, port or node; exactly one of channel, port and node is needed; write for example { channel: lane-1, wall_shear: 0.3 Pa, by: feed }',
  ],
  [
    'targets: [{ channel: a, port: b, flow: 1 uL/min, by: p }]',
    '1: targets[0]: has channel and port; exactly one of channel, port and node is needed; write for example { channel: lane-1, wall_shear: 0.3 Pa, by: feed }',
  ],
  [
    'targets: [{ channel: a, by: p }]',
    '1: targets[0]: has no quantity; a target on a channel has exactly one of flow, wall_shear, velocity, residence_time, concentration; write for example { channel: lane-1, wall_shear: 0.3 Pa, by: feed }',
  ],
  [
    'targets:\n  - channel: a\n    pressure: 1 kPa\n    by: p',
    '3: targets[0].pressure: a target on a channel can be flow, wall_shear, velocity, residence_time, concentration',
  ],
  [
    'targets: [{ channel: a, flow: 1 uL/min, at: peak, by: p }]',
    '1: targets[0].at: goes with wall_shear only; leave it out',
  ],
  [
    'targets: [{ port: a, flow: 1 uL/min, reach: x, by: p }]',
    '1: targets[0].reach: goes with channel only; leave it out',
  ],
  [
    'targets: [{ channel: a, flow: 1 uL/min }]',
    '1: targets[0]: needs the key by; write for example { channel: lane-1, wall_shear: 0.3 Pa, by: feed }',
  ],
  [
    'targets: [{ channel: "a*", flow: 1 uL/min, by: "p*" }]',
    '1: targets[0].by: "p*" is a pattern; a target is met by one port, named in full',
  ],
  [
    'targets: [{ port: a, concentration: { drug: 3, dye: 2 }, by: p }]',
    '1: targets[0].concentration: names 2 solutes; a target is on one; write for example { drug: 3 }',
  ],
  [
    'targets: [{ port: a, concentration: {}, by: p }]',
    '1: targets[0].concentration: names no solute; a target is on one; write for example { drug: 3 }',
  ],
  [
    'targets: [{ node: a, concentration: { drug: 3 }, by: p }]',
    '1: targets[0].concentration: a target on a node can be pressure',
  ],
  [
    'targets: [{ port: a, concentration: { drug: 3 }, by: p }]',
    '1: targets[0].concentration.drug: "drug" is not among the solutes; write for example solutes: { drug: { diffusion: 5e-10 m^2/s, unit: uM } }',
  ],
  [
    'solutes: { drug: { diffusion: 5e-10 m^2/s } }\nports: { a: { concentration: { drgu: 3 } } }',
    '2: ports.a.concentration.drgu: "drgu" is not among the solutes; did you mean "drug"?',
  ],
  [
    'solutes: { drug: { diffusion: 5e-10 m^2/s } }\nchannels: { a: { mixing: { x: { min: 90 % } } } }',
    '2: channels.a.mixing.x: "x" is not among the solutes; known here: "drug"',
  ],
  [
    'ports: { a: { concentration: { drug: 3 uM } } }',
    '1: ports.a.concentration.drug: "3 uM" has a unit; a concentration is a bare number, its unit stands under solutes; write for example "3"',
  ],
  [
    'ports: { a: { concentration: { drug: -3 } } }',
    '1: ports.a.concentration.drug: "-3" is below 0; a concentration must be not below 0; write for example "10"',
  ],
  [
    'ports: { a: { concentration: {} } }',
    '1: ports.a.concentration: names no solute; write for example { drug: 10 }',
  ],
  [
    'channels: { a: { concentration: { drug: { over: 95 % } } } }',
    '1: channels.a.concentration.drug: needs min, max or both; write for example { min: 2, max: 4, over: 95 % }',
  ],
  [
    'channels: { a: { mixing: { drug: 90 % } } }',
    '1: channels.a.mixing.drug: is one text; write for example { min: 90 % }',
  ],
  [
    'channels: { a: { even: 0 % } }',
    '1: channels.a.even: "0 %" is not above 0 % and at most 100 %; write for example "5 %"',
  ],
  ['channels: { a: { even: 5 } }', '1: channels.a.even: "5" has no unit; write for example "5 %"'],
  [
    'solutes: { drug: { unit: uM } }',
    '1: solutes.drug: needs the key diffusion; write for example { diffusion: 5e-10 m^2/s, unit: uM }',
  ],
  [
    'solutes: { drug: { diffusion: 5e-10 } }',
    '1: solutes.drug.diffusion: "5e-10" has no unit; write for example "5e-10 m^2/s"',
  ],
  ['junctions: mixd', '1: junctions: "mixd" is not one of laminar, mixed; did you mean "mixed"?'],
  ['switch: { to: 120 % }', '1: switch.to: "120 %" is not above 0 % and at most 100 %'],
  ['switch: { within: 2 }', '1: switch.within: "2" has no unit; write for example "2 min"'],
  ['switch: { form: [a] }', '1: switch.form: unknown key; did you mean "from"?'],
  ['fields: chamber', '1: fields: is one text; write for example [chamber]'],
  ['pillars: { posts: 1 }', '1: pillars: is a map of keys and values; write for example [posts]'],
  ['ports: { a: { tubing: non } }', '1: ports.a.tubing: "non" is not one of none; did you mean "none"?'],
  [
    'accept: [{ rule: open-end, at: "*", because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0].at: "*" would take on whatever the rule finds anywhere; name what was looked at; write for example "lane-*"',
  ],
  [
    'accept: [{ rule: open-end, at: " ** ", because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0].at: "**" would take on',
  ],
  [
    'accept: [{ rule: not-computed, at: a, because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0].rule: "not-computed" can\'t be accepted',
  ],
  [
    'pump_limits: { feed: { max_pressure: 1 kPa, min_pressure: 2 kPa } }',
    '1: pump_limits.feed.min_pressure: is not below max_pressure',
  ],
  [
    'tolerances: { temperature: 5 % }',
    '1: tolerances.temperature: "5 %" is a percentage; a temperature difference is needed; write for example "1 degC"',
  ],
  [
    'tolerances: { depth: { limit: 5 } }',
    '1: tolerances.depth.limit: "5" has no unit; write for example "5 %"',
  ],
  [
    'tolerances: { depth: 100 % }',
    '1: tolerances.depth: "100 %" is not below 100 %; write for example "5 %"',
  ],
  [
    'tolerances: { depth: -5 % }',
    '1: tolerances.depth: "-5 %" is below 0; a tolerance must be not below 0; write for example "5 %"',
  ],
  [
    'tolerances: { width: 2 um, width_own: 1 um }',
    '1: tolerances.width: is the whole of width_bias and width_own; give it or those two, not both',
  ],
  [
    'show: { flow: kPa }',
    '1: show.flow: "kPa" is a unit of pressure; one of flow is needed; write for example "uL/min"',
  ],
  [
    'accept: [{ rule: thin-wal, at: a, because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0].rule: "thin-wal" is not a rule that can be accepted; did you mean "thin-wall"?',
  ],
  [
    'accept: [{ rule: merged-walls, at: a, because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0].rule: "merged-walls" can\'t be accepted: the numbers themselves would be wrong; mend the drawing or the run sheet',
  ],
  [
    'accept: [{ rule: thin-wall, at: a, because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0]: needs the key up_to, how far it is taken on; write for example "up_to: 50 um"',
  ],
  [
    'accept: [{ rule: thin-wall, at: a, up_to: 3 Pa, because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0].up_to: "3 Pa" is a pressure; a length is needed; write for example "3 um"',
  ],
  [
    'accept: [{ rule: open-end, at: a, up_to: 3 um, because: b, by: c, on: 2026-01-01 }]',
    '1: accept[0].up_to: open-end measures nothing that could have a ceiling; leave up_to out',
  ],
  [
    'accept: [{ rule: open-end, at: a, because: "", by: c, on: 2026-01-01 }]',
    '1: accept[0].because: is empty; write for example "measured on the last batch"',
  ],
  [
    'accept: [{ rule: open-end, at: a, because: b, by: c, on: 2026-02-30 }]',
    '1: accept[0].on: "2026-02-30" is not a date; write for example "2026-05-04"',
  ],
  [
    'layers: { A: { depth: 1 um }, " a": ignore }',
    '1: layers." a": is the same layer as "A"; layer names match without regard to case',
  ],
  ['cases: 3', '1: cases: is one text; write for example { culture: { temperature: 37 degC } }'],
  [
    'ports: { "a\\nb": { pressure: 3 } }',
    '1: ports."a\\u000ab".pressure: "3" has no unit; write for example "3 kPa"',
  ],
  // YAML itself
  ['ports:\n\tfeed: open', '2: is indented with a tab; YAML takes spaces only, so put two spaces instead'],
  ['channels:\n  *-lane: {}', '2: a name or pattern that starts with * must stand in quotes; write "*-lane"'],
  ['ignore: [*x, y]', '1: a name or pattern that starts with * must stand in quotes; write "*x"'],
  ['channels: { *lane : {} }', '1: a name or pattern that starts with * must stand in quotes; write "*lane"'],
  ['title: a\ntitle: b', '2: key "title" is there twice (first in line 1); keep one of them'],
  [
    'depth: &d 50 um',
    '1: has a YAML anchor (&); run sheets have none, so write the value out or quote the text',
  ],
  ['depth: !!int 50', '1: has a YAML tag; leave out the word that starts with "!", or quote it'],
  ['title: a\n---\ntitle: b', '2: starts a second document; a run sheet is one, so leave out the line "---"'],
  ['? [a]\n: b', '1: has a key that is not plain text; quote the key'],
  ['just text', '1: is not a run sheet; write keys with values, for example "depth: 50 um"'],
  ['- a', '1: is not a run sheet; write keys with values, for example "depth: 50 um"'],
  [
    'ports:\n  constructor: open',
    '2: "constructor" can\'t be a name in a run sheet; give it another name in the drawing',
  ],
];

describe('parseRunSheet refuses', () => {
  for (const [text, message] of WRONG) {
    it(`${JSON.stringify(text)} in one line that says where, what and how to put it right`, () => {
      const error = errorOf(text);
      expect(error).toBeInstanceOf(InputError);
      expect(error.message.startsWith(`c.run.yaml:${message}`), error.message).toBe(true);
      expect(error.message).not.toMatch(/[\n\r]/);
    });
  }

  it('bad YAML with the line and the words at fault', () => {
    for (const [text, line] of [
      ['depth: "50 um', 1],
      ['title: a: b', 1],
      ['a: {b: 1', 1],
      ['title: x\nports: { feed: open\n', 3],
      ['title: @x', 1],
    ] as const) {
      expect(errorOf(text).message).toMatch(new RegExp(`^c\\.run\\.yaml:${line}: is not YAML at `));
    }
  });

  it('a sheet over 1 MB, by the limit’s name', () => {
    expect(errorOf('#'.repeat(1_000_001)).message).toBe(
      'c.run.yaml: is over the limit "run sheet size" of 1 MB; leave out what the chip does not need',
    );
    expect(parse('#'.repeat(1_000_000)).title).toBeNull();
  });

  it('deep nesting by the limit’s name, before anything recursive runs', () => {
    for (const piece of ['[', '- ', '{a: ', 'a: ', '? ']) {
      const { message } = errorOf(piece.repeat(Math.floor(900_000 / piece.length)));
      expect(message).toMatch(/limit "run sheet depth" of 32 levels/);
    }
  });

  it('an alias bomb, as it refuses every anchor', () => {
    let text = 'a: &a [x, x]\n';
    for (let i = 0; i < 30; i++) text += `b${i}: &b${i} [*a, *a]\n`;
    expect(errorOf(text).message).toMatch(/:1: /);
  });

  it('more patterns or cases than it can match in bounded time, by the limit’s name', () => {
    const many = Array.from({ length: 1001 }, (_, i) => `"${i}*"`);
    expect(errorOf(`ignore: [${many.join(', ')}]`).message).toMatch(/limit "patterns" of 1000/);
    expect(errorOf(`channels: { ${many.map((name) => `${name}: {}`).join(', ')} }`).message).toMatch(
      /limit "patterns" of 1000/,
    );
    const cases = Array.from({ length: 101 }, (_, i) => `c${i}: {}`);
    expect(errorOf(`cases: { ${cases.join(', ')} }`).message).toMatch(/limit "cases" of 100/);
  });

  it('every cut-off of a full sheet with an InputError or not at all', () => {
    for (let length = 0; length < FULL_SHEET.length; length += 7) {
      try {
        parse(FULL_SHEET.slice(0, length));
      } catch (error) {
        expect(error).toBeInstanceOf(InputError);
      }
    }
  });
});

function errorOf(text: string): Error {
  try {
    parse(text);
  } catch (error) {
    if (error instanceof Error) return error;
  }
  throw new Error(`nothing was thrown for ${text.slice(0, 80)}`);
}
