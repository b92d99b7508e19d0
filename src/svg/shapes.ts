/** The basic shapes as path commands (SVG 2, 10): the same starting points and directions as the specification's. */
import { givenLength, readLength } from './lengths.ts';
import { parsePath, parsePoints } from './path-data.ts';
import type { PathCommand, ShapeTag } from './types.ts';
import { quoted, ValueError } from './value-error.ts';
import { diagonalOf, type Viewport } from './viewport.ts';

/**
 * @param get a geometry attribute or property as text, or undefined.
 * @returns the outline in the element's own units; empty when the shape has no size and so is not drawn.
 * @throws ValueError for a value that cannot be read, or a negative size.
 */
export function shapePath(
  tag: ShapeTag,
  get: (name: string) => string | undefined,
  viewport: Viewport | null,
): readonly PathCommand[] {
  switch (tag) {
    case 'path':
      return parsePath(pathText(get('d')));
    case 'line':
      return linePath(geometry(get, viewport));
    case 'polyline':
      return pointsPath(get('points'), 'open');
    case 'polygon':
      return pointsPath(get('points'), 'closed');
    case 'rect':
      return rectPath(geometry(get, viewport));
    case 'circle':
    case 'ellipse':
      return ellipsePath(tag, geometry(get, viewport));
    case 'text':
    case 'image':
      return [];
    default:
      return tag satisfies never;
  }
}

/** As an attribute, or as the CSS property's `path("…")`. */
function pathText(text: string | undefined): string {
  const trimmed = text?.trim() ?? '';
  if (!/^[np]/i.test(trimmed)) return trimmed;
  if (trimmed.toLowerCase() === 'none') return '';
  return /^path\(\s*(["'])([^"']*)\1\s*\)$/i.exec(trimmed)?.[2] ?? trimmed;
}

interface Geometry {
  /** A length, `fallback` when not given. */
  readonly length: (name: string, fallback?: number) => number;
  /** A length that must not be negative; undefined when not given or `auto`. */
  readonly size: (name: string) => number | undefined;
}

function geometry(get: (name: string) => string | undefined, viewport: Viewport | null): Geometry {
  const whole = (name: string): number | null => {
    if (viewport === null) return null;
    if (name === 'r') return diagonalOf(viewport);
    return /x|width/.test(name) ? viewport.width : viewport.height;
  };
  const read = (name: string): number | undefined => {
    const text = givenLength(get(name));
    return text === null ? undefined : readLength(name, text, whole(name));
  };
  const size = (name: string): number | undefined => {
    const value = read(name);
    if (value !== undefined && value < 0) {
      throw new ValueError(`${name} ${quoted(get(name) ?? '')} is negative; a size is zero or more`);
    }
    return value;
  };
  return { length: (name, fallback = 0) => read(name) ?? fallback, size };
}

function linePath({ length }: Geometry): readonly PathCommand[] {
  return [
    { kind: 'move', x: length('x1'), y: length('y1') },
    { kind: 'line', x: length('x2'), y: length('y2') },
  ];
}

function pointsPath(text: string | undefined, end: 'open' | 'closed'): readonly PathCommand[] {
  const points = parsePoints(text ?? '');
  const commands: PathCommand[] = [];
  for (let i = 0; i < points.length; i += 2) {
    commands.push({ kind: i === 0 ? 'move' : 'line', x: points[i], y: points[i + 1] });
  }
  if (end === 'closed' && commands.length > 0) commands.push({ kind: 'close' });
  return commands;
}

function rectPath({ length, size }: Geometry): readonly PathCommand[] {
  const x = length('x');
  const y = length('y');
  const width = size('width') ?? 0;
  const height = size('height') ?? 0;
  if (width === 0 || height === 0) return [];
  const givenX = size('rx');
  const givenY = size('ry');
  const rx = Math.min(givenX ?? givenY ?? 0, width / 2);
  const ry = Math.min(givenY ?? givenX ?? 0, height / 2);
  const right = x + width;
  const bottom = y + height;
  if (rx === 0 || ry === 0) {
    return [
      { kind: 'move', x, y },
      { kind: 'line', x: right, y },
      { kind: 'line', x: right, y: bottom },
      { kind: 'line', x, y: bottom },
      { kind: 'close' },
    ];
  }
  const corner = (toX: number, toY: number): PathCommand => quarter(rx, ry, toX, toY);
  return [
    { kind: 'move', x: x + rx, y },
    { kind: 'line', x: right - rx, y },
    corner(right, y + ry),
    { kind: 'line', x: right, y: bottom - ry },
    corner(right - rx, bottom),
    { kind: 'line', x: x + rx, y: bottom },
    corner(x, bottom - ry),
    { kind: 'line', x, y: y + ry },
    corner(x + rx, y),
    { kind: 'close' },
  ];
}

function ellipsePath(tag: 'circle' | 'ellipse', { length, size }: Geometry): readonly PathCommand[] {
  const x = length('cx');
  const y = length('cy');
  const rx = (tag === 'circle' ? size('r') : (size('rx') ?? size('ry'))) ?? 0;
  const ry = tag === 'circle' ? rx : (size('ry') ?? size('rx') ?? 0);
  if (rx === 0 || ry === 0) return [];
  return [
    { kind: 'move', x: x + rx, y },
    quarter(rx, ry, x, y + ry),
    quarter(rx, ry, x - rx, y),
    quarter(rx, ry, x, y - ry),
    quarter(rx, ry, x + rx, y),
    { kind: 'close' },
  ];
}

function quarter(rx: number, ry: number, x: number, y: number): PathCommand {
  return { kind: 'arc', rx, ry, rotationDeg: 0, large: false, sweep: true, x, y };
}
