import { describe, expect, test } from 'vitest';
import { clippedLine } from '../../src/report/clipped-line.ts';
import { drawMap } from '../../src/report/map.ts';
import { chipGeometry } from '../../src/report/map-geometry.ts';
import { type MapOptions, PALE_FILL, PALE_LINE } from '../../src/report/map-types.ts';
import { writePdf } from '../../src/report/pdf/document.ts';
import { svgPicture } from '../../src/report/svg.ts';
import { readSvg } from '../../src/svg/read.ts';
import { reportOf } from './demo.ts';
import { fonts } from './fonts.ts';
import { readPdf } from './read-pdf.ts';

const options: MapOptions = {
  quantity: 'pressure',
  widthMm: 100,
  heightMm: 80,
  labelSizeMm: 2,
  measure: (text, sizeMm) => 0.6 * sizeMm * text.length,
  readable: (name) => name,
  findingNumbers: false,
  reachLabels: false,
};

const SHEET = 'depth: 1 mm\nports_layer: holes\nports: { in: { pressure: 1 kPa }, out: open }\n';
const chip = (more: string): string =>
  `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="20mm" viewBox="0 0 40 20"><path id="wide" d="M4 10H36" fill="none" stroke="#000" stroke-width="4"/><g id="holes"><circle id="in" cx="4" cy="10" r="2.2"/><circle id="out" cx="36" cy="10" r="2.2"/></g>${more}</svg>`;
const POSTS = '<circle cx="15" cy="10" r=".5"/><rect x="20" y="9.5" width="1" height="1"/>';
const ART =
  '<path d="M10 11.9L30 50" stroke="#000" stroke-dasharray="1 1"/><rect x="12" y="7" width="1" height=".2"/>';

describe('what is drawn and was not read', () => {
  test('is in the map pale: obstacles on their channel, the rest under it, cut off at the figure', async () => {
    const [one] = (await reportOf('c', chip(POSTS + ART), SHEET)).cases;
    const drawing = drawMap(one, chipGeometry(one.network.chip), options);
    const { under, over } = drawing.unread;
    expect(over).toHaveLength(2);
    expect(under).toHaveLength(2);
    for (const line of under) {
      for (let i = 0; i < line.length; i += 2) {
        expect(line[i]).toBeGreaterThanOrEqual(-1e-9);
        expect(line[i]).toBeLessThanOrEqual(drawing.widthMm + 1e-9);
        expect(line[i + 1]).toBeGreaterThanOrEqual(-1e-9);
        expect(line[i + 1]).toBeLessThanOrEqual(drawing.heightMm + 1e-9);
      }
    }
    expect(drawing.caption).toContain('Pale: drawn, but not read.');
  });

  test('does not change the scale of the map, and a map of a drawing that is read whole says nothing of it', async () => {
    const [plain] = (await reportOf('c', chip(''), SHEET)).cases;
    const [full] = (await reportOf('c', chip(ART), SHEET)).cases;
    const map = drawMap(plain, chipGeometry(plain.network.chip), options);
    expect(drawMap(full, chipGeometry(full.network.chip), options).scale).toBe(map.scale);
    expect(map.unread).toEqual({ under: [], over: [] });
    expect(map.caption).not.toContain('Pale');
  });

  test('is in the SVG picture and in the PDF', async () => {
    const report = await reportOf('c', chip(POSTS + ART), SHEET);
    const text = svgPicture(report.cases[0], { quantity: 'pressure' });
    expect(text).toContain(`fill="${PALE_FILL}" fill-rule="evenodd" stroke="${PALE_LINE}"`);
    expect(text).toContain(`fill="none" stroke="${PALE_LINE}"`);
    expect(() => readSvg(text, 'picture.svg')).not.toThrow();
    const date = new Date('2026-05-04T08:00:00Z');
    const pdf = await readPdf(await writePdf(report, { fonts, paper: 'a4', date }));
    const words = pdf.pages.flatMap(({ texts }) => texts.map((one) => one.text)).join(' ');
    expect(words).toContain('Pale: drawn, but not read.');
    expect(words).toContain('2 drawn shapes stand in wide');
  });

  test('fills the picture of a drawing in which no channel was read', async () => {
    const fills = chip('').replace(
      '<path id="wide" d="M4 10H36" fill="none" stroke="#000" stroke-width="4"/>',
      '<path d="M4 8H36V12H4z"/>',
    );
    const [one] = (await reportOf('c', fills, SHEET)).cases;
    const { unread, scale } = drawMap(one, chipGeometry(one.network.chip), options);
    expect(unread.under).toHaveLength(1);
    expect(scale).toBeLessThan(5);
  });
});

describe('a line cut off at a box', () => {
  const box = { x: 0, y: 0, width: 10, height: 10 };
  test.each([
    ['inside', [1, 1, 9, 9], [[1, 1, 9, 9]]],
    ['through', [-5, 5, 15, 5], [[0, 5, 10, 5]]],
    [
      'in and out and in',
      [5, 5, 15, 5, 15, 8, 5, 8],
      [
        [5, 5, 10, 5],
        [10, 8, 5, 8],
      ],
    ],
    ['past a corner', [-6, 5, 2, 13], []],
    ['outside', [11, 0, 11, 10], []],
    ['a bend inside', [-5, 5, 5, 5, 5, 15], [[0, 5, 5, 5, 5, 10]]],
  ])('%s', (_, line, parts) => {
    const cut = clippedLine(line, box);
    expect(cut).toHaveLength(parts.length);
    for (const [i, part] of cut.entries())
      for (const [k, value] of part.entries()) expect(value).toBeCloseTo(parts[i][k], 12);
  });
});
