/** Layouts built by hand: what the reader would make of a drawing. */
import { type Assembled, assembleChip } from '../../src/chip/assemble.ts';
import type { Chip, Run } from '../../src/chip/types.ts';
import type {
  Centreline,
  Hole,
  Ignored,
  Layout,
  LayoutItem,
  Outline,
  Stroke,
} from '../../src/layout/types.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';

type Options<T> = Partial<Omit<T, 'kind' | 'ordinal'>>;
export type Draft = (ordinal: number) => LayoutItem;

export function line(coordinates: readonly number[], closed = false): Centreline {
  const points = Float64Array.from(coordinates);
  const bendRadius = new Float64Array(Math.max(0, points.length / 2 - 1));
  return { points, closed, bendRadius, curves: null };
}

/** A stroke 0.2 wide through the coordinates x0 y0 x1 y1 … */
export function stroke(
  name: string | null,
  coordinates: readonly number[],
  options: Options<Stroke> = {},
): Draft {
  return (ordinal) => ({
    kind: 'stroke',
    ordinal,
    name,
    id: null,
    groups: [],
    width: 0.2,
    linecap: 'butt',
    centrelines: [line(coordinates)],
    dataDepth: null,
    dataChannel: false,
    disguises: [],
    ...options,
  });
}

export function circle(
  name: string | null,
  x: number,
  y: number,
  radius = 1,
  options: Options<Hole> = {},
): Draft {
  return (ordinal) => ({
    kind: 'hole',
    ordinal,
    name,
    id: null,
    groups: [],
    x,
    y,
    radius,
    filled: true,
    stroked: false,
    ...options,
  });
}

/** A filled shape with one ring. */
export function filled(name: string | null, ring: readonly number[], options: Options<Outline> = {}): Draft {
  return (ordinal) => ({
    kind: 'outline',
    ordinal,
    name,
    id: null,
    groups: [],
    rings: [Float64Array.from(ring)],
    stroked: false,
    dataChannel: false,
    ...options,
  });
}

export function ignored(name: string | null, reason: string, options: Options<Ignored> = {}): Draft {
  return (ordinal) => ({
    kind: 'ignored',
    ordinal,
    name,
    id: null,
    groups: [],
    reason,
    rings: [],
    ...options,
  });
}

/** Corners of an axis-parallel rectangle, first one repeated. */
export function rectangle(x: number, y: number, width: number, height: number): number[] {
  return [x, y, x + width, y, x + width, y + height, x, y + height, x, y];
}

export function layout(drafts: readonly Draft[], options: Partial<Omit<Layout, 'items'>> = {}): Layout {
  return {
    unitMm: 1,
    unitStated: true,
    unitReason: 'width 76mm over viewBox width 76',
    widthMm: 76,
    heightMm: 26,
    undrawn: [],
    unread: {},
    ...options,
    items: drafts.map((draft, ordinal) => draft(ordinal)),
  };
}

type Given = Parameters<typeof assembled>;

/** The chip alone. */
export function chipOf(...given: Given): Chip {
  return assembled(...given).chip;
}

/** Its run alone. */
export function runOf(...given: Given): Run {
  return assembled(...given).run;
}

/** The chip and the run of drafts and the text of a run sheet; the sheet is `c.run.yaml`, the layout `c.svg`. */
export function assembled(
  drafts: readonly Draft[],
  sheet: string | null = null,
  options: Partial<Omit<Layout, 'items'>> = {},
): Assembled {
  return assembleChip({
    layout: layout(drafts, options),
    sheet: sheet === null ? null : parseRunSheet(sheet, 'c.run.yaml'),
    file: 'c.svg',
  });
}
