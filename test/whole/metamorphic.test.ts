import { describe, expect, it } from 'vitest';
import { analyseText, portFlows, reachValues } from './analyse-text.ts';

/**
 * The same chip drawn in another way is the same chip: turned, mirrored, shifted, scaled with its units, drawn with other
 * commands, in more strokes, with more vertices, to the wall or past it. Answers agree to 1e-9.
 */
interface Drawing {
  readonly strokes: string;
  readonly transform?: string;
  readonly viewBox?: string;
  readonly size?: string;
  readonly portScale?: number;
}

const HOLES =
  '<circle id="in" cx="2" cy="5" r="0.6"/><circle id="out" cx="28" cy="5" r="0.6"/><circle id="side" cx="15" cy="14" r="0.8"/>';

function svgOf({ strokes, transform, viewBox, size }: Drawing): string {
  return `<svg xmlns="http://www.w3.org/2000/svg" width="${size ?? '30mm'}" height="${size ?? '30mm'}" viewBox="${viewBox ?? '0 0 30 30'}"><g transform="${transform ?? ''}"><g fill="none" stroke="#000" stroke-width="0.4">${strokes}</g>${HOLES}</g></svg>`;
}

const sheetOf = (joints: string): string =>
  `joints: ${joints}\nfluid: water\ntemperature: 37 degC\ndepth: 100 um\nports:\n  in: { pressure: 10 kPa, tubing: { bore: 0.25 mm, length: 200 mm } }\n  out: open\n  side: { flow: -3 uL/min }\n`;

const BASE =
  '<path id="main" d="M2 5H28"/><path id="branch" stroke-width="0.2" d="M15 14V5"/><path id="loop" stroke-width="0.3" d="M6 5V9a2 2 0 0 0 2 2H22V5"/><path id="cross" stroke-width="0.2" d="M10 2V18"/>';

async function expectSame(
  one: Drawing,
  two: Drawing,
  joints: readonly string[] = ['centreline', 'resolved'],
): Promise<void> {
  for (const mode of joints) {
    const a = portFlows(await analyseText(svgOf(one), sheetOf(mode)));
    const b = portFlows(await analyseText(svgOf(two), sheetOf(mode)));
    expect(Object.keys(b)).toEqual(Object.keys(a));
    for (const [name, flow] of Object.entries(a)) {
      expect(flow, name).not.toBe(0);
      expect(Math.abs(b[name] / flow - 1), `${mode} ${name}`).toBeLessThan(1e-9);
    }
  }
}

describe('one chip drawn in many ways', () => {
  const base: Drawing = { strokes: BASE };

  const transforms: Record<string, string> = {
    'turned by 37°': 'rotate(37 15 15)',
    mirrored: 'matrix(-1 0 0 1 30 0)',
    'shifted by 1e6 mm': 'translate(1000000 -1000000)',
  };
  for (const [name, transform] of Object.entries(transforms)) {
    it(`is the same ${name}`, () => expectSame(base, { strokes: BASE, transform }));
  }

  it('is the same scaled with its units', () =>
    expectSame(base, { strokes: BASE, transform: 'scale(96)', viewBox: '0 0 2880 2880' }));

  it('is the same with another unit and the same physical size', () =>
    expectSame(base, { strokes: BASE, transform: 'scale(2.5)', viewBox: '0 0 75 75', size: '3cm' }));

  it('is the same in relative commands and polylines', () =>
    expectSame(base, {
      strokes:
        '<path id="main" d="m2 5h26"/><line id="branch" stroke-width="0.2" x1="15" y1="14" x2="15" y2="5"/><path id="loop" stroke-width="0.3" d="m6 5v4a2 2 0 0 0 2 2h14v-6"/><polyline id="cross" stroke-width="0.2" points="10,2 10,18"/>',
    }));

  it('is the same with vertices at the crossings', () =>
    expectSame(base, {
      strokes: BASE.replace('M2 5H28', 'M2 5H6H10L15 5H22H28').replace('M10 2V18', 'M10 2V5V11V18'),
    }));

  it('is the same with a stroke split in two', () =>
    expectSame(base, {
      strokes: BASE.replace(
        '<path id="main" d="M2 5H28"/>',
        '<path id="main" d="M2 5H12"/><path id="main-2" d="M12 5H28"/>',
      ),
    }));

  it('is the same drawn backwards', () =>
    expectSame(base, { strokes: BASE.replace('M2 5H28', 'M28 5H2').replace('M15 14V5', 'M15 5V14') }));

  it('is the same with the strokes in another order', () =>
    expectSame(base, {
      strokes: BASE.split(/(?=<path)/)
        .reverse()
        .join(''),
    }));

  const square: Record<string, string> = { wall: 'M15 14V5.2', between: 'M15 14V5.1', past: 'M15 14V4.85' };
  for (const [where, d] of Object.entries(square)) {
    it(`is the same with the branch drawn to ${where}`, () =>
      expectSame(base, { strokes: BASE.replace('M15 14V5', d) }));
  }

  const at45 = (y: number): string => BASE.replace('M15 14V5', `M15 14L${15 + (14 - y)} ${y}`);
  for (const [where, y] of [
    ['wall', 5.2],
    ['between', 5.1],
    ['past', 4.85],
  ] as const) {
    it(`is the same with a branch at 45° drawn to ${where}`, () =>
      expectSame({ strokes: at45(5) }, { strokes: at45(y) }));
  }

  it('is the same with a chamber drawn as one stroke or two, also where a feeder meets the seam', async () => {
    const chamber = (d: string): Drawing => ({
      strokes: `<path id="left" stroke-width="0.3" d="M2 5H8"/><path id="right" stroke-width="0.3" d="M20 5H28"/><path id="feeder" stroke-width="0.2" d="M14 14L14 5M15 14H14"/>${d}`,
    });
    await expectSame(
      chamber('<path id="chamber" stroke-width="3" d="M8 5H20"/>'),
      chamber(
        '<path id="chamber" stroke-width="3" d="M8 5H14"/><path id="chamber-2" stroke-width="3" d="M14 5H20"/>',
      ),
      // With resolved joints a chamber in two strokes meets the feeder in the same T.
      ['centreline', 'resolved'],
    );
  });

  it("gives a ladder's end lane what its brothers get by length", async () => {
    const lanes = [6, 10, 14, 18, 22]
      .map((x, k) => `<path id="lane-${k}" stroke-width="0.2" d="M${x} 5V10"/>`)
      .join('');
    const strokes = `<path id="main" stroke-width="1" d="M2 5H22"/><path id="back" stroke-width="1" d="M28 10H6"/><path id="link" stroke-width="1" d="M28 5V10"/><path id="up" d="M15 14V10"/>${lanes}`;
    const values = reachValues(await analyseText(svgOf({ strokes }), sheetOf('centreline')));
    const lengths = [0, 1, 2, 3, 4].map((k) => values[`lane-${k}`][1]);
    for (const length of lengths) expect(Math.abs(length / lengths[2] - 1)).toBeLessThan(1e-9);
  });
});
