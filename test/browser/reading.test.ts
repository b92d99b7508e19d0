import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { CDPSession, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { flatten } from '../../src/layout/flatten.ts';
import { layOut } from '../../src/layout/layout.ts';
import { PX_MM } from '../../src/svg/lengths.ts';
import { IDENTITY, stretches } from '../../src/svg/matrix.ts';
import { readSvg } from '../../src/svg/read.ts';
import type { Matrix, Shape, SvgDrawing } from '../../src/svg/types.ts';
import { hasChromium, openBrowser, WINDOW_PX } from './chromium.ts';
import { type BrowserShape, measureFile } from './measure.ts';

const CORPUS = join(import.meta.dirname, '../corpus/fixtures');

const AGREE = 1e-4;

/** The browser draws each quarter of an arc as one cubic, up to 2.7e-4 of the radius outside and 1.4e-4 too long. */
const ARCS_AGREE = 5e-4;

/** What is read in another way than the browser draws, on purpose: `file#id` → what and why. */
const DIFFERENT: Readonly<Record<string, string>> = {
  'paths/separators#white':
    'a closed path of two points is the one line that it paints, not a line there and back',
  'shapes/rects#auto': 'SVG 2 lets the attribute rx be auto; the browser takes it for 0',
  'shapes/polygons#two':
    'a closed path of two points is the one line that it paints, not a line there and back',
};

const files = readdirSync(CORPUS, { recursive: true, encoding: 'utf8' })
  .filter((name) => name.endsWith('.svg') && !name.startsWith('refused/'))
  .map((name) => name.slice(0, -'.svg'.length))
  .sort();

it('the corpus holds at least 80 drawings', () => {
  expect(files.length).toBeGreaterThanOrEqual(80);
});

describe.skipIf(!hasChromium)('Reading agrees with a browser on (needs /usr/bin/chromium)', () => {
  let page: Page;
  let session: CDPSession;
  let close: () => Promise<void>;
  beforeAll(async () => {
    const browser = await openBrowser();
    close = browser.close;
    page = await browser.context.newPage();
    session = await browser.context.newCDPSession(page);
  }, 60_000);
  afterAll(() => close());

  it.each(files)('%s', async (name) => {
    const file = join(CORPUS, `${name}.svg`);
    const drawing = readSvg(readFileSync(file, 'utf8'), `${name}.svg`);
    const ours = withLength(drawing);
    const theirs = await measureFile(page, session, file);
    expect(ours.map(({ shape }) => shape.tag)).toEqual(theirs.map(({ tag }) => tag));

    const screen = await screenOf(page, drawing);
    const widths = strokeWidths(drawing);
    const first = theirs.length === 0 ? null : shiftBetween(ours[0].shape, theirs[0], screen);
    for (const [i, { shape, length, vertices }] of ours.entries()) {
      const their = theirs[i];
      const label = `${name}#${their.id}`;
      const agree = shape.path.some(({ kind }) => kind === 'arc') ? ARCS_AGREE : AGREE;

      const lengthsDiffer = !(Math.abs(length - their.length) <= agree * their.length);
      expect(lengthsDiffer, `${label}: ${length} long, in the browser ${their.length}`).toBe(
        label in DIFFERENT,
      );
      if (label in DIFFERENT) continue;

      const matrix = scaled(shape.toRoot, screen.pxPerUnit);
      const [size] = stretches(matrix);
      const shift = shiftBetween(shape, their, screen);
      for (let k = 0; k < 4; k++) {
        expect(
          Math.abs(matrix[k] - their.toScreen[k]),
          `${label}: matrix ${matrix} and ${their.toScreen}`,
        ).toBeLessThanOrEqual(AGREE * size);
      }
      for (const k of [0, 1] as const)
        expect(Math.abs(shift[k] - first![k]), `${label}: moved`).toBeLessThanOrEqual(AGREE * screen.sizePx);

      const points = await their.pointsAt(vertices.map(({ share }) => share));
      for (const [k, { x, y }] of vertices.entries()) {
        const away = Math.hypot(x - points[k][0], y - points[k][1]);
        expect(away, `${label}: (${x}, ${y}) is (${points[k]}) in the browser`).toBeLessThanOrEqual(
          agree * length + 4e-7 * (Math.abs(x) + Math.abs(y)),
        );
      }

      expect({ label, stroked: shape.style.stroked, filled: shape.style.filled }).toEqual({
        label,
        stroked: their.stroked,
        filled: their.filled,
      });
      if (!their.stroked) continue;
      const [larger, smaller] = stretches(their.toScreen);
      const isSimilar = larger - smaller <= AGREE * larger;
      const width = widths.get(shape.ordinal);
      if (width === undefined) continue;
      expect(width !== null, `${label}: has one width`).toBe(isSimilar || their.nonScaling);
      if (width === null || !isSimilar) continue;
      const theirPx = their.strokeWidth * larger;
      expect(
        Math.abs(width * screen.pxPerUnit - theirPx),
        `${label}: ${width} wide, in the browser ${theirPx} px`,
      ).toBeLessThanOrEqual(AGREE * theirPx);
    }
  });
});

interface Own {
  readonly shape: Shape;
  /** In the shape's own units. */
  readonly length: number;
  /** Some points of the flattened curve, and at what share of the length they lie. */
  readonly vertices: readonly { readonly share: number; readonly x: number; readonly y: number }[];
}

/** Shapes that have a length, as the browser's are counted. */
function withLength({ shapes }: SvgDrawing): Own[] {
  return shapes.flatMap((shape) => {
    if (shape.tag === 'text' || shape.tag === 'image') return [];
    const { subpaths } = flatten(shape.path, IDENTITY, { piecesLeft: 1e6 });
    let length = 0;
    const all: { at: number; x: number; y: number }[] = [];
    for (const { points } of subpaths) {
      for (let i = 0; i < points.length; i += 2) {
        if (i > 0) length += Math.hypot(points[i] - points[i - 2], points[i + 1] - points[i - 1]);
        // Where one subpath ends and the next begins, the share of the length names both.
        if (i > 0 && i < points.length - 2) all.push({ at: length, x: points[i], y: points[i + 1] });
      }
    }
    if (length === 0) return [];
    const every = Math.ceil(all.length / 40);
    const vertices = all
      .filter((_, i) => i % every === 0)
      .map(({ at, x, y }) => ({ share: at / length, x, y }));
    if (shape.path.filter(({ kind }) => kind === 'move').length === 1 && subpaths.length === 1) {
      const { points } = subpaths[0];
      vertices.unshift({ share: 0, x: points[0], y: points[1] });
      vertices.push({ share: 1, x: points[points.length - 2], y: points[points.length - 1] });
    }
    return [{ shape, length, vertices }];
  });
}

interface Screen {
  readonly pxPerUnit: number;
  /** The longer side of the drawing. */
  readonly sizePx: number;
}

/**
 * CSS pixels per root unit as the drawing says, or the browser's where it does not (it then fills the window) and where the
 * two differ by the 1/64 px to which a browser cuts the page.
 */
async function screenOf(page: Page, { unitMm, widthMm, heightMm }: SvgDrawing): Promise<Screen> {
  const theirs = Number(
    await page.evaluate(
      '(({ a, b, c, d }) => Math.sqrt(a * d - b * c))(document.documentElement.getScreenCTM())',
    ),
  );
  const sizePx = Math.max(widthMm ?? 0, heightMm ?? 0) / PX_MM;
  if (sizePx === 0) return { pxPerUnit: theirs, sizePx: WINDOW_PX };
  const ours = unitMm / PX_MM;
  const shorterPx = Math.min(widthMm ?? sizePx * PX_MM, heightMm ?? sizePx * PX_MM) / PX_MM;
  const isCut = Math.abs(theirs / ours - 1) * shorterPx <= 1 / 64 + 1e-9;
  return { pxPerUnit: isCut ? theirs : ours, sizePx };
}

function scaled(matrix: Matrix, by: number): Matrix {
  return [by * matrix[0], by * matrix[1], by * matrix[2], by * matrix[3], by * matrix[4], by * matrix[5]];
}

/** How far the browser has put the shape from where we have it: the place of the viewBox in the window, one for a file. */
function shiftBetween(shape: Shape, their: BrowserShape, { pxPerUnit }: Screen): readonly [number, number] {
  const [, , , , e, f] = scaled(shape.toRoot, pxPerUnit);
  return [their.toScreen[4] - e, their.toScreen[5] - f];
}

/** Stroke widths in root units by ordinal, as the layout has them for its strokes. */
function strokeWidths(drawing: SvgDrawing): ReadonlyMap<number, number | null> {
  const widths = new Map<number, number | null>();
  for (const item of layOut(drawing, 'test.svg').items)
    if (item.kind === 'stroke') widths.set(item.ordinal, item.width);
  return widths;
}
