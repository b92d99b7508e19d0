import { describe, expect, it } from 'vitest';
import type { Chip } from '../../src/chip/types.ts';
import { networkOf } from '../../src/network/alike.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { assembled, circle, type Draft, stroke } from '../chip/drawing.ts';
import { chipOf } from './chip-of.ts';

const chip = (): Chip =>
  chipOf([{ name: 'a', widthMm: 0.2, lines: [[0, 0, 5, 0]] }], [{ name: 'in', x: 0, y: 0, radiusMm: 0.5 }]);
const [channel] = chip().channels;
const [port] = chip().ports;

describe('the network of a chip', () => {
  const before = buildNetwork(chip());

  it('is that of an equal chip where there is one, though both were read by themselves', () => {
    expect(networkOf(chip(), before)).toBe(before);
  });

  it('is joined where there was none before', () => {
    expect(networkOf(chip(), undefined)).toEqual(before);
  });

  const line = channel.centrelines[0];
  const others: Record<string, Partial<Chip>> = {
    'another depth': { channels: [{ ...channel, depthMm: 0.2 }] },
    'another depth of a layer': { layers: [{ ...chip().layers[0], depthM: 0.2e-3 }] },
    'another origin of a depth': { channels: [{ ...channel, depthOrigin: 'default' }] },
    'another width': { channels: [{ ...channel, ductWidthMm: 0.3 }] },
    'another plane': { channels: [{ ...channel, plane: 1 }] },
    'a point of a centreline moved by the last bit': {
      channels: [
        { ...channel, centrelines: [{ ...line, points: Float64Array.of(0, 0, 5 + Number.EPSILON * 4, 0) }] },
      ],
    },
    'a stroke left out': { channels: [] },
    'another well': { ports: [{ ...port, radiusMm: 0.6 }] },
    'another name of a port': { ports: [{ ...port, name: 'out' }] },
    'another slack': { joinWithinMm: 2e-3 },
    'joints resolved': { joints: 'resolved' },
    'another scale': { unitMm: 2 },
    'another least wall': { leastWall: { flatM: 40e-6, perDepth: 0, origin: 'run sheet' } },
  };
  for (const [name, change] of Object.entries(others)) {
    it(`is another with ${name}`, () => {
      const other = { ...chip(), ...change };
      const network = networkOf(other, before);
      expect(network).not.toBe(before);
      expect(network.chip).toBe(other);
    });
  }
});

describe('two run sheets of one layout', () => {
  const drafts: readonly Draft[] = [
    stroke('lane', [5, 5, 30, 5]),
    stroke(null, [5, 9, 30, 9]),
    circle('in', 5, 5),
    circle('out', 30, 5),
  ];
  const BASE = 'depth: 50 um\nports: { in: { pressure: 1 kPa }, out: open }\n';
  const chipUnder = (sheet: string): Chip => assembled(drafts, sheet, { unitStated: false }).chip;
  const share = (one: string, other: string): boolean => {
    const before = buildNetwork(chipUnder(one));
    return networkOf(chipUnder(other), before) === before;
  };

  it.each([
    ['fluid and temperature', `${BASE}fluid: { glycerol: 30 % by mass }\ntemperature: 37 degC`],
    [
      'what ports are set to, their tubing and which way they are meant to go',
      'depth: 50 um\nports: { in: { flow: 1 uL/min, tubing: { bore: 0.2 mm, length: 1 m } }, out: { head: 1 mm, expect: out } }',
    ],
    ['windows', `${BASE}channels: { lane: { flow: { min: 1 uL/min } } }`],
    ['limits of the flow', `${BASE}limits: { max_pressure: 20 kPa, max_reynolds: 1 }`],
    ['targets', `${BASE}targets: [{ channel: lane, flow: 2 uL/min, by: in }]`],
    [
      'what is accepted, tolerances and title',
      `title: x\n${BASE}tolerances: { depth: 5 % }\naccept: [{ rule: open-end, at: lane, because: b, by: c, on: 2026-05-04 }]`,
    ],
  ])('share their network where they differ in %s', (_, other) => {
    expect(share(BASE, other)).toBe(true);
  });

  it.each([
    ['depth', BASE.replace('50 um', '60 um')],
    ['the least wall', `${BASE}limits: { min_wall: 40 um }`],
    ['what is ignored', `${BASE}ignore: [lane]`],
    ['join_within', `${BASE}join_within: 5 um`],
    ['joints', `${BASE}joints: centreline`],
    ['the unit', `${BASE}unit: 2 mm`],
  ])('do not where they differ in %s', (_, other) => {
    expect(share(BASE, other)).toBe(false);
  });
});
