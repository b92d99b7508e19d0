/**
 * The layout in drawing units (root user units, y down), before any run sheet is known.
 * Curves are already cut into straight pieces; each piece keeps its curve's bend radius.
 */

import type { Curve } from '../geometry/curve.ts';
import type { DrawingScale, ShapeStyle, Undrawn } from '../svg/types.ts';

export interface Centreline {
  /** x0 y0 x1 y1 … ; consecutive points differ; a closed centreline repeats its first point at the end. */
  readonly points: Float64Array;
  readonly closed: boolean;
  /** One per piece (points − 1): the curve's radius of curvature there, 0 for a straight piece. */
  readonly bendRadius: Float64Array;
  /** The curve that each piece was cut from, null for a straight one; null when all are straight. */
  readonly curves: readonly (Curve | null)[] | null;
}

/** What every drawn thing carries, so that names and findings can point into the drawing. */
export interface Drawn {
  /** Document order among rendered shapes, from 0. */
  readonly ordinal: number;
  readonly name: string | null;
  readonly id: string | null;
  /** Names of the enclosing groups that have one, outermost first. */
  readonly groups: readonly string[];
}

export interface Stroke extends Drawn {
  readonly kind: 'stroke';
  /** Full stroke width in drawing units; null when the transform is not a similarity (unsized-stroke). */
  readonly width: number | null;
  readonly linecap: ShapeStyle['linecap'];
  readonly centrelines: readonly Centreline[];
  /** `data-depth` of the element, else of the nearest group that has one, as written. */
  readonly dataDepth: string | null;
  /** Said to be a channel (`data-channel`), whatever it looks like. */
  readonly dataChannel: boolean;
  readonly disguises: ShapeStyle['disguises'];
}

/** A circle, or an ellipse or closed filled path that is round within 1 %. Whether it is a port is for chip/ to say. */
export interface Hole extends Drawn {
  readonly kind: 'hole';
  readonly x: number;
  readonly y: number;
  readonly radius: number;
  readonly filled: boolean;
  readonly stroked: boolean;
}

interface DrawnRings extends Drawn {
  readonly rings: readonly Float64Array[];
  /** The curves of each ring, as a centreline's; left out where all are straight. */
  readonly ringCurves?: readonly (readonly (Curve | null)[] | null)[];
}

/** A shape that is filled and not round, closed by its fill where it is not drawn closed: never a centreline. */
export interface Outline extends DrawnRings {
  readonly kind: 'outline';
  readonly stroked: boolean;
  /** Said to be a channel (`data-channel`), but without a stroke it has no width. */
  readonly dataChannel: boolean;
}

/** Drawn and not read: text, images, dashed strokes … Geometry kept, for a chip edge may be among them. */
export interface Ignored extends DrawnRings {
  readonly kind: 'ignored';
  /** text, image, dashed stroke, fill … : the key in the count of ignored shapes. */
  readonly reason: string;
}

export type LayoutItem = Stroke | Hole | Outline | Ignored;

export interface Layout extends DrawingScale {
  /** In document order. */
  readonly items: readonly LayoutItem[];
  /** Named shapes and groups that are not drawn; a group may be listed that also holds what is drawn. */
  readonly undrawn: readonly Undrawn[];
  /** Counts of things passed over that have no geometry of their own. */
  readonly unread: Readonly<Record<string, number>>;
}
