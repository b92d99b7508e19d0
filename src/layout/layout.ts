/**
 * Drawn shapes → what they are on a chip: strokes (channels), holes (ports), outlines and what is ignored, still in drawing
 * units. Whether a hole is a port and a name a layer is for the run sheet to say.
 */
import { remembered } from '../by-key.ts';
import { InputError } from '../errors.ts';
import { PX_MM } from '../svg/lengths.ts';
import { stretches } from '../svg/matrix.ts';
import type { Clip, Group, Shape, SvgDrawing, Undrawn } from '../svg/types.ts';
import { quoted, ValueError } from '../svg/value-error.ts';
import { type Flattened, flatten, MAX_COORDINATE, MAX_PIECES, type PieceBudget } from './flatten.ts';
import { type Circle, ROUNDNESS, roundRing } from './roundness.ts';
import type { Centreline, Drawn, Hole, Ignored, Layout, LayoutItem, Outline, Stroke } from './types.ts';

/**
 * @param where the file's name, for messages.
 * @throws InputError naming the shape for a point beyond ±1e12, and for more than 2 million segments.
 */
export function layOut({ shapes, unread, ...scale }: SvgDrawing, where: string): Layout {
  const laying: Laying = {
    budget: { piecesLeft: MAX_PIECES },
    enclosing: new Map(),
    pxUnits: PX_MM / scale.unitMm,
    zeroLength: 0,
  };
  const items: LayoutItem[] = [];
  const undrawn: Undrawn[] = [...scale.undrawn];
  for (const shape of shapes) {
    const item = toItemOrExplain(shape, laying, where);
    if (item !== null) items.push(item);
    else if (shape.name !== null) undrawn.push({ kind: 'shape', name: shape.name, why: whyNothing(shape) });
  }
  const zeroLength = laying.zeroLength === 0 ? {} : { 'subpath without length': laying.zeroLength };
  return { ...scale, items, undrawn, unread: { ...unread, ...zeroLength } };
}

function whyNothing({ style, tag }: Shape): string {
  if (style.zeroWidth) return 'its stroke is 0 wide';
  const isVisible = style.stroked || (style.filled && tag !== 'line');
  return isVisible ? 'it has no length' : 'it has neither stroke nor fill';
}

/** A transform whose stretches differ by no more than this share is a similarity. */
const SIMILARITY = 1e-6;

interface Laying {
  readonly budget: PieceBudget;
  /** Shapes of one group share their chain, so it is listed once. */
  readonly enclosing: Map<readonly Group[], Enclosing>;
  /** Drawing units in a CSS px of the page. */
  readonly pxUnits: number;
  zeroLength: number;
}

interface Enclosing {
  readonly names: readonly string[];
  readonly dataDepth: string | null;
}

function toItemOrExplain(shape: Shape, laying: Laying, where: string): LayoutItem | null {
  try {
    return toItem(shape, laying);
  } catch (cause) {
    if (!(cause instanceof ValueError)) throw cause;
    const said =
      shape.name === null
        ? `<${shape.tag}> number ${shape.ordinal + 1}`
        : `<${shape.tag}> ${quoted(shape.name)}`;
    throw new InputError(where, `${said}: ${cause.message}`, { cause });
  }
}

/** Null for what is not drawn: neither stroked nor filled, or without length. */
function toItem(shape: Shape, laying: Laying): LayoutItem | null {
  const drawn = toDrawn(shape, laying);
  switch (shape.tag) {
    case 'text':
    case 'image':
      return { kind: 'ignored', ...drawn, reason: shape.tag, rings: [] };
    case 'circle':
    case 'ellipse':
      return roundItem(shape, drawn, laying);
    case 'path':
    case 'line':
    case 'polyline':
    case 'polygon':
    case 'rect':
      return pathItem(shape, drawn, laying);
    default:
      return shape.tag satisfies never;
  }
}

function roundItem(shape: Shape, drawn: Drawn, laying: Laying): LayoutItem | null {
  const { filled, dashed } = shape.style;
  const stroked = shape.style.stroked && !dashed;
  if (shape.dataChannel && (filled || stroked)) {
    const flat = flattenShape(shape, laying);
    return stroked ? toStroke(shape, drawn, flat, laying) : toOutline(shape, drawn, flat, false);
  }
  if (!filled && !stroked && !dashed) return null;
  const circle = filled || stroked ? drawnCircle(shape) : null;
  if (circle !== null) return toHole(drawn, circle, filled, stroked);
  const flat = flattenShape(shape, laying);
  if (filled) return toOutline(shape, drawn, flat, stroked);
  return toIgnored(drawn, flat, stroked ? 'ellipse' : 'dashed stroke');
}

function pathItem(shape: Shape, drawn: Drawn, laying: Laying): LayoutItem | null {
  const { style } = shape;
  const stroked = style.stroked && !style.dashed;
  const filled = style.filled && shape.tag !== 'line';
  if (!stroked && !style.dashed && !filled) return null;
  const flat = flattenShape(shape, laying);
  if (flat.subpaths.length === 0) return null;
  // A fill closes what it fills; with a stroke, only what is drawn closed is closed.
  const isClosed = stroked
    ? flat.subpaths.every(({ closed }) => closed)
    : flat.subpaths.some(({ points }) => points.length >= LEAST_AREA);
  // What is said to be a channel is one by its stroke, whatever fills it.
  if (filled && isClosed && !(shape.dataChannel && stroked)) {
    const [first, ...others] = flat.subpaths;
    const mayBeRound = others.length === 0 && endsMeet(first) && !shape.dataChannel;
    const circle = mayBeRound ? roundRing(first.points) : null;
    return circle !== null ? toHole(drawn, circle, true, stroked) : toOutline(shape, drawn, flat, stroked);
  }
  if (stroked) return toStroke(shape, drawn, flat, laying);
  return toIgnored(drawn, flat, style.dashed ? 'dashed stroke' : 'fill');
}

/** First and last point are the same, whether closed (z) or drawn so. */
function endsMeet({ points }: Centreline): boolean {
  return points[0] === points.at(-2) && points[1] === points.at(-1);
}

/** Coordinates of the fewest points that enclose anything. */
const LEAST_AREA = 6;

function flattenShape(shape: Shape, laying: Laying): Flattened {
  const flat = flatten(shape.path, shape.toRoot, laying.budget);
  if (shape.style.stroked) laying.zeroLength += flat.zeroLength;
  return flat;
}

function toDrawn(shape: Shape, laying: Laying): Drawn {
  return { ordinal: shape.ordinal, name: shape.name, id: shape.id, groups: enclosingOf(shape, laying).names };
}

function enclosingOf({ groups }: Shape, { enclosing }: Laying): Enclosing {
  return remembered(enclosing, groups, () => ({
    names: groups.flatMap(({ name }) => name ?? []),
    dataDepth: groups.findLast(({ dataDepth }) => dataDepth !== null)?.dataDepth ?? null,
  }));
}

function toStroke(shape: Shape, drawn: Drawn, flat: Flattened, laying: Laying): Stroke {
  return {
    kind: 'stroke',
    ...drawn,
    width: strokeWidth(shape, laying),
    linecap: shape.style.linecap,
    centrelines: flat.subpaths,
    dataDepth: shape.dataDepth ?? enclosingOf(shape, laying).dataDepth,
    dataChannel: shape.dataChannel,
    disguises: disguisesOf(shape, flat),
  };
}

/** A stroke that leaves the nested svg that it is drawn in is cut off there, as by a clip path. */
function disguisesOf({ style, clips }: Shape, flat: Flattened): Stroke['disguises'] {
  const isCutOff = clips.some((clip) => flat.subpaths.some(({ points }) => leaves(points, clip)));
  return !isCutOff || style.disguises.includes('clip-path')
    ? style.disguises
    : [...style.disguises, 'clip-path'];
}

function leaves(points: Float64Array, { toRoot, x, y, width, height }: Clip): boolean {
  const [a, b, c, d, e, f] = toRoot;
  const determinant = a * d - b * c;
  const slack = 1e-6 * Math.max(width, height);
  for (let i = 0; i < points.length; i += 2) {
    const dx = points[i] - e;
    const dy = points[i + 1] - f;
    const u = (d * dx - c * dy) / determinant - x;
    const v = (a * dy - b * dx) / determinant - y;
    if (u < -slack || v < -slack || u > width + slack || v > height + slack) return true;
  }
  return false;
}

/** Scaled by the full transform; null when that is no similarity, for then the width depends on the direction. */
function strokeWidth(shape: Shape, { pxUnits }: Laying): number | null {
  const { strokeWidth, nonScalingStroke } = shape.style;
  const [larger, smaller] = stretches(shape.toRoot);
  // SVG 2, 8.13: a stroke that does not scale is as wide as on the page, whatever the transforms and the viewBox.
  const width = strokeWidth * (nonScalingStroke ? pxUnits : (larger + smaller) / 2);
  if (width < SMALLEST_WIDTH || width > MAX_COORDINATE) {
    throw new ValueError(`its stroke is ${width} units wide, which is no channel's width; set it again`);
  }
  return nonScalingStroke || larger - smaller <= SIMILARITY * larger ? width : null;
}

/** Units of the drawing; below it a resistance, with the cube of the width in it, leaves what a double can hold. */
const SMALLEST_WIDTH = 1e-12;

/** The circle that a circle or ellipse draws after its transform; null when it is not round within 1 %. */
function drawnCircle(shape: Shape): Circle | null {
  const [start, quarter] = shape.path;
  if (start?.kind !== 'move' || quarter?.kind !== 'arc') return null;
  const { rx, ry } = quarter;
  const [cx, cy] = [start.x - rx, start.y];
  const [a, b, c, d, e, f] = shape.toRoot;
  const [larger, smaller] = stretches([a * rx, b * rx, c * ry, d * ry, 0, 0]);
  const circle = { x: a * cx + c * cy + e, y: b * cx + d * cy + f, radius: (larger + smaller) / 2 };
  if (!(Math.max(Math.abs(circle.x), Math.abs(circle.y), larger) <= MAX_COORDINATE)) {
    throw new ValueError(`it lies beyond ±${MAX_COORDINATE} units; move or scale the drawing`);
  }
  return larger <= (1 + ROUNDNESS) * smaller ? circle : null;
}

function toHole(drawn: Drawn, circle: Circle, filled: boolean, stroked: boolean): Hole {
  return { kind: 'hole', ...drawn, ...circle, filled, stroked };
}

function toOutline({ dataChannel }: Shape, drawn: Drawn, flat: Flattened, stroked: boolean): Outline {
  return { kind: 'outline', ...drawn, ...ringsOf(flat), stroked, dataChannel };
}

function toIgnored(drawn: Drawn, flat: Flattened, reason: string): Ignored {
  return { kind: 'ignored', ...drawn, reason, ...ringsOf(flat) };
}

function ringsOf({ subpaths }: Flattened): Pick<Outline, 'rings' | 'ringCurves'> {
  return { rings: subpaths.map(({ points }) => points), ringCurves: subpaths.map(({ curves }) => curves) };
}
