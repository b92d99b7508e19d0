import { describe, expect, it } from 'vitest';
import { readSvg } from '../../src/svg/read.ts';
import type { Matrix } from '../../src/svg/types.ts';
import { drawing, one, shapesOf } from './svg-text.ts';

const D = 'd="M0 0h1"';
const matrixOf = (content: string): Matrix => one(content).toRoot;
const close = (actual: Matrix, expected: readonly number[]) =>
  expected.forEach((value, i) => {
    expect(actual[i]).toBeCloseTo(value, 12);
  });

describe('transforms', () => {
  const [c, s] = [Math.cos(Math.PI / 6), 0.5];
  it.each([
    ['translate(10,5)scale(2)', [2, 0, 0, 2, 10, 5]],
    ['translate(3)', [1, 0, 0, 1, 3, 0]],
    ['translate(10-5)', [1, 0, 0, 1, 10, -5]],
    ['scale(2 -3)', [2, 0, 0, -3, 0, 0]],
    ['rotate(90)', [0, 1, -1, 0, 0, 0]],
    ['rotate(30)', [c, s, -s, c, 0, 0]],
    ['rotate(90 10 20)', [0, 1, -1, 0, 30, 10]],
    ['skewX(45)', [1, 0, 1, 1, 0, 0]],
    ['skewY(45)', [1, 1, 0, 1, 0, 0]],
    ['matrix(1 2 3 4 5 6)', [1, 2, 3, 4, 5, 6]],
    [' matrix(1,2,3,4,5,6) , translate(1 1) ', [1, 2, 3, 4, 9, 12]],
    ['none', [1, 0, 0, 1, 0, 0]],
    ['', [1, 0, 0, 1, 0, 0]],
  ])('%s', (transform, expected) => {
    close(matrixOf(`<path transform="${transform}" ${D}/>`), expected);
  });

  it.each([
    ['translate(1mm, 50%)', [1, 0, 0, 1, 96 / 25.4, 25]],
    ['rotate(.25turn)', [0, 1, -1, 0, 0, 0]],
    ['translate(10px,5px)scale(2)', [2, 0, 0, 2, 10, 5]],
    ['rotate(0) translate(0, 3px)', [1, 0, 0, 1, 0, 3]],
  ])('in CSS, %s', (transform, expected) => {
    close(matrixOf(`<path style="transform: ${transform}" ${D}/>`), expected);
  });

  it.each([
    ['transform="translate(10px,5px)"', /plain numbers/],
    ['transform="rotate(.25turn)"', /plain numbers/],
    ['transform="translateX(5)"', /is not known/],
    ['transform="translate(5),"', /cannot be read at ","/],
    ['transform="translate(5,)"', /plain numbers/],
    ['style="transform: translate(10,5)"', /has no unit in CSS/],
    ['style="transform: rotate(45)"', /write "45deg"/],
    ['style="transform: translate(10px 5px)"', /is no length/],
    ['style="transform: scale(2), scale(2)"', /cannot be read at ", scale/],
  ])('%s, which a browser ignores, is refused', (attributes, message) => {
    expect(() => matrixOf(`<path ${attributes} ${D}/>`)).toThrow(message);
  });

  it('nest from the outside in', () => {
    close(
      matrixOf(
        `<g transform="translate(10 0)"><g transform="rotate(90)"><path transform="scale(2)" ${D}/></g></g>`,
      ),
      [0, 2, -2, 0, 10, 0],
    );
  });

  it('turn about their origin', () => {
    close(matrixOf(`<path transform="rotate(90)" transform-origin="10 20" ${D}/>`), [0, 1, -1, 0, 30, 10]);
    close(
      matrixOf(`<path style="transform:rotate(180deg);transform-origin:center" ${D}/>`),
      [-1, 0, 0, -1, 100, 50],
    );
    close(
      matrixOf(`<path style="transform:rotate(180deg);transform-origin:top right" ${D}/>`),
      [-1, 0, 0, -1, 200, 0],
    );
  });

  it.each([
    'translate(abc 3)',
    'translate(1 2 3)',
    'rotate(1 2)',
    'scale()',
    'matrix(1 2 3)',
    'scale(1e400)',
    'rotate3d(1 1 1 5deg)',
    'translate(1 2',
    'translate(1) junk',
  ])('%s is refused by name', (transform) => {
    expect(() => one(`<path id="p" transform="${transform}" ${D}/>`)).toThrow(
      /^chip\.svg:1: <path> "p": .*transform|length/,
    );
  });

  it('other ways of CSS to move a shape are refused, not overlooked', () => {
    expect(() => one(`<path style="scale:2" ${D}/>`)).toThrow('write it as transform');
    expect(() => one(`<path style="transform:scale(2);transform-box:fill-box" ${D}/>`)).toThrow(
      'transform-box',
    );
  });

  it('a shape that its transform flattens is not drawn, and counted', () => {
    const { shapes, unread } = readSvg(drawing(`<path transform="scale(0 1)" ${D}/>`), 'chip.svg');
    expect(shapes).toEqual([]);
    expect(unread).toEqual({ 'shape flattened by its transform': 1 });
  });
});

describe('basic shapes', () => {
  const points = (content: string) =>
    one(content).path.map((c) => (c.kind === 'close' ? 'z' : [c.kind, c.x, c.y]));
  it.each([
    [
      '<line x1="1" y1="2" x2="3" y2="10%"/>',
      [
        ['move', 1, 2],
        ['line', 3, 5],
      ],
    ],
    [
      '<polyline points="1,2 3,4"/>',
      [
        ['move', 1, 2],
        ['line', 3, 4],
      ],
    ],
    ['<polygon points="1,2 3,4 5 6"/>', [['move', 1, 2], ['line', 3, 4], ['line', 5, 6], 'z']],
    [
      '<rect x="1" y="2" width="3" height="4"/>',
      [['move', 1, 2], ['line', 4, 2], ['line', 4, 6], ['line', 1, 6], 'z'],
    ],
    [
      '<circle cx="1" cy="2" r="3"/>',
      [['move', 4, 2], ['arc', 1, 5], ['arc', -2, 2], ['arc', 1, -1], ['arc', 4, 2], 'z'],
    ],
    [
      '<ellipse rx="3" ry="1"/>',
      [['move', 3, 0], ['arc', 0, 1], ['arc', -3, 0], ['arc', 0, -1], ['arc', 3, 0], 'z'],
    ],
  ])('%s', (content, expected) => {
    expect(points(content)).toEqual(expected);
  });

  it('a rounded rectangle takes one radius for both and half a side at most', () => {
    expect(one('<rect width="10" height="4" rx="1"/>').path.filter((c) => c.kind === 'arc')[0]).toMatchObject(
      { rx: 1, ry: 1 },
    );
    expect(one('<rect width="10" height="4" rx="3"/>').path.filter((c) => c.kind === 'arc')[0]).toMatchObject(
      { rx: 3, ry: 2 },
    );
    expect(one('<rect width="10" height="4" rx="3" ry="0"/>').path).toHaveLength(5);
  });

  it.each([
    ['<circle r="-1"/>', 'r "-1" is negative'],
    ['<rect width="abc" height="1"/>', 'width: "abc" is no length'],
    ['<polyline points="1 2 3"/>', 'not pairs'],
    ['<path d="M0 0 L1"/>', 'd ends too early'],
  ])('%s is refused', (content, message) => {
    expect(() => shapesOf(content)).toThrow(message);
  });
});

describe('use, symbol, nested svg, switch', () => {
  it('a use draws its target again, moved by x and y after its transform', () => {
    const [a, b] = shapesOf(`<path id="a" ${D}/><use xlink:href="#a" x="5" y="6" transform="scale(2)"/>`);
    expect(a.toRoot).toEqual([1, 0, 0, 1, 0, 0]);
    expect(b.toRoot).toEqual([2, 0, 0, 2, 10, 12]);
    expect(b.path).toEqual(a.path);
  });

  it('what a use draws inherits from the use', () => {
    expect(
      one(`<defs><path id="a" ${D}/></defs><use href="#a" stroke="red" stroke-width="4"/>`).style,
    ).toMatchObject({
      stroked: true,
      strokeWidth: 4,
    });
  });

  it('a copy of one shape goes by the name of its use, and of a group by its own', () => {
    const defs = '<defs><circle id="hole" r="1"/><g id="pair"><circle id="x" r="1"/></g></defs>';
    const shapes = shapesOf(
      `${defs}<g id="ports"><use id="in" href="#hole"/><use href="#hole"/></g><use id="copy" href="#pair"/>`,
    );
    expect(shapes.map((shape) => shape.name)).toEqual(['in', 'hole', 'x']);
    expect(shapes.map((shape) => shape.groups.map((group) => group.name))).toEqual([
      ['ports'],
      ['ports'],
      ['copy', 'pair'],
    ]);
  });

  it('a symbol is scaled from its viewBox to the size of the use', () => {
    const symbol = `<symbol id="s" viewBox="0 0 10 10"><path ${D}/></symbol>`;
    close(matrixOf(`${symbol}<use href="#s" x="1" y="2" width="20" height="30"/>`), [2, 0, 0, 2, 1, 7]);
    close(matrixOf(`${symbol}<use href="#s"/>`), [5, 0, 0, 5, 25, 0]);
    close(matrixOf(`<symbol id="s"><path ${D}/></symbol><use href="#s" x="3"/>`), [1, 0, 0, 1, 3, 0]);
  });

  it.each([
    ['', [2, 0, 0, 2, 5, 6 + 5]],
    ['preserveAspectRatio="xMinYMin"', [2, 0, 0, 2, 5, 6]],
    ['preserveAspectRatio="xMaxYMax slice"', [3, 0, 0, 3, 5 - 10, 6]],
    ['preserveAspectRatio="none"', [2, 0, 0, 3, 5, 6]],
  ])('a nested svg is fitted into its place: %s', (attributes, expected) => {
    const content = `<svg x="5" y="6" width="20" height="30" viewBox="0 0 10 10" ${attributes}><path ${D}/></svg>`;
    close(matrixOf(content), expected);
  });

  it('percentages refer to the nearest viewport', () => {
    const content = '<svg width="20" height="30" viewBox="0 0 10 10"><line x2="100%" y2="50%"/></svg>';
    expect(one(content).path[1]).toEqual({ kind: 'line', x: 10, y: 5 });
  });

  it('a switch draws its first child that needs no extension', () => {
    const content = `<switch><foreignObject requiredExtensions="x"/><g requiredExtensions="x"><path ${D}/></g>
      <g id="a"><path ${D}/></g><g id="b"><path ${D}/></g></switch>`;
    expect(one(content).groups.map((group) => group.name)).toEqual(['a']);
  });

  it('a use that draws itself is refused, however long the way round', () => {
    expect(() => shapesOf('<g id="a"><use href="#a"/></g>')).toThrow(
      '<use>: it draws "#a", which it is part of',
    );
    expect(() => shapesOf('<use id="a" href="#a"/>')).toThrow('which it is part of');
    expect(() =>
      shapesOf('<defs><g id="a"><use href="#b"/></g><g id="b"><use href="#a"/></g></defs><use href="#a"/>'),
    ).toThrow('which it is part of');
  });

  it.each(['', `<path ${D}/>`])(
    'uses of uses cannot draw more than the limit, also with %j at the end',
    (last) => {
      const level = (i: number) => `<g id="g${i + 1}"><use href="#g${i}"/><use href="#g${i}"/></g>`;
      const levels = Array.from({ length: 40 }, (_, i) => level(i)).join('');
      expect(() => shapesOf(`<defs><g id="g0">${last}</g>${levels}</defs><use href="#g40"/>`)).toThrow(
        'more than 500000 elements that use draws again (the limit)',
      );
    },
    120_000,
  );

  it('what is drawn and not read is counted by kind', () => {
    const content =
      '<foreignObject/><use/><use href="other.svg#a"/><use href="#none"/><script/><animate/><blink/><circle/>';
    expect(readSvg(drawing(content), 'chip.svg').unread).toEqual({
      foreignObject: 1,
      'use of nothing': 2,
      'use of another file': 1,
      script: 1,
      animate: 1,
      'unknown element': 1,
      'shape without size': 1,
    });
  });
});

describe('names and groups', () => {
  it.each([
    ['<path data-name=" a " k:label="b" id="d"><title>c</title></path>', 'a'],
    ['<path data-name=" " k:label="b" id="d"><title>c</title></path>', 'b'],
    ['<path id="d"><title> c </title></path>', 'c'],
    ['<path id="d"><title/></path>', 'd'],
    ['<path/>', null],
  ])('%s', (path, name) => {
    expect(one(`<g xmlns:k="urn:k">${path.replace('<path', `<path ${D}`)}</g>`).name).toBe(name);
  });

  it('groups come outermost first with name and depth, the outermost svg left out unless it has a depth', () => {
    const shape = one(
      `<g id="a" data-depth="80 um"><a><svg id="b"><path data-channel="" data-depth="1 um" ${D}/></svg></a></g>`,
    );
    expect(shape.groups).toEqual([
      { name: 'a', dataDepth: '80 um' },
      { name: 'b', dataDepth: null },
    ]);
    expect(shape).toMatchObject({ dataChannel: true, dataDepth: '1 um', ordinal: 0 });
    const text = `<svg id="root" data-depth="9 um" xmlns="http://www.w3.org/2000/svg"><path ${D}/></svg>`;
    expect(readSvg(text, 'chip.svg').shapes[0].groups).toEqual([{ name: null, dataDepth: '9 um' }]);
  });

  it('siblings share one chain of groups', () => {
    const [a, b] = shapesOf(`<g id="a"><path ${D}/><path ${D}/></g>`);
    expect(a.groups).toBe(b.groups);
  });
});

describe('the size of a user unit', () => {
  const PX = 25.4 / 96;
  it.each([
    ['width="76mm" height="26mm" viewBox="0 0 76 26"', 1, true, 76, 26],
    ['width="7.6cm" height="2.6cm" viewBox="0 0 76000 26000"', 1e-3, true, 76, 26],
    ['width="3in" viewBox="0 0 300 100"', 0.254, true, 76.2, 25.4],
    ['height="72pt" viewBox="0 0 100 100"', 0.254, true, 25.4, 25.4],
    ['width="100%" height="26mm" viewBox="0 0 76 26"', 1, true, 76, 26],
    ['width="96" height="96" viewBox="0 0 48 48"', 2 * PX, false, 25.4, 25.4],
    ['width="96px" viewBox="0 0 96 96"', PX, false, 25.4, 25.4],
    ['viewBox="0 0 48 48"', PX, false, null, null],
    ['width="100%" height="100%" viewBox="0 0 48 48"', PX, false, null, null],
    ['', PX, false, null, null],
    ['width="76mm" height="26mm"', PX, true, 76, 26],
    ['width="100mm" height="200mm" viewBox="0 0 100 100"', 1, true, 100, 200],
    [
      'width="100mm" height="200mm" viewBox="0 0 100 100" preserveAspectRatio="xMidYMid slice"',
      2,
      true,
      100,
      200,
    ],
    ['width="100mm" height="960" viewBox="0 0 100 100"', 1, true, 100, 254],
    ['width="200mm" height="96" viewBox="0 0 100 100"', 0.254, false, 200, 25.4],
  ])('%s', (attributes, unitMm, unitStated, widthMm, heightMm) => {
    const read = readSvg(`<svg xmlns="http://www.w3.org/2000/svg" ${attributes}/>`, 'chip.svg');
    expect(read.unitMm).toBeCloseTo(unitMm, 14);
    expect(read.unitStated).toBe(unitStated);
    if (widthMm === null) expect(read.widthMm).toBeNull();
    else expect(read.widthMm).toBeCloseTo(widthMm, 10);
    if (heightMm === null) expect(read.heightMm).toBeNull();
    else expect(read.heightMm).toBeCloseTo(heightMm, 10);
  });

  it('millimetres drawn as millimetres are exact, and the reason says how', () => {
    const read = readSvg(drawing(''), 'chip.svg');
    expect(read.unitMm).toBe(1);
    expect(read.unitReason).toBe('width 100mm over viewBox width 100');
  });

  it('a drawing stretched by preserveAspectRatio="none" has no similarity left', () => {
    const attributes = 'width="100mm" height="200mm" viewBox="0 0 100 100" preserveAspectRatio="none"';
    const read = readSvg(
      `<svg xmlns="http://www.w3.org/2000/svg" ${attributes}><path ${D}/></svg>`,
      'chip.svg',
    );
    expect(read.unitMm).toBe(1);
    expect(read.shapes[0].toRoot).toEqual([1, 0, 0, 2, 0, 0]);
  });

  it.each([
    ['width="0"', 'width "0" is not above zero'],
    ['width="76 furlong"', 'width "76 furlong" is no length'],
    ['viewBox="0 0 76"', 'viewBox "0 0 76" is not "x y width height"'],
    ['viewBox="0 0 0 26"', 'viewBox has no width or height'],
    [
      'width="1mm" height="1mm" viewBox="0 0 1 1" preserveAspectRatio="middle"',
      'preserveAspectRatio "middle"',
    ],
  ])('%s is refused', (attributes, message) => {
    expect(() => readSvg(`<svg xmlns="http://www.w3.org/2000/svg" ${attributes}/>`, 'chip.svg')).toThrow(
      `chip.svg:1: <svg>: ${message}`,
    );
  });
});
