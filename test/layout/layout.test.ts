import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.ts';
import { layOut } from '../../src/layout/layout.ts';
import type { Layout, LayoutItem, Stroke } from '../../src/layout/types.ts';
import { readSvg } from '../../src/svg/read.ts';
import { drawing } from '../svg/svg-text.ts';

const layoutOf = (content: string): Layout => layOut(readSvg(drawing(content), 'chip.svg'), 'chip.svg');
const itemsOf = (content: string): readonly LayoutItem[] => layoutOf(content).items;
const strokeOf = (content: string): Stroke => {
  const [item] = itemsOf(content);
  if (item?.kind !== 'stroke') throw new Error(`not a stroke: ${item?.kind}`);
  return item;
};
/** stroke; hole or outline with f(illed) and s(troked); ignored with its reason. */
const said = (content: string): string[] =>
  itemsOf(content).map((item) => {
    if (item.kind === 'stroke') return 'stroke';
    if (item.kind === 'ignored') return `ignored ${item.reason}`;
    if (item.kind === 'outline') return `outline${item.stroked ? ' s' : ''}`;
    return `hole${item.filled ? ' f' : ''}${item.stroked ? ' s' : ''}`;
  });

const S = 'stroke="red"';
const U = 'stroke="red" fill="none"';
const RING = 'M-2 0a2 2 0 114 0 2 2 0 11-4 0';
const K = 0.5522847498;
const CUBICS = `M1 0C1 ${K} ${K} 1 0 1C-${K} 1-1 ${K}-1 0C-1-${K}-${K}-1 0-1C${K}-1 1-${K} 1 0z`;

describe('what a drawn shape is on a chip', () => {
  it.each([
    // Centrelines: open whether filled or not, closed only when unfilled.
    [`<path ${S} d="M0 0h9"/>`, ['stroke']],
    [`<path ${S} d="M0 0h9v9"/>`, ['stroke']],
    [`<polyline ${S} points="0 0 9 0 9 9"/>`, ['stroke']],
    [`<polyline ${S} points="0 0 9 0 9 9 0 0"/>`, ['stroke']],
    [`<line ${S} x2="9"/>`, ['stroke']],
    [`<polygon ${U} points="0 0 9 0 9 9"/>`, ['stroke']],
    [`<rect ${U} width="9" height="5"/>`, ['stroke']],
    [`<path ${U} d="M0 0h9v9z"/>`, ['stroke']],
    [`<path ${U} d="${RING}z"/>`, ['stroke']],
    [`<path ${S} d="M0 0h9v9zM20 0h5"/>`, ['stroke']],
    [`<circle data-channel="" ${U} r="3"/>`, ['stroke']],
    [`<ellipse data-channel="" ${U} rx="3" ry="1"/>`, ['stroke']],
    // What the drawing says is a channel is one by its stroke, whatever fills it.
    [`<circle data-channel="" ${S} r="3"/>`, ['stroke']],
    [`<path data-channel="" ${S} d="M0 0h9v9z"/>`, ['stroke']],
    // Closed and filled: outlines.
    [`<path ${S} d="M0 0h9v9z"/>`, ['outline s']],
    [`<polygon points="0 0 9 0 9 9"/>`, ['outline']],
    [`<rect ${S} width="9" height="5"/>`, ['outline s']],
    ['<rect width="9" height="5"/>', ['outline']],
    ['<ellipse rx="3" ry="1"/>', ['outline']],
    ['<circle data-channel="" r="3"/>', ['outline']],
    [`<path d="M0 0h9v9H0V0"/>`, ['outline']],
    // A fill closes what it fills.
    ['<path d="M0 0h9v9"/>', ['outline']],
    ['<path d="M0 0h9v9zM20 0h9v9"/>', ['outline']],
    [`<path d="${RING}zM-1 0a1 1 0 112 0 1 1 0 11-2 0z"/>`, ['outline']],
    // Circles, and what is round.
    ['<circle r="3"/>', ['hole f']],
    [`<circle ${S} r="3"/>`, ['hole f s']],
    [`<circle ${U} r="3"/>`, ['hole s']],
    [`<circle ${U} stroke-dasharray="1 1" r="3"/>`, ['ignored dashed stroke']],
    [`<circle ${S} stroke-dasharray="1 1" r="3"/>`, ['hole f']],
    ['<circle fill="none" r="3"/>', []],
    [`<ellipse ${U} rx="3" ry="2.98"/>`, ['hole s']],
    [`<ellipse ${U} rx="3" ry="2.96"/>`, ['ignored ellipse']],
    ['<circle transform="scale(1 1.009)" r="3"/>', ['hole f']],
    ['<circle transform="scale(1 1.011)" r="3"/>', ['outline']],
    [`<path d="${RING}z"/>`, ['hole f']],
    [`<path d="${RING}"/>`, ['hole f']],
    [`<path ${S} d="${RING}z"/>`, ['hole f s']],
    [`<path ${S} d="${RING}"/>`, ['stroke']],
    [`<path d="${CUBICS}"/>`, ['hole f']],
    [`<path transform="scale(1 1.02)" d="${CUBICS}"/>`, ['outline']],
    ['<rect width="4" height="4" rx="2"/>', ['hole f']],
    ['<rect width="4" height="4" rx="1.9"/>', ['outline']],
    [`<path d="M-2 0A2 2 0 0 1 2 0A2 2 0 0 0-2 0z"/>`, ['outline']],
    // Ignored, and not there.
    ['<text>a</text><image/>', ['ignored text', 'ignored image']],
    [`<path ${U} stroke-dasharray="2 1" d="M0 0h9"/>`, ['ignored dashed stroke']],
    [`<rect ${U} stroke-dasharray="2 1" width="9" height="5"/>`, ['ignored dashed stroke']],
    ['<path d="M0 0h9"/>', ['ignored fill']],
    ['<line x2="9"/>', []],
    ['<path fill="none" d="M0 0h9"/>', []],
    [`<path ${S} d="M1 1z"/>`, []],
  ])('%s', (content, expected) => {
    expect(said(content)).toEqual(expected);
  });

  it('a regular polygon is round from 23 corners on, when its sides too are within 1 %', () => {
    const polygon = (n: number) => {
      const corners = Array.from({ length: n }, (_, i) => {
        const angle = (2 * Math.PI * i) / n;
        return `${Math.cos(angle)} ${Math.sin(angle)}`;
      });
      return `<polygon points="${corners.join(' ')}"/>`;
    };
    // 1 / cos(π/n) ≤ 1.01
    expect(said(polygon(22))).toEqual(['outline']);
    expect(said(polygon(23))).toEqual(['hole f']);
  });
});

describe('holes', () => {
  it.each([
    ['<circle cx="3" cy="4" r="2"/>', 3, 4, 2],
    ['<circle cx="3" cy="4" r="2" transform="translate(1 1) rotate(90) scale(2)"/>', -7, 7, 4],
    [`<circle ${S} stroke-width="9" r="2"/>`, 0, 0, 2],
    ['<ellipse rx="2" ry="1.99"/>', 0, 0, 1.995],
    [`<path d="${RING}z" transform="translate(10 20)"/>`, 10, 20, 2],
    // Two arcs of very different length: the fit does not lean to the finer cut.
    ['<path d="M2 0A2 2 0 1 1 1.2-1.6A2 2 0 0 1 2 0z"/>', 0, 0, 2],
  ])('%s', (content, x, y, radius) => {
    const [hole] = itemsOf(content);
    if (hole.kind !== 'hole') throw new Error(hole.kind);
    expect(hole.x).toBeCloseTo(x, 10);
    expect(hole.y).toBeCloseTo(y, 10);
    expect(hole.radius).toBeCloseTo(radius, 10);
  });
});

describe('stroke widths follow the full transform', () => {
  it.each([
    ['', 0.2],
    ['transform="rotate(33) scale(3)"', 0.6],
    ['transform="scale(-2 2) translate(5 6)"', 0.4],
    ['transform="scale(1 1.0000005)"', 0.2],
    ['transform="scale(1 1.00001)"', null],
    ['transform="skewX(10)"', null],
    ['transform="scale(3)" vector-effect="non-scaling-stroke"', 0.2 * (25.4 / 96)],
  ])('%s', (attributes, width) => {
    const stroke = strokeOf(`<path ${S} stroke-width="0.2" ${attributes} d="M0 0h9"/>`);
    if (width === null) expect(stroke.width).toBeNull();
    else expect(stroke.width).toBeCloseTo(width, 6);
  });
});

describe('strokes', () => {
  it('have a centreline for each subpath, with the bend of its curves', () => {
    const { centrelines } = strokeOf(`<rect ${U} width="10" height="6" rx="1"/>`);
    expect(centrelines).toHaveLength(1);
    const { points, bendRadius, closed } = centrelines[0];
    expect(closed).toBe(true);
    expect([...points.slice(0, 4)]).toEqual([1, 0, 9, 0]);
    expect([...points.slice(-2)]).toEqual([1, 0]);
    expect(bendRadius.filter((radius) => radius === 0)).toHaveLength(4);
    expect(bendRadius.filter((radius) => Math.abs(radius - 1) < 1e-12)).toHaveLength(bendRadius.length - 4);
    expect(strokeOf(`<path ${U} d="M0 0h9v9zM20 0h5"/>`).centrelines.map((line) => line.closed)).toEqual([
      true,
      false,
    ]);
  });

  it('carry name, groups, depth, cap and disguises', () => {
    const content = `<g id="lower" data-depth="80 um"><g><g id="inner" clip-path="url(#c)">
      <path id="a" ${S} stroke-linecap="round" d="M0 0h9"/><path id="b" data-depth="5 um" ${S} d="M0 0h9"/></g></g></g>`;
    const [a, b] = itemsOf(content);
    expect(a).toMatchObject({
      ordinal: 0,
      name: 'a',
      id: 'a',
      groups: ['lower', 'inner'],
      dataDepth: '80 um',
    });
    expect(a).toMatchObject({ linecap: 'round', disguises: ['clip-path'] });
    expect(b).toMatchObject({ ordinal: 1, dataDepth: '5 um' });
  });

  it('an invisible one is still there, and says so', () => {
    expect(strokeOf(`<path ${S} opacity="0" d="M0 0h9"/>`).disguises).toEqual(['opacity']);
  });
});

it('outlines and ignored shapes keep their rings, for a chip edge may be among them', () => {
  const [edge, dashed] = itemsOf(
    `<rect width="4" height="2"/><rect ${U} stroke-dasharray="1 1" width="4" height="2" transform="scale(2)"/>`,
  );
  if (edge.kind !== 'outline' || dashed.kind !== 'ignored') throw new Error('other kinds');
  expect([...edge.rings[0]]).toEqual([0, 0, 4, 0, 4, 2, 0, 2, 0, 0]);
  expect([...dashed.rings[0]]).toEqual([0, 0, 8, 0, 8, 4, 0, 4, 0, 0]);
});

it('subpaths without length are counted', () => {
  expect(layoutOf(`<path ${S} d="M1 1L1 1M0 0h9"/><script/>`).unread).toEqual({
    'subpath without length': 1,
    script: 1,
  });
});

it('the size of the unit is handed on', () => {
  expect(layoutOf('')).toMatchObject({ unitMm: 1, unitStated: true, widthMm: 100, heightMm: 50 });
});

it('a shape out of all bounds is refused by name', () => {
  const far = (content: string) => () => layoutOf(content);
  expect(far(`<path id="p" ${S} d="M0 0H1e13"/>`)).toThrow(InputError);
  expect(far(`<path id="p" ${S} d="M0 0H1e13"/>`)).toThrow(
    'chip.svg: <path> "p": a point lies beyond ±1000000000000 units',
  );
  expect(far('<circle cx="1e13" r="1"/>')).toThrow('chip.svg: <circle> number 1: it lies beyond');
});

it('a stroke that leaves its nested svg says so, one within it or with overflow shown does not', () => {
  const nested = (attributes: string, d: string): string =>
    `<svg x="10" y="5" width="20" height="10" viewBox="0 0 40 20" ${attributes}><path ${S} d="${d}"/></svg>`;
  expect(strokeOf(nested('', 'M0 10h40')).disguises).toEqual([]);
  expect(strokeOf(nested('', 'M0 10h41')).disguises).toEqual(['clip-path']);
  expect(strokeOf(nested('transform="rotate(30)"', 'M20 -1v9')).disguises).toEqual(['clip-path']);
  expect(strokeOf(nested('overflow="visible"', 'M0 10h41')).disguises).toEqual([]);
  expect(strokeOf(nested('style="overflow: auto"', 'M0 10h41')).disguises).toEqual([]);
});
