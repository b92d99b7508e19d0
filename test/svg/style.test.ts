import { describe, expect, it } from 'vitest';
import { readSvg } from '../../src/svg/read.ts';
import { drawing, one, shapesOf } from './svg-text.ts';

const D = 'd="M0 0h1"';

describe('a stroke is there when it is visible', () => {
  it.each([
    ['', false],
    ['stroke="none"', false],
    ['stroke="red"', true],
    ['stroke="#0000"', false],
    ['stroke="#12345600"', false],
    ['stroke="#123456"', true],
    ['stroke="transparent"', false],
    ['stroke="rgb(0, 0, 0)"', true],
    ['stroke="rgba(0, 0, 0, 0)"', false],
    ['stroke="rgba(0, 0, 0, 0.5)"', true],
    ['stroke="hsl(0 0% 0% / 0%)"', false],
    ['stroke="hsl(0 0% 0% / 1%)"', true],
    ['stroke="url(#gradient)"', true],
    ['stroke="red" stroke-opacity="0"', false],
    ['stroke="red" stroke-opacity="0%"', false],
    ['stroke="red" stroke-width="0"', false],
    ['stroke="currentColor"', true],
    ['stroke="currentColor" color="transparent"', false],
    ['stroke="red" style="stroke:none"', false],
    ['style="stroke: red; stroke: none !important; stroke: blue"', false],
    ['STROKE="red"', false],
  ])('%s', (attributes, stroked) => {
    expect(one(`<path ${attributes} ${D}/>`).style.stroked).toBe(stroked);
  });
});

describe('a fill is there when it is visible', () => {
  it.each([
    ['', true],
    ['fill="none"', false],
    ['fill-opacity="0"', false],
    ['style="fill:none"', false],
    ['style="fill:none;fill:initial"', true],
  ])('%s', (attributes, filled) => {
    expect(one(`<path ${attributes} ${D}/>`).style.filled).toBe(filled);
  });
});

describe('stroke widths', () => {
  it.each([
    ['', 1],
    ['stroke-width="0.1"', 0.1],
    ['stroke-width="1mm"', 96 / 25.4],
    ['stroke-width=".5cm"', 960 / 25.4 / 2],
    ['stroke-width="1in"', 96],
    ['stroke-width="3pt"', 4],
    ['stroke-width="1pc"', 16],
    ['stroke-width="4Q"', 96 / 25.4],
    ['stroke-width="2px"', 2],
    ['stroke-width="10%"', Math.sqrt((100 ** 2 + 50 ** 2) / 2) / 10],
    ['stroke-width="1" style="stroke-width:2"', 2],
    ['stroke-width="1" style="stroke-width:inherit"', 3],
  ])('%s', (attributes, width) => {
    const shape = one(
      `<g stroke="red" ${attributes.includes('inherit') ? 'stroke-width="3"' : ''}><path ${attributes} ${D}/></g>`,
    );
    expect(shape.style.strokeWidth).toBeCloseTo(width, 12);
  });

  it.each(['abc', '-1', '1e400', 'calc(1px)', 'var(--w)', '1 mm'])(
    '%j is refused and not replaced',
    (text) => {
      expect(() => one(`\n<path id="lane" stroke="red" stroke-width="${text}" ${D}/>`)).toThrow(
        /^chip\.svg:2: <path> "lane": stroke-width/,
      );
    },
  );

  it('an unreadable width that nothing is drawn with does no harm', () => {
    expect(one(`<path stroke-width="abc" ${D}/>`).style.stroked).toBe(false);
  });
});

describe('dashes, caps and disguises', () => {
  it.each([
    ['', false],
    ['stroke-dasharray="none"', false],
    ['stroke-dasharray="2 1"', true],
    ['stroke-dasharray="2"', true],
    ['stroke-dasharray="0"', false],
    ['stroke-dasharray="5 0"', false],
    ['stroke-dasharray="1mm, 2%"', true],
    ['stroke-dasharray="-1 2"', false],
  ])('%s', (attributes, dashed) => {
    expect(one(`<path stroke="red" ${attributes} ${D}/>`).style.dashed).toBe(dashed);
  });

  it('the cap is inherited, the vector effect is not', () => {
    const shape = one(`<g stroke-linecap="round" vector-effect="non-scaling-stroke"><path ${D}/></g>`);
    expect(shape.style).toMatchObject({ linecap: 'round', nonScalingStroke: false });
    expect(one(`<path vector-effect="non-scaling-stroke" ${D}/>`).style.nonScalingStroke).toBe(true);
  });

  it('what hides or adds to a stroke is named, also on a group', () => {
    const text = `<g clip-path="url(#c)" opacity="0"><path style="mask:url(#m);marker:url(#k)" filter="url(#f)" ${D}/></g>`;
    expect(one(text).style.disguises).toEqual(['clip-path', 'opacity', 'mask', 'filter', 'marker']);
    expect(one(`<path opacity="0.5" clip-path="none" ${D}/>`).style.disguises).toEqual([]);
  });
});

describe('what is not drawn is not there', () => {
  it.each([
    `<path display="none" ${D}/>`,
    `<g style="display:none"><path style="display:inline" ${D}/></g>`,
    `<path visibility="hidden" ${D}/>`,
    `<g visibility="collapse"><path ${D}/></g>`,
    `<defs><path ${D}/></defs>`,
    `<symbol><path ${D}/></symbol>`,
    `<clipPath><path ${D}/></clipPath><mask><path ${D}/></mask><pattern><path ${D}/></pattern><marker><path ${D}/></marker>`,
    '<circle/><rect width="1"/><path/><path d="none"/><polyline/>',
  ])('%s', (content) => {
    expect(shapesOf(content)).toEqual([]);
  });

  it('a visible child of a hidden group is there', () => {
    expect(shapesOf(`<g visibility="hidden"><path visibility="visible" ${D}/></g>`)).toHaveLength(1);
  });
});

describe('style sheets', () => {
  const widthUnder = (
    css: string,
    path = `<g id="g" class="k"><path id="p" class="a b" ${D}/></g>`,
  ): number => one(`<style>${css}</style><g stroke="red">${path}</g>`).style.strokeWidth;

  it.each([
    ['path{stroke-width:2}', 2],
    ['.a{stroke-width:2} path{stroke-width:3}', 2],
    ['#p{stroke-width:2} .a.b{stroke-width:3}', 2],
    ['.a{stroke-width:2} .b{stroke-width:3}', 3],
    ['.a{stroke-width:2 !important} #p{stroke-width:3}', 2],
    ['#g > path{stroke-width:2} .k path{stroke-width:3}', 2],
    ['path:not(.c){stroke-width:2}', 2],
    ['path:first-child{stroke-width:2} path{stroke-width:3}', 2],
    [':is(#x, path){stroke-width:2} .a.b{stroke-width:3}', 2],
    [':where(#p){stroke-width:2} path{stroke-width:3}', 3],
    ['[id=p]{stroke-width:2} path{stroke-width:3}', 2],
    ['g{stroke-width:2}', 2],
    ['rect, path{stroke-width:2}', 2],
    ['PATH{stroke-width:2}', 1],
    ['@media print{path{stroke-width:2}}', 1],
    ['@media screen, print{path{stroke-width:2}}', 2],
    ['@media all{path{stroke-width:2}} path{stroke-width:3}', 3],
    ['path::before{stroke-width:2}', 1],
    ['<!-- path{stroke-width:2} -->'.replace(/[<>]/g, (c) => (c === '<' ? '&lt;' : '&gt;')), 2],
  ])('%s', (css, width) => {
    expect(widthUnder(css)).toBe(width);
  });

  it('attributes give way to rules, rules to style, style to importance', () => {
    const path = (rule: string, style: string) =>
      widthUnder(`path{stroke-width:2${rule}}`, `<path stroke-width="4" ${style} ${D}/>`);
    expect(path('', '')).toBe(2);
    expect(path('', 'style="stroke-width:3"')).toBe(3);
    expect(path(' !important', 'style="stroke-width:3"')).toBe(2);
    expect(path(' !important', 'style="stroke-width:3!important"')).toBe(3);
  });

  it('a rule that cannot be read is passed over and counted, never a crash', () => {
    const css =
      'path::x{a:b} path:unknown, path{stroke:red} k|path{a:b} @import url(http://x/y); @supports (a:b){} ] {';
    const { shapes, unread } = readSvg(drawing(`<style>${css}</style><path ${D}/>`), 'chip.svg');
    expect(shapes[0].style.stroked).toBe(false);
    expect(unread['style rule']).toBeGreaterThanOrEqual(5);
  });

  it('sheets for print, of another language, or of another namespace are not applied', () => {
    const css = 'path{stroke-width:2}';
    const sheets = `<style media="print">${css}</style><style type="text/x">${css}</style><style xmlns="urn:x">${css}</style>`;
    expect(one(`${sheets}<path stroke="red" ${D}/>`).style.strokeWidth).toBe(1);
  });

  it('geometry and transform may come from CSS', () => {
    const shape = one('<style>circle{r:2px;transform:translate(1px,2px)}</style><circle r="9"/>');
    expect(shape.path[0]).toEqual({ kind: 'move', x: 2, y: 0 });
    expect(shape.toRoot).toEqual([1, 0, 0, 1, 1, 2]);
  });

  it('selectors that cost too much end with the name of the limit', () => {
    const text = drawing(`<style>path:nth-child(2n){stroke:red}</style>${`<path ${D}/>`.repeat(25_000)}`);
    expect(() => readSvg(text, 'chip.svg')).toThrow(
      '<style> rules take over 200000000 steps to match (the limit)',
    );
  });
});
