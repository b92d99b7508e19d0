import { lusolve } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { reachName } from '../../src/network/names.ts';
import { ductForm } from '../../src/physics/duct.ts';
import { nominalResistances } from '../../src/solve/resistances.ts';
import { findSettings } from '../../src/solve/targets.ts';
import { drawing, networkFrom } from './network-from.ts';

/** Two inlets and two outlets round a bridge. */
const BRIDGE = drawing(
  {
    'in-1': 'M5 10H20',
    'in-2': 'M5 30H25',
    bridge: 'M20 10L25 30',
    'out-1': 'M20 10H50',
    'out-2': 'M25 30H45',
  },
  { a: [5, 10], b: [5, 30], c: [50, 10], d: [45, 30] },
);
const TUBING = 'tubing: { bore: 0.25 mm, length: 400 mm }';

function bridge(ports: string, targets: string, more = ''): string {
  return `depth: 80 um\nports:\n${ports}\ntargets:\n${targets}\n${more}`;
}

const PORTS = `  a: { pressure: 3 kPa, ${TUBING} }\n  b: { flow: 5 uL/min, ${TUBING} }\n  c: open\n  d: { pressure: -1 kPa, ${TUBING} }`;

describe('findSettings', () => {
  it('meets two targets by two ports, one a pressure and one a flow, as a dense solve of the whole network does', () => {
    const bridged = networkFrom(
      BRIDGE,
      bridge(
        PORTS,
        '  - { channel: out-1, flow: 7 uL/min, by: a }\n  - { channel: bridge, wall_shear: 0.15 Pa, at: peak, by: b }',
      ),
    );
    const found = findSettings(bridged);
    const { pressure, flow } = denseBridge(bridged, found.flow.reachFlow);
    expect(found.conditions[0]).toMatchObject({ kind: 'pressure' });
    expect(found.conditions[1]).toMatchObject({ kind: 'flow' });
    expect(rel(found.targets[0].response.setting, pressure)).toBeLessThan(1e-10);
    expect(rel(found.targets[1].response.setting, flow)).toBeLessThan(1e-10);
    expect(rel(found.targets[0].reached, 7e-9 / 60)).toBeLessThan(1e-12);
    expect(rel(found.targets[1].reached, 0.15)).toBeLessThan(1e-12);
  });

  it('keeps the way that a reach flows as the run sheet is written', () => {
    const drawn = networkFrom(
      BRIDGE,
      bridge(
        `  a: open\n  b: sealed\n  c: { flow: -4 uL/min }\n  d: sealed`,
        '  - { channel: out-1, wall_shear: 0.2 Pa, by: c }',
      ),
    );
    const [target] = findSettings(drawn).targets;
    expect(target.response.setting).toBeLessThan(0);
    expect(target.response.observed.at).toBeGreaterThan(0);
  });

  it('keeps that way too where the port to be found would push against it', () => {
    const drawn = networkFrom(
      BRIDGE,
      bridge(
        `  a: { pressure: 0 Pa }\n  b: sealed\n  c: { pressure: 2 kPa }\n  d: sealed`,
        '  - { channel: out-1, wall_shear: 0.05 Pa, by: a }',
      ),
    );
    const [target] = findSettings(drawn).targets;
    expect(target.response.observed.at).toBeLessThan(0);
    expect(rel(target.reached, 0.05)).toBeLessThan(1e-12);
  });

  it('pushes into the chip where nothing flows yet, and draws out of it where the port says expect: out', () => {
    const settingOf = (port: string): number =>
      findSettings(
        networkFrom(
          BRIDGE,
          bridge(
            `  a: open\n  b: sealed\n  c: ${port}\n  d: sealed`,
            '  - { channel: out-1, velocity: 1 mm/s, by: c }',
          ),
        ),
      ).targets[0].response.setting;
    expect(settingOf('{ pressure: 0 Pa }')).toBeGreaterThan(0);
    expect(settingOf('{ pressure: 0 Pa, expect: out }')).toBe(-settingOf('{ pressure: 0 Pa }'));
  });

  it('takes a port without a condition, a head or an open one for a pressure to be found', () => {
    const [unset, head, open, sealed] = [`{ ${TUBING} }`, '{ head: 20 mm }', 'open', 'sealed'].map((a) =>
      findSettings(
        networkFrom(
          BRIDGE,
          bridge(`  a: ${a}\n  b: sealed\n  c: open\n  d: sealed`, '  - { port: c, flow: -5 uL/min, by: a }'),
        ),
      ),
    );
    for (const found of [unset, head, open, sealed]) {
      expect(found.conditions[0]).toMatchObject({ kind: 'pressure' });
      expect(rel(found.flow.portFlow[2], -5e-9 / 60)).toBeLessThan(1e-12);
    }
    expect(head.targets[0].response.setting).toBe(open.targets[0].response.setting);
    expect(unset.targets[0].response.setting).toBeGreaterThan(open.targets[0].response.setting);
  });

  it('reaches the pressure of a node, of a port in the chip behind its tubing, and a residence time', () => {
    const { network, run } = networkFrom(
      BRIDGE,
      bridge(
        PORTS,
        '  - { port: a, pressure: 2 kPa, by: a }\n  - { channel: in-2, residence_time: 3 s, by: b }\n  - { node: J1, pressure: 700 Pa, by: d }',
      ),
    );
    const { targets, flow } = findSettings({ network, run });
    expect(rel(flow.portPressure[0], 2000)).toBeLessThan(1e-12);
    const reach = [0, 1, 2, 3, 4].find((r) => reachName(network, r) === 'in-2') ?? -1;
    const volume = 0.2e-3 * 80e-6 * ((network.reachDuctMm[reach] - network.reachJointMm[reach]) / 1e3);
    expect(rel(volume / Math.abs(flow.reachFlow[reach]), 3)).toBeLessThan(1e-12);
    expect(rel(targets[2].reached, 700)).toBeLessThan(1e-12);
  });

  it('counts as room for a residence time what a joint adds as resistance not', () => {
    const svg = drawing({ main: 'M5 10H50', side: 'M25 10V30' }, { a: [5, 10], b: [50, 10], c: [25, 30] });
    const { network, run } = networkFrom(
      svg,
      'depth: 80 um\nports: { a: open, b: open, c: open }\ntargets:\n  - { channel: side, residence_time: 4 s, by: c }',
    );
    const { flow, targets } = findSettings({ network, run });
    const [reach] = [0, 1, 2].filter((r) => reachName(network, r) === 'side');
    expect(network.reachJointMm[reach]).not.toBe(0);
    const room = (network.reachDuctMm[reach] - network.reachJointMm[reach]) / 1e3;
    expect(rel((0.2e-3 * 80e-6 * room) / Math.abs(flow.reachFlow[reach]), 4)).toBeLessThan(1e-12);
    expect(rel(targets[0].reached, 4)).toBeLessThan(1e-12);
  });

  describe('of a window', () => {
    const sheet = (value: string, limits = ''): string =>
      bridge(
        `  a: { pressure: 1 kPa, ${TUBING} }\n  b: sealed\n  c: open\n  d: sealed`,
        `  - { channel: out-1, ${value}, by: a }`,
        limits,
      );
    const settingFor = (value: string): number =>
      findSettings(networkFrom(BRIDGE, sheet(value))).targets[0].response.setting;

    it('gives the settings between which it is kept, and sets their middle', () => {
      for (const [window, low, high] of [
        ['wall_shear: { min: 0.1 Pa, max: 0.4 Pa }', 'wall_shear: 0.1 Pa', 'wall_shear: 0.4 Pa'],
        ['residence_time: { min: 2 s, max: 10 s }', 'residence_time: 10 s', 'residence_time: 2 s'],
        ['flow: { min: -2 uL/min, max: 5 uL/min }', 'flow: -2 uL/min', 'flow: 5 uL/min'],
      ]) {
        const [{ range, response }] = findSettings(networkFrom(BRIDGE, sheet(window))).targets;
        expect(rel(range?.low ?? 0, settingFor(low))).toBeLessThan(1e-10);
        expect(rel(range?.high ?? 0, settingFor(high))).toBeLessThan(1e-10);
        expect(rel(response.setting, (settingFor(low) + settingFor(high)) / 2)).toBeLessThan(1e-10);
      }
    });

    it('gives the settings in their order also where more pressure means less flow', () => {
      const against = (value: string) =>
        findSettings(
          networkFrom(
            BRIDGE,
            bridge(
              '  a: { pressure: 3 kPa }\n  b: sealed\n  c: open\n  d: sealed',
              `  - { channel: out-1, ${value}, by: c }`,
            ),
          ),
        ).targets[0];
      const { range, response } = against('flow: { min: 1 uL/min, max: 3 uL/min }');
      expect(rel(range?.low ?? 0, against('flow: 3 uL/min').response.setting)).toBeLessThan(1e-10);
      expect(rel(range?.high ?? 0, against('flow: 1 uL/min').response.setting)).toBeLessThan(1e-10);
      expect(rel(response.setting, against('flow: 2 uL/min').response.setting)).toBeLessThan(1e-10);
    });

    it('sets its given end where it is open, and the middle between rest and a most', () => {
      const open = findSettings(networkFrom(BRIDGE, sheet('wall_shear: { min: 0.1 Pa }'))).targets[0];
      expect(rel(open.reached, 0.1)).toBeLessThan(1e-12);
      expect(open.range?.high).toBe(Infinity);
      const most = findSettings(networkFrom(BRIDGE, sheet('wall_shear: { max: 0.4 Pa }'))).targets[0];
      expect(rel(most.reached, 0.2)).toBeLessThan(1e-12);
      expect(rel(most.range?.high ?? 0, settingFor('wall_shear: 0.4 Pa'))).toBeLessThan(1e-10);
    });

    it('sets the middle of what the pump can do of it', () => {
      const low = settingFor('wall_shear: 0.1 Pa');
      const limit = settingFor('wall_shear: 0.2 Pa');
      const limited = networkFrom(
        BRIDGE,
        sheet('wall_shear: { min: 0.1 Pa, max: 2 Pa }', `pump_limits: { a: { max_pressure: ${limit} Pa } }`),
      );
      const [{ response, reach, range }] = findSettings(limited).targets;
      expect(rel(response.setting, (low + limit) / 2)).toBeLessThan(1e-9);
      expect(reach?.isWithin).toBe(true);
      expect(range?.high).toBeGreaterThan(limit);
    });
  });

  it('tells the nearest setting that a pump can do by its pressure and by its flow', () => {
    const sheet = (limits: string): string =>
      bridge(
        `  a: { pressure: 1 kPa, ${TUBING} }\n  b: sealed\n  c: open\n  d: sealed`,
        '  - { port: c, flow: -5 uL/min, by: a }',
        `pump_limits: { a: ${limits} }`,
      );
    const wide = findSettings(networkFrom(BRIDGE, sheet('{ max_pressure: 1 MPa }'))).targets[0];
    expect(wide.reach.isWithin).toBe(true);
    const byPressure = findSettings(networkFrom(BRIDGE, sheet('{ max_pressure: 100 Pa }'))).targets[0];
    expect(byPressure.reach).toMatchObject({ isWithin: false, nearest: 100 });
    const byFlow = findSettings(networkFrom(BRIDGE, sheet('{ max_flow: 2.5 uL/min }'))).targets[0];
    expect(byFlow.reach.isWithin).toBe(false);
    expect(rel(byFlow.reach.nearest ?? 0, wide.response.setting / 2)).toBeLessThan(1e-10);
    const exact = sheet(`{ max_pressure: ${wide.response.setting} Pa }`);
    expect(findSettings(networkFrom(BRIDGE, exact)).targets[0].reach.isWithin).toBe(true);
  });

  describe('refuses, at the line of the target,', () => {
    const open = '  a: open\n  b: sealed\n  c: open\n  d: sealed';
    it.each([
      [
        'two targets by one port',
        bridge(
          PORTS,
          '  - { channel: out-1, flow: 1 uL/min, by: a }\n  - { channel: out-2, flow: 1 uL/min, by: a }',
        ),
        /^chip\.run\.yaml:9: targets\[1\]: is by "a", as targets\[0\] is: one port can be set to meet one target/,
      ],
      [
        'targets that depend on each other',
        bridge(
          `  a: { pressure: 1 kPa }\n  b: sealed\n  c: { pressure: 0 Pa }\n  d: sealed`,
          '  - { channel: in-1, flow: 1 uL/min, by: a }\n  - { channel: out-1, wall_shear: 1 Pa, by: c }',
        ),
        /^chip\.run\.yaml:9: targets\[1\]: wall_shear of "out-1" depends on targets\[0\] \(flow of "in-1" by "a"\): whatever "a" and "c" do moves both in one fixed proportion/,
      ],
      [
        'a target at a dead end',
        bridge(open, '  - { channel: in-2, wall_shear: 1 Pa, by: a }'),
        /^chip\.run\.yaml:8: targets\[0\]: "in-2" does not feel "a": it lies on no way between "a" and a port/,
      ],
      [
        'a chip in which nothing can flow',
        bridge(
          '  a: { pressure: 1 kPa }\n  b: sealed\n  c: sealed',
          '  - { channel: in-1, flow: 1 uL/min, by: a }',
        ),
        /nothing can flow whatever "a" does: no other port that it is connected with holds a pressure/,
      ],
      [
        'a port flow that the run sheet gives',
        bridge(PORTS, '  - { port: b, flow: 1 uL/min, by: a }'),
        /"b" does not feel "a": the run sheet gives its flow/,
      ],
      [
        'a port that is not set',
        bridge('  a: open\n  c: open', '  - { port: b, flow: 1 uL/min, by: a }'),
        /"b" does not feel "a": the port is not set, so nothing passes it/,
      ],
      [
        'a pressure that another port holds',
        bridge(PORTS, '  - { port: c, pressure: 1 kPa, by: a }'),
        /"c" does not feel "a": "c" holds the pressure there/,
      ],
      [
        'a port whose flow the others fix',
        bridge(
          '  a: { flow: 1 uL/min }\n  b: sealed\n  c: { flow: -1 uL/min }\n  d: sealed',
          '  - { channel: in-1, flow: 1 uL/min, by: a }',
        ),
        /what "a" gives is fixed by the others; give one of them a pressure, a head or open/,
      ],
      [
        'a node that the network lacks',
        bridge(PORTS, '  - { node: J7, pressure: 1 kPa, by: a }'),
        /node: the network has no node "J7"; did you mean "J1"\?/,
      ],
      [
        'a negative velocity',
        bridge(PORTS, '  - { channel: in-1, velocity: -1 mm/s, by: a }'),
        /velocity: is below 0; it says how fast, not which way/,
      ],
      [
        'a window that any setting keeps',
        bridge(PORTS, '  - { channel: in-1, wall_shear: { min: 0 Pa }, by: a }'),
        /wall_shear: the window is kept by any setting; give it a max, or a min above 0/,
      ],
      [
        'a channel without a depth',
        'layers: { cut: {} }\nports: { a: open, c: open }\ntargets:\n  - { channel: in-1, velocity: 1 mm/s, by: a }',
        /^chip\.run\.yaml:4: targets\[0\]: the depth of channel "in-1" is not known/,
      ],
      [
        'a part of the chip that holds a channel without a depth',
        'layers: { cut: {} }\nports: { a: open, c: open }\ntargets:\n  - { channel: in-1, flow: 1 uL/min, by: a }',
        /"in-1" can't be computed: a channel it is connected with has no depth/,
      ],
    ])('%s', (_, sheet, message) => {
      expect(() => findSettings(networkFrom(BRIDGE, sheet))).toThrow(message);
    });

    it('a channel of several reaches without reach:, listing them, and takes the one named', () => {
      const svg = drawing({ main: 'M5 10H50', side: 'M25 10V30' }, { a: [5, 10], b: [50, 10], c: [25, 30] });
      const sheet = (reach: string): string =>
        `depth: 80 um\nports: { a: open, b: open, c: open }\ntargets:\n  - { channel: main, ${reach} flow: 1 uL/min, by: a }`;
      expect(() => findSettings(networkFrom(svg, sheet('')))).toThrow(
        /^chip\.run\.yaml:4: targets\[0\]: channel "main" has 2 reaches; add reach: and one of "main:1", "main:2"/,
      );
      expect(() => findSettings(networkFrom(svg, sheet('reach: "main:3",')))).toThrow(
        /reach: channel "main" has no reach "main:3"; did you mean "main:1"\?/,
      );
      const found = findSettings(networkFrom(svg, sheet('reach: "main:2",')));
      expect(found.targets[0].wanted.name).toBe('main:2');
      expect(rel(found.targets[0].reached, 1e-9 / 60)).toBeLessThan(1e-12);
    });

    it('a target that no channel connects with its port', () => {
      const svg = drawing(
        { left: 'M5 10H20', right: 'M30 10H50' },
        { a: [5, 10], b: [20, 10], c: [30, 10], d: [50, 10] },
      );
      const sheet =
        'depth: 80 um\nports: { a: open, b: open, c: open, d: open }\ntargets:\n  - { channel: right, flow: 1 uL/min, by: a }';
      expect(() => findSettings(networkFrom(svg, sheet))).toThrow(
        /"right" does not feel "a": no channel connects them/,
      );
    });

    it('a bridge in balance, which its port can’t move', () => {
      const svg = drawing(
        {
          n1: 'M10 20L30 10',
          n2: 'M10 20L30 30',
          s1: 'M30 10L50 20',
          s2: 'M30 30L50 20',
          cross: 'M30 10V30',
        },
        { a: [10, 20], b: [50, 20] },
      );
      const sheet =
        'depth: 80 um\nports: { a: open, b: open }\ntargets:\n  - { channel: cross, flow: 1 uL/min, by: a }';
      expect(() => findSettings(networkFrom(svg, sheet))).toThrow(
        /"cross" does not feel "a": the channels round it are balanced/,
      );
    });

    it('two ports in one place of which one is to be found', () => {
      const svg = drawing({ lane: 'M5 10H50' }, { a: [5, 10], b: [50, 10] }).replace(
        '</g></svg>',
        '<circle data-name="twin" cx="5.6" cy="10" r="0.5"/></g></svg>',
      );
      const sheet =
        'depth: 80 um\nports: { a: open, b: open, twin: open }\ntargets:\n  - { channel: lane, flow: 1 uL/min, by: a }';
      expect(() => findSettings(networkFrom(svg, sheet))).toThrow(
        /"a" and "twin" open into one place of the chip, which "twin" already holds at a pressure/,
      );
    });
  });
});

function rel(a: number, b: number): number {
  return Math.abs(a - b) / Math.abs(b);
}

/**
 * The bridge as one dense system with the two settings among the unknowns: pressures at a (chip side), b, J1, J2, d (chip side), the supply pressure of a and the
 * flow of b. Rows: Kirchhoff's first law at the five nodes, then the two targets. Only resistances come from the program.
 */
function denseBridge(
  { network, run }: ReturnType<typeof networkFrom>,
  foundFlow: Float64Array,
): { pressure: number; flow: number } {
  const { reach, tubing } = nominalResistances(network, run);
  const r = (name: string): number => [0, 1, 2, 3, 4].map((i) => reachName(network, i)).indexOf(name);
  const g = (name: string): number => 1 / reach[r(name)];
  const { viscosityPaS } = run.fluid;
  const form = ductForm(0.2e-3, 80e-6);
  const bridgeFlow = 0.15 / (form.floorPeak * viscosityPaS * form.resistance);
  // which way the bridge flows is the program's rule, tested elsewhere; the size is what is asked here
  const sign = Math.sign(foundFlow[r('bridge')]);
  const [A, B, J1, J2, D, P, Q] = [0, 1, 2, 3, 4, 5, 6];
  const rows: number[][] = [];
  const right: number[] = [];
  const row = (entries: readonly (readonly [number, number])[], value: number): void => {
    const line = Array<number>(7).fill(0);
    for (const [column, entry] of entries) line[column] += entry;
    rows.push(line);
    right.push(value);
  };
  const supplyD = -1000;
  row(
    [
      [A, 1 / tubing[0] + g('in-1')],
      [P, -1 / tubing[0]],
      [J1, -g('in-1')],
    ],
    0,
  );
  row(
    [
      [B, g('in-2')],
      [J2, -g('in-2')],
      [Q, -1],
    ],
    0,
  );
  row(
    [
      [J1, g('in-1') + g('bridge') + g('out-1')],
      [A, -g('in-1')],
      [J2, -g('bridge')],
    ],
    0,
  );
  row(
    [
      [J2, g('in-2') + g('bridge') + g('out-2')],
      [B, -g('in-2')],
      [J1, -g('bridge')],
      [D, -g('out-2')],
    ],
    0,
  );
  row(
    [
      [D, g('out-2') + 1 / tubing[3]],
      [J2, -g('out-2')],
    ],
    supplyD / tubing[3],
  );
  row([[J1, g('out-1')]], 7e-9 / 60);
  row(
    [
      [J1, g('bridge')],
      [J2, -g('bridge')],
    ],
    sign * bridgeFlow,
  );
  const scaled = rows.map((line) => line.map((entry, column) => entry * (column === Q ? 1e-12 : 1)));
  const sizes = scaled.map((line) => Math.max(...line.map(Math.abs)));
  const x = lusolve(
    scaled.map((line, i) => line.map((entry) => entry / sizes[i])),
    right.map((value, i) => value / sizes[i]),
  ) as number[][];
  return { pressure: x[P][0], flow: x[Q][0] * 1e-12 };
}
