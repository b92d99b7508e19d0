/** A 2 × 3 matrix [a b c d e f]: x' = a x + c y + e, y' = b x + d y + f (SVG's order). */
export type Matrix = readonly [number, number, number, number, number, number];

export const SHAPE_TAGS = [
  'path',
  'line',
  'polyline',
  'polygon',
  'rect',
  'circle',
  'ellipse',
  'text',
  'image',
] as const;

export type ShapeTag = (typeof SHAPE_TAGS)[number];

/** Absolute path commands in the element's own coordinates; arcs stay arcs. */
export type PathCommand =
  | { readonly kind: 'move'; readonly x: number; readonly y: number }
  | { readonly kind: 'line'; readonly x: number; readonly y: number }
  | {
      readonly kind: 'cubic';
      readonly x1: number;
      readonly y1: number;
      readonly x2: number;
      readonly y2: number;
      readonly x: number;
      readonly y: number;
    }
  | {
      readonly kind: 'quadratic';
      readonly x1: number;
      readonly y1: number;
      readonly x: number;
      readonly y: number;
    }
  | {
      readonly kind: 'arc';
      readonly rx: number;
      readonly ry: number;
      readonly rotationDeg: number;
      readonly large: boolean;
      readonly sweep: boolean;
      readonly x: number;
      readonly y: number;
    }
  | { readonly kind: 'close' };

/** A group (g, svg, symbol, use, a) round a shape, outermost first in a chain. */
export interface Group {
  /** The drawn name (data-name, *:label, title, id – in this order, trimmed), or null. */
  readonly name: string | null;
  /** `data-depth` as written, or null. */
  readonly dataDepth: string | null;
}

/** Style after inheritance, presentation attributes, `style` and `<style>` rules. Lengths in the element's own units. */
export interface ShapeStyle {
  readonly stroked: boolean;
  readonly filled: boolean;
  readonly strokeWidth: number;
  /** It has a stroke, but 0 wide: nothing of it is drawn. */
  readonly zeroWidth: boolean;
  readonly dashed: boolean;
  readonly linecap: 'butt' | 'round' | 'square';
  /** vector-effect: non-scaling-stroke, so strokeWidth is in CSS px of the page, whatever the transforms and the viewBox. */
  readonly nonScalingStroke: boolean;
  /** What may hide or add to the stroke: each raises a caution on a channel. */
  readonly disguises: readonly ('clip-path' | 'mask' | 'opacity' | 'marker' | 'filter')[];
}

/** One drawn (rendered) shape. What is not rendered (display none, hidden, inside defs) is not in the list. */
export interface Shape {
  readonly tag: ShapeTag;
  /** Index in document order of rendered shapes, from 0. */
  readonly ordinal: number;
  readonly name: string | null;
  readonly id: string | null;
  /** Outermost first. */
  readonly groups: readonly Group[];
  /** The element has a `data-channel` attribute. */
  readonly dataChannel: boolean;
  readonly dataDepth: string | null;
  /** Own coordinates → root user units (the coordinates of the root viewBox). */
  readonly toRoot: Matrix;
  readonly path: readonly PathCommand[];
  readonly style: ShapeStyle;
  /** Nested svg and symbol round the shape that show only what lies within them. */
  readonly clips: readonly Clip[];
}

/** What has a name and is not drawn, with why: for messages about names that are not found. */
export interface Undrawn {
  readonly kind: 'shape' | 'group';
  readonly name: string;
  /** "it is hidden (display: none)" */
  readonly why: string;
}

/** A rectangle outside of which nothing is drawn. */
export interface Clip {
  /** Coordinates of the rectangle → root user units. */
  readonly toRoot: Matrix;
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

/** How large a drawing is. */
export interface DrawingScale {
  /** Millimetres per root user unit, by SVG 2's rules. */
  readonly unitMm: number;
  /** False when width/height are in px, unitless, percent or missing, so no physical size is stated. */
  readonly unitStated: boolean;
  /** One sentence: how unitMm was found ("width 76mm over viewBox width 76"). */
  readonly unitReason: string;
  /** The root viewport's size in mm, null where the drawing gives none. */
  readonly widthMm: number | null;
  readonly heightMm: number | null;
}

export interface SvgDrawing extends DrawingScale {
  readonly shapes: readonly Shape[];
  /** Named shapes and groups that are not drawn; a group may be listed that also holds what is drawn. */
  readonly undrawn: readonly Undrawn[];
  /** Elements passed over that draw something we do not read (foreignObject, image …), by kind. */
  readonly unread: Readonly<Record<string, number>>;
}
