import { describe, expect, test } from 'vitest';
import { colourScale, legendTicks, PALETTE } from '../../src/report/colour-scale.ts';
import { shortName } from '../../src/report/label-wish.ts';
import { drawMap, mapNotes } from '../../src/report/map.ts';
import { type Box, chipGeometry, lineTouchesBox } from '../../src/report/map-geometry.ts';
import type { MapDrawing, MapOptions } from '../../src/report/map-types.ts';
import { displayWidth } from '../../src/report/plain-text.ts';
import type { ReportedCase } from '../../src/report/report.ts';
import { DEMOS, demoReport } from './demo.ts';
import { sampleReport } from './sample.ts';

const options: MapOptions = {
  quantity: 'shear',
  widthMm: 180,
  heightMm: 120,
  labelSizeMm: 2,
  measure: (text, sizeMm) => 0.6 * sizeMm * displayWidth(text),
  readable: (name) => name,
  findingNumbers: true,
  reachLabels: true,
};

const draw = (one: ReportedCase, changes: Partial<MapOptions> = {}): MapDrawing =>
  drawMap(one, chipGeometry(one.network.chip), { ...options, ...changes });

/** A drawing as short text: places to 0.1 mm, a reach by its colours and ends. */
function summary(drawing: MapDrawing): unknown {
  const mm = (value: number): number => Math.round(value * 10) / 10 + 0;
  const box = ({ x, y, width, height }: Box): string => [x, y, width, height].map(mm).join(' ');
  return {
    size: `${mm(drawing.widthMm)} × ${mm(drawing.heightMm)}, scale ${drawing.scale.toPrecision(4)}`,
    caption: drawing.caption,
    holes: drawing.holes.map(({ name, x, y, radiusMm }) => `${name} ${mm(x)} ${mm(y)} r ${mm(radiusMm)}`),
    labels: drawing.labels.map(
      ({ kind, text, box: place, leader }) =>
        `${kind} "${text}" ${box(place)}${leader === null ? '' : ' with leader'}`,
    ),
    reaches: drawing.reaches.map(({ reach, strokes }) => {
      const [first, last] = [strokes[0], strokes[strokes.length - 1]];
      const ends = [...first.points.slice(0, 2), ...last.points.slice(-2)].map(mm).join(' ');
      return `${reach}: ${ends}, ${mm(first.widthMm)} wide, ${strokes.map(({ colour }) => colour).join(' ')}`;
    }),
    legend:
      drawing.legend &&
      `${drawing.legend.title}: ${drawing.legend.ticks.map(({ x, text }) => `${text} at ${mm(x)}`).join(', ')}`,
    scaleBar: `${drawing.scaleBar.text}, ${mm(drawing.scaleBar.lengthMm)} long`,
    unlabelled: drawing.unlabelled,
  };
}

describe.each(DEMOS)('the maps of %s', (name) => {
  test.each(['pressure', 'shear', 'flow', 'residence'] as const)('show %s as reviewed', async (quantity) => {
    const [one] = (await demoReport(name)).cases;
    expect(summary(draw(one, { quantity }))).toMatchSnapshot();
  });
});

describe('a map', () => {
  const [one] = sampleReport().cases;

  test.each([
    [180, 120],
    [180, 30],
    [60, 200],
    [40, 40],
  ])(
    'of %i × %i mm keeps labels inside, off each other, off channels and off the chip edge',
    (widthMm, heightMm) => {
      for (const quantity of ['pressure', 'shear', 'flow', 'residence'] as const) {
        const drawing = draw(one, { quantity, widthMm, heightMm });
        expect(drawing.widthMm).toBeLessThanOrEqual(widthMm + 1e-9);
        expect(drawing.heightMm).toBeLessThanOrEqual(heightMm + 1e-9);
        drawing.labels.forEach(({ box, text }, i) => {
          expect(
            box.x >= 0 &&
              box.y >= 0 &&
              box.x + box.width <= drawing.widthMm &&
              box.y + box.height <= drawing.heightMm,
            text,
          ).toBe(true);
          for (const other of drawing.labels.slice(i + 1)) {
            const apart =
              box.x + box.width <= other.box.x ||
              other.box.x + other.box.width <= box.x ||
              box.y + box.height <= other.box.y ||
              other.box.y + other.box.height <= box.y;
            expect(apart, `"${text}" and "${other.text}"`).toBe(true);
          }
          for (const { points, widthMm: painted } of [
            ...drawing.ground,
            ...drawing.edge.map((points) => ({ points, widthMm: 0 })),
          ]) {
            for (let k = 0; k + 3 < points.length; k += 2) {
              expect(
                lineTouchesBox(
                  [points[k], points[k + 1], points[k + 2], points[k + 3]],
                  painted / 2 - 0.1,
                  box,
                ),
                text,
              ).toBe(false);
            }
          }
        });
      }
    },
  );

  test('leads from a port to its name past the channels, and by fewer letters rather than across one', async () => {
    const [state] = (await demoReport('dilution')).cases;
    const drawing = draw(state, { quantity: 'flow', heightMm: 80 });
    const ports = drawing.labels.filter(({ kind }) => kind === 'port');
    expect(ports).toHaveLength(5);
    for (const { text, leader } of ports) {
      if (leader === null) continue;
      const [x1, y1, x2, y2] = leader;
      const length = Math.hypot(x2 - x1, y2 - y1);
      const radius = drawing.holes[0].radiusMm;
      // samples of the leader up to the rim of its hole
      for (let along = 0; along < length - radius; along += 0.2) {
        const x = x1 + ((x2 - x1) * along) / length;
        const y = y1 + ((y2 - y1) * along) / length;
        for (const { points } of drawing.ground)
          for (let k = 0; k + 3 < points.length; k += 2)
            expect(
              lineTouchesBox([points[k], points[k + 1], points[k + 2], points[k + 3]], 0, {
                x: x - 0.05,
                y: y - 0.05,
                width: 0.1,
                height: 0.1,
              }),
              text,
            ).toBe(false);
      }
    }
  });

  test('never cuts the code of a character that the font lacks', () => {
    const same = (name: string): string => name;
    expect(shortName('p [U+1F9EB][U+1F52C] emoji', same, 24)).toBe('p [U+1F9EB][U+1F52C] em…');
    expect(shortName('p [U+1F9EB][U+1F52C] emoji', same, 16)).toBe('p [U+1F9EB]…');
    expect(shortName('p [U+1F9EB][U+1F52C] emoji', same, 8)).toBe('p [U+1F9EB]…');
    expect(shortName('lane', same, 8)).toBe('lane');
  });

  test('says how many ports and reaches found no room for their names', () => {
    const drawing = draw(one);
    expect(mapNotes({ ...drawing, unnamedPorts: 0, unlabelled: 0 })).toBe(drawing.caption);
    expect(mapNotes({ ...drawing, unnamedPorts: 1, unlabelled: 3 })).toContain(
      'No room for the names of 1 port and 3 reaches.',
    );
    const small = draw(one, { widthMm: 12, heightMm: 20 });
    const named = small.labels.filter(({ kind }) => kind === 'port').length;
    expect(small.unnamedPorts).toBe(small.holes.length - named);
  });

  test('names a port by its first letters where its whole name finds no room', () => {
    const [long] = sampleReport({ names: { feed: 'a-name-as-long-as-it-gets-in-here' } }).cases;
    const texts = draw(long, { widthMm: 60, quantity: 'pressure' })
      .labels.filter(({ kind }) => kind === 'port')
      .map(({ text }) => text);
    expect(texts.some((text) => text.startsWith('a-name-'))).toBe(true);
  });

  test('writes the number of the tables beside each name', () => {
    const drawing = draw(one, { quantity: 'shear' });
    const labels = drawing.labels.filter(({ kind }) => kind === 'reach').map(({ text }) => text);
    const lane = one.part.reaches.at(3);
    expect(labels).toContain(`lane-2 ${Number((lane.wall_shear_floor_mean_pa ?? 0).toPrecision(4))}`);
  });

  test('grades pressure along a reach from its first node to its last', () => {
    const drawing = draw(one, { quantity: 'pressure' });
    const inlet = drawing.reaches[0].strokes;
    expect(inlet.length).toBeGreaterThan(5);
    const steps = inlet.map(({ colour }) => PALETTE.indexOf(colour));
    expect(steps).toEqual([...steps].sort((a, b) => b - a));
    expect(steps[0]).toBe(PALETTE.length - 1);
  });

  test('is painted grey where there is no value', () => {
    const [still] = sampleReport({ feedPa: 0 }).cases;
    const drawing = draw(still, { quantity: 'residence' });
    expect(drawing.legend).toBeNull();
    expect(new Set(drawing.reaches.flatMap(({ strokes }) => strokes.map(({ colour }) => colour)))).toEqual(
      new Set(['#c8c8c8']),
    );
  });

  test('has a bar of 10 mm on a slide, and one that fits on a chip of 2 mm', () => {
    const drawing = draw(one);
    expect(drawing.scaleBar.text).toBe('10 mm');
    expect(drawing.scaleBar.lengthMm).toBeCloseTo(10 * drawing.scale, 9);
    const large = draw(one, { widthMm: 4000, heightMm: 4000 });
    expect(large.scaleBar.lengthMm).toBeLessThan(large.widthMm / 2);
  });
});

describe('the colours', () => {
  test('get lighter from end to end, so that they read in grey', () => {
    const grey = PALETTE.map((hex) => {
      const [r, g, b] = [1, 3, 5].map((at) => Number.parseInt(hex.slice(at, at + 2), 16));
      return 0.299 * r + 0.587 * g + 0.114 * b;
    });
    grey.slice(1).forEach((value, i) => {
      expect(value).toBeGreaterThan(grey[i] - 0.5);
    });
    expect(grey[grey.length - 1] - grey[0]).toBeGreaterThan(150);
  });

  test('spread over decades on a logarithmic scale, with nought left grey', () => {
    const scale = colourScale(Float64Array.of(0, 1e-6, 1e-3, 1), 'zero');
    expect(scale?.kind).toBe('log');
    expect([0, 1e-6, 1e-3, 1].map((value) => scale?.step(value))).toEqual([-1, 0, 24, 47]);
  });

  test('have ticks at both ends and round numbers between', () => {
    const scale = colourScale(Float64Array.of(0.3, 0.84), 'zero');
    expect(scale === null ? [] : legendTicks(scale, 1)).toEqual([0, 0.2, 0.4, expect.closeTo(0.6), 0.84]);
  });

  test('do not exist without any value', () => {
    expect(colourScale(Float64Array.of(Number.NaN), 'zero')).toBeNull();
  });
});
