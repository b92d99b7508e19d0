import { describe, expect, it } from 'vitest';
import {
  assembled,
  chipOf,
  circle,
  type Draft,
  filled,
  ignored,
  line,
  rectangle,
  stroke,
} from './drawing.ts';

const SHEET = 'depth: 50 um\n';

describe('size of a unit', () => {
  const px = { unitMm: 25.4 / 96, unitStated: false, unitReason: 'width 76 in px', widthMm: 20, heightMm: 7 };
  const mm = 96 / 25.4;
  const edge = (angle = 0, scale = 1) => {
    const [c, s] = [Math.cos(angle), Math.sin(angle)];
    const corners = rectangle(0, 0, 76 * mm * scale, 26 * mm);
    return stroke(
      'chip-edge',
      corners.map((value, i) =>
        i % 2 === 0 ? c * value - s * corners[i + 1]! : s * corners[i - 1]! + c * value,
      ),
    );
  };

  it('is a fault while nobody states it', () => {
    expect(chipOf([stroke('a', [0, 0, 1, 0])], SHEET, px).faults).toEqual([
      { kind: 'assumed-scale', reason: 'width 76 in px' },
    ]);
  });

  it('is taken from the run sheet when the drawing does not say, and the drawing’s size with it', () => {
    const chip = chipOf([stroke('a', [0, 0, 1, 0])], `${SHEET}unit: 1 mm`, px);
    expect(chip).toMatchObject({ unitMm: 1, unitReason: 'run sheet: one unit is 1 mm', faults: [] });
    expect(chip.widthMm).toBeCloseTo((20 * 96) / 25.4, 10);
  });

  it('is known when the chip edge, at any angle, has the size given, in either order, within 0.5 %', () => {
    for (const angle of [0, 0.6, 2]) {
      expect(chipOf([edge(angle)], `${SHEET}size: [26 mm, 76 mm]`, px).faults).toEqual([]);
    }
    expect(chipOf([edge(0, 1.0049)], `${SHEET}size: [76 mm, 26 mm]`, px).faults).toEqual([]);
    expect(chipOf([edge(0, 1.0051)], `${SHEET}size: [76 mm, 26 mm]`, px).faults).toHaveLength(1);
    expect(chipOf([stroke('a', [0, 0, 1, 0])], `${SHEET}size: [76 mm, 26 mm]`, px).faults).toHaveLength(1);
  });

  it('must not contradict the drawing by more than 0.5 %', () => {
    const drafts = [stroke('a', [0, 0, 1, 0])];
    expect(chipOf(drafts, `${SHEET}unit: 1.004 mm`).unitMm).toBe(1);
    expect(() => chipOf(drafts, `${SHEET}unit: 1.006 mm`)).toThrow(
      'c.run.yaml:2: unit: one unit of the drawing is 1 mm (width 76mm over viewBox width 76), the run sheet says 1.006 mm; leave unit out, or mend the width of the drawing',
    );
  });
});

describe('widths and depths', () => {
  it('are equal when they were meant so, whatever rounding a transform or a unit left', () => {
    const { channels } = chipOf(
      [
        stroke('a', [0, 0, 1, 0], { width: 0.7, dataDepth: '65 um' }),
        stroke('b', [1, 0, 2, 0], { width: 7 * 0.1, dataDepth: '0.065 mm' }),
      ],
      SHEET,
    );
    expect(7 * 0.1).not.toBe(0.7);
    expect(channels[1].ductWidthMm).toBe(channels[0].ductWidthMm);
    expect(channels[1].depthMm).toBe(channels[0].depthMm);
  });
});

describe('chip edge', () => {
  it('may be a stroke, a filled shape, a dashed one or a circle, and is then never anything else', () => {
    const ring = rectangle(0, 0, 76, 26);
    for (const draft of [
      stroke('chip-edge', ring),
      filled('chip-edge', ring, { stroked: true }),
      ignored('chip-edge', 'dashed stroke', { rings: [Float64Array.from(ring)] }),
    ]) {
      const chip = chipOf([draft], SHEET);
      expect(chip.edge).toMatchObject({ name: 'chip-edge', sidesMm: [76, 26] });
      expect(chip).toMatchObject({ channels: [], faults: [], ignored: {} });
    }
    const wafer = chipOf([circle('chip-edge', 50, 50, 4)], SHEET);
    expect(wafer.edge!.sidesMm).toEqual([8, 8]);
    expect(wafer.ports).toEqual([]);
  });

  it('may be what is in a group of that name', () => {
    const chip = chipOf(
      [
        stroke(null, rectangle(0, 0, 9, 4), { groups: ['Chip-Edge'] }),
        ignored(null, 'text', { groups: ['Chip-Edge'] }),
      ],
      SHEET,
    );
    expect(chip.edge!.sidesMm).toEqual([9, 4]);
    expect(chip.ignored).toEqual({ text: 1 });
  });

  it('keeps its outer rings only', () => {
    const both = stroke('chip-edge', [], {
      centrelines: [line(rectangle(2, 2, 3, 3), true), line(rectangle(0, 0, 76, 26), true)],
    });
    expect(chipOf([both], SHEET).edge!.rings).toHaveLength(1);
  });

  it('closes a path that stops just short of its start, and refuses one that does not close', () => {
    expect(chipOf([stroke('chip-edge', [0.1, 0, 76, 0, 76, 26, 0, 26, 0, 0])], SHEET).edge!.sidesMm).toEqual([
      76, 26,
    ]);
    expect(() => chipOf([stroke('chip-edge', [0, 0, 76, 0, 76, 26, 0, 26])], SHEET)).toThrow(
      'c.svg: the shape "chip-edge" does not close; draw the chip edge as one closed shape',
    );
    expect(() => chipOf([stroke('rim', [0, 0, 76, 0])], `${SHEET}outline: rim`)).toThrow(
      'c.run.yaml:2: outline: the shape "rim" does not close',
    );
  });
});

describe('outline', () => {
  const rim = stroke('rim', rectangle(0, 0, 76, 26));
  const read = (drafts: readonly Draft[]) => {
    const chip = chipOf([rim, ...drafts], `${SHEET}outline: rim`);
    return {
      channels: chip.channels.map(({ name }) => name),
      ports: chip.ports.map(({ name }) => name),
      ignored: chip.ignored,
    };
  };

  it('leaves out what lies wholly outside and keeps what lies partly inside', () => {
    expect(
      read([
        stroke('in', [1, 1, 5, 5]),
        stroke('half', [-5, 1, 5, 5]),
        stroke('through', [-5, 5, 80, 5]),
        stroke('out', [80, 1, 90, 5]),
        stroke('beside', [-1, -5, -1, 30]),
        stroke('past the corner', [70, 35, 90, 15]),
        stroke('over the corner', [60, 32, 82, 20]),
        circle('port in', 5, 20),
        circle('port on the rim', 76.5, 20),
        circle('port out', 80, 20),
      ]),
    ).toEqual({
      channels: ['in', 'half', 'through', 'over the corner'],
      ports: ['port in', 'port on the rim'],
      ignored: { 'outside the outline': 4 },
    });
  });

  it('judges each centreline of a stroke by itself', () => {
    const chip = chipOf(
      [rim, stroke('two', [], { centrelines: [line([1, 1, 5, 1]), line([100, 1, 105, 1])] })],
      `${SHEET}outline: rim`,
    );
    expect(chip.channels[0]!.centrelines).toHaveLength(1);
  });

  it('is followed at any angle and with dents', () => {
    const dented = stroke('rim', [0, 0, 20, 0, 20, 10, 10, 2, 0, 10, 0, 0]);
    const chip = chipOf(
      [dented, stroke('a', [2, 3, 3, 3]), stroke('b', [9, 6, 11, 6])],
      `${SHEET}outline: rim`,
    );
    expect(chip.channels.map(({ name }) => name)).toEqual(['a']);
  });

  it('does not cut the drawing when only a shape named chip-edge is there', () => {
    const chip = chipOf([stroke('chip-edge', rectangle(0, 0, 76, 26)), stroke('out', [80, 1, 90, 5])], SHEET);
    expect(chip.channels.map(({ name }) => name)).toEqual(['out']);
  });
});

describe('ignore', () => {
  it('takes names exactly, groups without regard to case, and * for any run', () => {
    const chip = chipOf(
      [
        stroke('dim-1', [0, 0, 1, 0]),
        stroke('Dim-2', [0, 1, 1, 1]),
        stroke('a', [0, 2, 1, 2], { groups: ['MARKS', 'inner'] }),
        stroke('b', [0, 3, 1, 3], { groups: ['dims-old'] }),
        circle('marks', 5, 5),
        stroke('kept', [0, 4, 1, 4]),
      ],
      `${SHEET}ignore: ["dim-*", marks, "Dims*"]`,
    );
    expect(chip.channels.map(({ name }) => name)).toEqual(['Dim-2', 'kept']);
    expect(chip.ports).toEqual([]);
    expect(chip.ignored).toEqual({ 'named under ignore': 4 });
  });
});

describe('ports', () => {
  it('are circles of a size within the limits, ends included', () => {
    const circles = [0.0999, 0.1 * (1 - 1e-7), 0.1, 5, 5 * (1 + 1e-7), 5.001].map((radius, i) =>
      circle(`p${i}`, 20 * i, 0, radius, { filled: false, stroked: true }),
    );
    const chip = chipOf(circles, SHEET);
    expect(chip.ports.map(({ name }) => name)).toEqual(['p1', 'p2', 'p3', 'p4']);
    expect(chip.ignored).toEqual({ 'circle of no port size': 2 });
    expect(
      chipOf(circles, `${SHEET}limits: { port_diameter: [9 mm, 11 mm] }`).ports.map(({ name }) => name),
    ).toEqual(['p3', 'p4', 'p5']);
  });

  it('are only circles of the ports layer when there is one', () => {
    const circles = [circle('p', 0, 0, 1, { groups: ['Holes', 'left'] }), circle('screw', 20, 0)];
    const chip = chipOf(circles, `${SHEET}ports_layer: holes`);
    expect(chip.ports.map(({ name }) => name)).toEqual(['p']);
    expect(chip.faults).toEqual([]);
  });

  it('take concentric circles as one, the largest as the well, with a name from any', () => {
    const { chip, run } = assembled(
      [
        circle(null, 10, 0, 0.3),
        circle('feed', 10.0005, 0, 0.5),
        circle(null, 10.01, 0, 2),
        circle('other', 10.5, 0, 0.4),
      ],
      `${SHEET}ports: { feed: { pressure: 1 kPa } }`,
    );
    expect(chip.ports).toMatchObject([{ name: 'feed', xMm: 10.01, radiusMm: 2 }, { name: 'other' }]);
    expect(run.ports).toMatchObject([{ condition: { kind: 'pressure' } }, { condition: { kind: 'unset' } }]);
  });

  it('take of several names in one well the one that the run sheet uses', () => {
    const circles = [circle('rim', 0, 0, 2), circle('feed', 0, 0, 1)];
    expect(chipOf(circles, SHEET).ports[0]!.name).toBe('rim');
    expect(chipOf(circles, `${SHEET}ports: { feed: open }`).ports[0]).toMatchObject({
      name: 'feed',
      radiusMm: 2,
    });
  });

  it('without a name are shown by their number, and two of one name are refused', () => {
    expect(chipOf([circle('a', 0, 0), circle(null, 5, 0)], SHEET).ports[1]).toMatchObject({
      name: 'port-2',
      drawnName: null,
    });
    expect(() => chipOf([circle('a', 0, 0), circle('a', 5, 2.5)], SHEET)).toThrow(
      'c.svg: two ports are named "a", at (0, 0) mm and (5, 2.5) mm; give each a name of its own in the drawing',
    );
  });
});

describe('filled outlines', () => {
  const square = rectangle(10, 0, 10, 10);
  const faults = (drafts: readonly Draft[]) => chipOf(drafts, SHEET).faults;

  it('are a fault when stroked, and only counted when nothing touches them', () => {
    const away = stroke('away', [50, 0, 60, 0]);
    expect(faults([away, filled('chamber', square, { stroked: true })])).toEqual([
      { kind: 'filled-outline', name: 'chamber', xMm: 10, yMm: 0, reason: 'stroked', ports: [], ends: [] },
    ]);
    expect(chipOf([away, filled('logo', square)], SHEET)).toMatchObject({
      faults: [],
      ignored: { 'filled outline': 1 },
    });
  });

  it('are a fault when a channel end comes to the edge from either side, or ends within', () => {
    for (const [x, touches] of [
      [9.85, false],
      [9.9, true],
      [10, true],
      [10.05, true],
      [15, true],
    ] as const) {
      const found = faults([filled('chamber', square), stroke('a', [0, 5, x, 5])]);
      expect(found.length, `end at ${x}`).toBe(touches ? 1 : 0);
    }
  });

  it('are no fault as a background with the whole drawing on it', () => {
    expect(
      faults([filled(null, rectangle(-50, -50, 200, 200)), stroke('a', [0, 0, 9, 0]), circle('p', 0, 0)]),
    ).toEqual([]);
  });

  it('are no fault as decoration within a well', () => {
    expect(
      faults([filled(null, rectangle(-0.3, -0.3, 0.6, 0.6)), circle('p', 0, 0), stroke('a', [0, 0, 9, 0])]),
    ).toEqual([]);
    expect(
      faults([circle(null, 0.5, 0, 0.05, { stroked: true }), circle('p', 0, 0), stroke('a', [0, 0, 9, 0])]),
    ).toEqual([]);
  });

  it('include filled circles that are no ports by their size', () => {
    const disc = circle('disc', 20, 5, 8);
    expect(faults([disc, stroke('a', [0, 5, 12, 5])])).toMatchObject([
      { kind: 'filled-outline', name: 'disc' },
    ]);
    expect(faults([disc, stroke('a', [0, 5, 11, 5])])).toEqual([]);
  });
});
