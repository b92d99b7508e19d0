import { describe, expect, it } from 'vitest';
import { assembleChip } from '../../src/chip/assemble.ts';
import { InputError } from '../../src/errors.ts';
import type { Layout } from '../../src/layout/types.ts';
import { waterViscosity } from '../../src/physics/fluid.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { FULL_SHEET } from '../runsheet/full-sheet.ts';
import {
  assembled,
  chipOf,
  circle,
  type Draft,
  filled,
  ignored,
  layout,
  line,
  rectangle,
  runOf,
  stroke,
} from './drawing.ts';

const culture: readonly Draft[] = [
  stroke('chip-edge', rectangle(0, 0, 76, 26), { width: 0.1 }),
  ...[1, 2, 3, 4].map((i) => stroke(`lane-${i}`, [10, 4 * i, 60, 4 * i], { groups: ['Drawing', ' Lanes '] })),
  stroke(null, [5, 5, 10, 5], { groups: ['Drawing', 'upper'] }),
  stroke('valve', [5, 7, 10, 7], { groups: ['Control'] }),
  stroke('dim-3', [5, 9, 10, 9]),
  ...['branch-1', 'mixer'].map((name, i) => stroke(name, [65, 3 + 2 * i, 70, 3 + 2 * i])),
  filled('chamber', rectangle(65, 8, 4, 4)),
  circle(null, 66, 10, 0.5, { groups: ['posts', 'holes'] }),
  ...['feed', 'dose', 'vent', 'waste', 'drain', 'spare', 'carrier', 'out-3'].map((name, i) =>
    circle(name, 5 + 8 * i, 22, 1, { groups: ['holes'] }),
  ),
  circle('screw', 70, 20, 1.5),
  ignored(null, 'text'),
  ignored('note', 'dashed stroke', { groups: ['marks'] }),
];

describe('assembleChip', () => {
  it('joins a layout and a run sheet with every key into one chip', () => {
    const { chip, run } = assembled(culture, FULL_SHEET);
    expect(chip).toMatchObject({
      file: 'c.svg',
      unitMm: 1,
      widthMm: 76,
      heightMm: 26,
      planes: ['chip', 'top'],
      sizeMm: [76, 26],
      joinWithinMm: 1e-3,
      joints: 'resolved',
      process: 'cast elastomer',
      faults: [],
      ignored: {
        'named under ignore': 2,
        'in an ignored layer': 1,
        'circle outside the ports layer': 1,
        'chamber or pillar': 2,
        text: 1,
      },
    });
    expect(chip.edge).toMatchObject({ name: 'chip-edge', sidesMm: [76, 26] });
    expect(chip.layers).toEqual([
      { name: ' Lanes ', plane: 0, depthM: 120e-6, depthOrigin: 'run sheet', profile: 'rectangle' },
      { name: 'upper', plane: 1, depthM: 80e-6, depthOrigin: 'run sheet', profile: 'rectangle' },
      { name: '', plane: 0, depthM: 50e-6, depthOrigin: 'default', profile: 'rectangle' },
    ]);
    expect(chip.channels.map(({ name, layer, plane }) => [name, layer, plane])).toEqual([
      ['lane-1', 0, 0],
      ['lane-2', 0, 0],
      ['lane-3', 0, 0],
      ['lane-4', 0, 0],
      ['channel-5', 1, 1],
      ['branch-1', 2, 0],
      ['mixer', 2, 0],
    ]);
    expect(run.channels[0]!.wallShear).toEqual({ min: 0.05, max: 0.5, over: 0.8 });
    expect(run.channels[4]).toBeNull();
    expect(chip.ports.map(({ name }, p) => [name, run.ports[p]!.condition.kind])).toEqual([
      ['feed', 'pressure'],
      ['dose', 'flow'],
      ['vent', 'head'],
      ['waste', 'pressure'],
      ['drain', 'open'],
      ['spare', 'sealed'],
      ['carrier', 'flow'],
      ['out-3', 'unset'],
    ]);
    expect(run.ports[3]).toMatchObject({ expect: 'out' });
    expect(chip.ports[3]).toMatchObject({ xMm: 29, yMm: 22, radiusMm: 1 });
    expect(run.fluid).toMatchObject({
      name: 'water',
      temperatureK: 310.15,
      viscosityPaS: waterViscosity(310.15),
    });
  });

  it('reads a drawing without a run sheet: water at 25 °C, no depths, all ports unset', () => {
    const { chip, run } = assembled([stroke('a', [0, 0, 10, 0], { groups: ['l'] }), circle('p', 0, 0)]);
    expect(run.fluid.temperatureK).toBe(298.15);
    expect(chip.channels[0]!.depthMm).toBeNaN();
    expect(chip.faults).toEqual([{ kind: 'missing-depth', channel: 'a', layer: 'l', xMm: 0, yMm: 0 }]);
    expect(run.ports[0]).toEqual({ condition: { kind: 'unset' }, tubing: [], expect: null });
    expect(run.sheet).toBeNull();
    expect(chip.edge).toBeNull();
  });

  it('resolves joints unless the run sheet says centreline', () => {
    const drafts = [stroke('a', [0, 0, 10, 0])];
    expect(chipOf(drafts).joints).toBe('resolved');
    expect(chipOf(drafts, 'joints: resolved').joints).toBe('resolved');
    expect(chipOf(drafts, 'joints: centreline').joints).toBe('centreline');
    // not computed yet, and said so
    expect(chipOf(drafts, 'joints: computed').joints).toBe('resolved');
  });

  it('takes a case like a sheet', () => {
    const sheet = parseRunSheet(FULL_SHEET, 'c.run.yaml');
    const { run } = assembleChip({
      layout: layout(culture),
      sheet: sheet.cases[0]!.sheet,
      file: 'c.svg',
    });
    expect(run.ports[0]!.condition).toEqual({ kind: 'flow', flowM3s: 20 / 6e10 });
  });

  it('scales centrelines, bends, widths and ports to millimetres', () => {
    const bent = { ...line([0, 0, 10, 0, 20, 10]), bendRadius: Float64Array.of(0, 5) };
    const chip = chipOf(
      [stroke('a', [], { centrelines: [bent], width: 0.4 }), circle('p', 10, 20, 4)],
      'depth: 50 um',
      {
        unitMm: 0.5,
        widthMm: 38,
      },
    );
    expect([...chip.channels[0]!.centrelines[0]!.points]).toEqual([0, 0, 5, 0, 10, 5]);
    expect([...chip.channels[0]!.centrelines[0]!.bendRadius]).toEqual([0, 2.5]);
    expect(chip.channels[0]).toMatchObject({ drawnWidthMm: 0.2, ductWidthMm: 0.2, stripHalfWidthMm: 0.1 });
    expect(chip.ports[0]).toMatchObject({ xMm: 5, yMm: 10, radiusMm: 2 });
    expect(chip.widthMm).toBe(38);
  });

  it('widens an isotropic channel from its mask: duct mask + π·depth/2, walls at mask/2 + depth', () => {
    const sheet = 'process: etched glass\ndepth: 50 um\nlayers: { flat: { profile: rectangle } }';
    const chip = chipOf([stroke('a', [0, 0, 1, 0]), stroke('b', [0, 5, 1, 5], { groups: ['flat'] })], sheet);
    expect(chip.channels[0]).toMatchObject({ profile: 'isotropic', drawnWidthMm: 0.2 });
    expect(chip.channels[0]!.ductWidthMm).toBeCloseTo(0.2 + (Math.PI * 0.05) / 2, 14);
    expect(chip.channels[0]!.stripHalfWidthMm).toBeCloseTo(0.15, 14);
    expect(chip.channels[1]).toMatchObject({ profile: 'rectangle', ductWidthMm: 0.2, stripHalfWidthMm: 0.1 });
  });

  it('keeps strokes without a width, or with something over them, as faults', () => {
    const chip = chipOf(
      [
        stroke('a', [1, 2, 3, 4], { width: null }),
        stroke('b', [5, 6, 7, 8], { disguises: ['mask', 'opacity'] }),
      ],
      'depth: 50 um\nchannels: { a: { flow: { min: 1 uL/min } } }',
    );
    expect(chip.channels.map(({ name }) => name)).toEqual(['b']);
    expect(chip.faults).toEqual([
      { kind: 'unsized-stroke', name: 'a', xMm: 1, yMm: 2 },
      { kind: 'disguised-stroke', channel: 'b', by: 'mask', xMm: 5, yMm: 6 },
      { kind: 'disguised-stroke', channel: 'b', by: 'opacity', xMm: 5, yMm: 6 },
    ]);
  });

  it('looks at ten times as many channels ten times as often', () => {
    const looks = (count: number): number => {
      const drafts = Array.from({ length: count }, (_, i) =>
        stroke(i % 2 === 0 ? `c${i}` : null, [i % 300, i / 300, (i % 300) + 0.5, i / 300]),
      );
      const sheet = parseRunSheet('depth: 50 um\nchannels: { "c*": { walls: all } }', 'x');
      return countedLooks(layout(drafts), (counted) => {
        const { chip } = assembleChip({ layout: counted, sheet, file: 'x' });
        expect(chip.channels.length).toBe(count);
      });
    };
    const few = looks(300);
    expect(few).toBeGreaterThan(300);
    expect(looks(3000)).toBeLessThan(10.5 * few);
  });
});

const SEARCHES = ['includes', 'indexOf', 'find', 'findIndex', 'filter', 'some', 'every'] as const;

/** How often `work` looks at a key of a drawn shape, or at what any array holds that it searches. */
function countedLooks(drawn: Layout, work: (counted: Layout) => void): number {
  let looks = 0;
  const items = drawn.items.map(
    (item) =>
      new Proxy(item, {
        get(of, key) {
          looks++;
          return Reflect.get(of, key);
        },
      }),
  );
  const known = SEARCHES.map((name) => Array.prototype[name]);
  try {
    SEARCHES.forEach((name, k) => {
      Object.defineProperty(Array.prototype, name, {
        configurable: true,
        writable: true,
        value(this: unknown[], ...given: unknown[]) {
          looks += this.length;
          return Reflect.apply(known[k], this, given);
        },
      });
    });
    work({ ...drawn, items });
  } finally {
    SEARCHES.forEach((name, k) => {
      Object.defineProperty(Array.prototype, name, { configurable: true, writable: true, value: known[k] });
    });
  }
  return looks;
}

describe('depth of a channel', () => {
  const depths = (drafts: readonly Draft[], sheet: string) =>
    chipOf(drafts, sheet).channels.map(({ depthMm, depthOrigin }) => [
      Number(depthMm.toFixed(9)),
      depthOrigin,
    ]);

  it('is what the drawing says, else its layer’s, else the sheet’s', () => {
    const drafts = [
      stroke('a', [0, 0, 1, 0], { groups: ['lanes'], dataDepth: '80 um' }),
      stroke('b', [0, 1, 1, 1], { groups: ['lanes'] }),
      stroke('c', [0, 2, 1, 2], { groups: ['other'] }),
    ];
    expect(depths(drafts, 'depth: 50 um\nlayers: { LANES: { depth: 120 um } }')).toEqual([
      [0.08, 'drawing'],
      [0.12, 'run sheet'],
      [0.05, 'default'],
    ]);
  });

  it('comes from the nearest enclosing group that is a layer of the run sheet, else from the nearest group', () => {
    const drafts = [
      stroke('a', [0, 0, 1, 0], { groups: ['lanes', 'inner'] }),
      stroke('b', [0, 1, 1, 1], { groups: ['lanes', 'deep', 'inner'] }),
      stroke('c', [0, 2, 1, 2], { groups: ['x', 'inner'] }),
      stroke('d', [0, 3, 1, 3]),
    ];
    const chip = chipOf(
      drafts,
      'depth: 50 um\nlayers: { lanes: { depth: 120 um }, deep: { depth: 200 um } }',
    );
    expect(chip.channels.map(({ layer }) => chip.layers[layer]!.name)).toEqual([
      'lanes',
      'deep',
      'inner',
      '',
    ]);
  });

  it('shown for a layer is the one that the drawing gives to all its channels', () => {
    const a = stroke('a', [0, 0, 1, 0], { groups: ['l'], dataDepth: '80 um' });
    const b = stroke('b', [0, 1, 1, 1], { groups: ['l'], dataDepth: '90 um' });
    expect(chipOf([a]).layers[0]).toMatchObject({ depthM: 80e-6, depthOrigin: 'drawing' });
    expect(chipOf([a, b]).layers[0]!.depthM).toBeNaN();
    expect(chipOf([a, b], 'layers: { l: { depth: 1 um } }').layers[0]).toMatchObject({
      depthM: 1e-6,
      depthOrigin: 'run sheet',
    });
  });

  it('is refused when the drawing’s text is none', () => {
    const drawn = (dataDepth: string) => () => chipOf([stroke('a', [0, 0, 1, 0], { dataDepth })]);
    expect(drawn('80')).toThrow(
      new InputError('c.svg', 'channel "a": data-depth: "80" has no unit; write for example "80 um"'),
    );
    expect(drawn('-80 um')).toThrow('c.svg: channel "a": data-depth: "-80 um": a depth must be above 0');
    expect(drawn('80 kPa')).toThrow('"80 kPa" is a pressure; a length is needed');
  });
});

describe('names as shown', () => {
  it('are unique: drawn ones first, numbers for the rest, none made up that was drawn', () => {
    const { chip, run } = assembled(
      [
        stroke('lane', [0, 0, 1, 0]),
        stroke('lane', [0, 1, 1, 1]),
        stroke('lane-2', [0, 2, 1, 2]),
        stroke('lane', [0, 3, 1, 3]),
        stroke(null, [0, 4, 1, 4]),
        stroke('channel-7', [0, 5, 1, 5]),
        stroke(null, [0, 6, 1, 6]),
      ],
      'depth: 50 um\nchannels: { lane: { walls: all } }',
    );
    expect(chip.channels.map(({ name }) => name)).toEqual([
      'lane',
      'lane-3',
      'lane-2',
      'lane-4',
      'channel-5',
      'channel-7',
      'channel-7-2',
    ]);
    expect(run.channels.map((asked) => asked?.walls)).toEqual([
      'all',
      'all',
      undefined,
      'all',
      ...Array(3).fill(undefined),
    ]);
  });
});

describe('settings of a channel', () => {
  const settings = (channels: string) =>
    runOf(
      [stroke('lane-1', [0, 0, 1, 0]), stroke('lane-20', [0, 1, 1, 1])],
      `depth: 50 um\nchannels: ${channels}`,
    ).channels;

  it('come from the exact name first, then from the longest pattern', () => {
    const channels = settings(
      '{ "*": { walls: floor }, "lane-*": { walls: all }, lane-1: { flow: { min: 1 uL/min } } }',
    );
    expect(channels[0]).toMatchObject({ walls: 'floor', flow: { min: 1 / 6e10 } });
    expect(channels[1]).toMatchObject({ walls: 'all', flow: null });
  });

  it('are refused when two patterns of one length match', () => {
    expect(() => settings('{ "lane-*": {}, "*ane-1": {}, "l*": {}, "*0": {} }')).toThrow(
      'c.run.yaml:2: channels: "lane-*" and "*ane-1" both match channel "lane-1" and are equally long; give the channel an entry of its own',
    );
  });
});
