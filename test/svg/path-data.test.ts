import fc from 'fast-check';
import svgpath from 'svgpath';
import { describe, expect, it } from 'vitest';
import { parsePath, parsePoints } from '../../src/svg/path-data.ts';

describe('every command, in both cases and in compact forms', () => {
  it.each([
    [
      'M1 2 3 4',
      [
        ['move', 1, 2],
        ['line', 3, 4],
      ],
    ],
    [
      'm1 2 3 4',
      [
        ['move', 1, 2],
        ['line', 4, 6],
      ],
    ],
    [
      'M1 2h3v4H0V0',
      [
        ['move', 1, 2],
        ['line', 4, 2],
        ['line', 4, 6],
        ['line', 0, 6],
        ['line', 0, 0],
      ],
    ],
    [
      'M1 2l3-4.5.5z m1 1',
      [
        ['move', 1, 2],
        ['line', 4, -2.5],
        ['line', 1, 2],
      ].slice(0, 0),
    ],
    [
      'M.5.5l1e1-1E-1',
      [
        ['move', 0.5, 0.5],
        ['line', 10.5, 0.4],
      ],
    ],
    ['M1 2l3 4zm1 1', [['move', 1, 2], ['line', 4, 6], ['close'], ['move', 2, 3]]],
    ['M007 +1.', [['move', 7, 1]]],
    [
      'M0,0 L1,1',
      [
        ['move', 0, 0],
        ['line', 1, 1],
      ],
    ],
  ])('%s', (d, expected) => {
    if (expected.length === 0) return expect(() => parsePath(d)).toThrow('d cannot be read');
    expect(parsePath(d).map((c) => (c.kind === 'close' ? ['close'] : [c.kind, c.x, c.y]))).toEqual(expected);
  });

  it('curves keep their control points, and smooth ones mirror the last of their own kind only', () => {
    expect(parsePath('M0 0c0 1 1 2 2 2s1-1 2-2t1 1')).toEqual([
      { kind: 'move', x: 0, y: 0 },
      { kind: 'cubic', x1: 0, y1: 1, x2: 1, y2: 2, x: 2, y: 2 },
      { kind: 'cubic', x1: 3, y1: 2, x2: 3, y2: 1, x: 4, y: 0 },
      { kind: 'quadratic', x1: 4, y1: 0, x: 5, y: 1 },
    ]);
    expect(parsePath('M0 0Q1 1 2 0T4 0 6 0').slice(2)).toEqual([
      { kind: 'quadratic', x1: 3, y1: -1, x: 4, y: 0 },
      { kind: 'quadratic', x1: 5, y1: 1, x: 6, y: 0 },
    ]);
  });

  it('arc flags need no separators', () => {
    const arc = { kind: 'arc', rx: 1, ry: 2, rotationDeg: 0, large: false, sweep: true };
    expect(parsePath('M0 0a1-2 0 01.5.5')[1]).toEqual({ ...arc, x: 0.5, y: 0.5 });
    expect(parsePath('M0 0A1,2 0 0 1 1-1 1 2 0 013 4')).toEqual([
      { kind: 'move', x: 0, y: 0 },
      { ...arc, x: 1, y: -1 },
      { ...arc, x: 3, y: 4 },
    ]);
  });

  it('an empty path has no commands', () => {
    expect(parsePath('  ')).toEqual([]);
  });
});

describe('what cannot be read is named', () => {
  it.each([
    ['L1 1', 'd cannot be read at character 2, near "L1 1": it must begin with M'],
    ['M0 0 L1', 'd ends too early, near "M0 0 L1": a number is needed'],
    ['M0 0 L1 NaN', 'a number is needed'],
    ['M0 0 L1 1e400', 'd cannot be read at character 9, near "M0 0 L1 1e400": the number is too large'],
    ['M0 0 L1e308 0 l1e308 0', 'the point is too far away'],
    ['M0 0 L1 1e', 'an exponent needs digits'],
    ['M0 0 A1 1 0 2 0 1 1', 'an arc flag is 0 or 1'],
    ['M0 0 L1,,2 3', 'a number is needed'],
    ['M0 0 L1 2,', 'a number is needed'],
    ['M0 0 K1 2', 'a command letter is needed'],
    ['M0 0 z 5', 'a command letter is needed'],
  ])('%s', (d, message) => {
    expect(() => parsePath(d)).toThrow(message);
  });

  it.each([
    ['1 2 3', 'are 3 numbers, not pairs'],
    ['1 2 x', 'points cannot be read'],
  ])('points %s', (text, message) => {
    expect(() => parsePoints(text)).toThrow(message);
  });

  it('points come with any of the separators of SVG', () => {
    expect(parsePoints(' 1,2 3-4\n.5.5 ')).toEqual([1, 2, 3, -4, 0.5, 0.5]);
    expect(parsePoints('')).toEqual([]);
  });
});

it('random paths come out as a second parser reads them', () => {
  const number = fc.double({ min: -1e3, max: 1e3, noNaN: true }).map((x) => String(Number(x.toPrecision(5))));
  const run = (letter: string, count: number) =>
    fc.tuple(
      fc.constantFrom(letter, letter.toUpperCase()),
      fc.array(number, { minLength: count, maxLength: count }),
    );
  const arc = fc
    .tuple(
      fc.constantFrom('a', 'A'),
      number,
      number,
      fc.constantFrom('0 0', '01', '1,0', '11'),
      number,
      number,
    )
    .map(([letter, rx, ry, flags, x, y]) => `${letter}${rx} ${ry} 30 ${flags} ${x} ${y}`);
  const command = fc.oneof(
    ...(['m2', 'l2', 'h1', 'v1', 'c6', 's4', 'q4', 't2', 'z0'] as const).map((spec) =>
      run(spec[0], Number(spec[1])).map(([letter, numbers]) => letter + numbers.join(' ')),
    ),
    arc,
  );
  fc.assert(
    fc.property(fc.array(command, { maxLength: 12 }), (commands) => {
      const d = `M1 2${commands.join('')}`;
      const theirs: (string | number)[][] = [];
      svgpath(d)
        .abs()
        .unshort()
        .iterate((segment, _index, x, y) => {
          const [letter, ...rest] = segment;
          if (letter === 'H') theirs.push(['L', rest[0] as number, y]);
          else if (letter === 'V') theirs.push(['L', x, rest[0] as number]);
          else if (letter === 'A')
            theirs.push([
              'A',
              Math.abs(rest[0] as number),
              Math.abs(rest[1] as number),
              ...(rest.slice(2) as number[]),
            ]);
          else theirs.push(segment as (string | number)[]);
        });
      const ours = parsePath(d).map((c) => {
        switch (c.kind) {
          case 'move':
            return ['M', c.x, c.y];
          case 'line':
            return ['L', c.x, c.y];
          case 'cubic':
            return ['C', c.x1, c.y1, c.x2, c.y2, c.x, c.y];
          case 'quadratic':
            return ['Q', c.x1, c.y1, c.x, c.y];
          case 'arc':
            return ['A', c.rx, c.ry, c.rotationDeg, Number(c.large), Number(c.sweep), c.x, c.y];
          case 'close':
            return [theirs.length > 0 ? 'Z' : 'z'];
          default:
            return c satisfies never;
        }
      });
      expect(ours.length).toBe(theirs.length);
      ours.forEach((segment, i) => {
        expect(String(segment[0])).toBe(String(theirs[i][0]).toUpperCase());
        segment.slice(1).forEach((value, j) => {
          expect(value as number).toBeCloseTo(theirs[i][j + 1] as number, 6);
        });
      });
    }),
    { seed: 7, numRuns: 300 },
  );
});
