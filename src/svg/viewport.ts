/** Viewports, viewBox and preserveAspectRatio (SVG 2, 8.2, 8.6, 8.7), and the size of a user unit. */
import { type Length, PHYSICAL_UNIT_MM, PX_MM, parseLength, toMillimetres } from './lengths.ts';
import { IDENTITY } from './matrix.ts';
import { toNumber } from './numbers.ts';
import type { Matrix } from './types.ts';
import { quoted, ValueError } from './value-error.ts';

/** What percentages refer to, in user units. */
export interface Viewport {
  readonly width: number;
  readonly height: number;
}

export interface ViewBox extends Viewport {
  readonly x: number;
  readonly y: number;
}

export interface AspectRatio {
  /** Where the viewBox lies in a viewport of another shape; 'none' stretches it. */
  readonly align: 'none' | readonly [x: 0 | 0.5 | 1, y: 0 | 0.5 | 1];
  readonly fit: 'meet' | 'slice';
}

export interface RootScale {
  readonly unitMm: number;
  readonly unitStated: boolean;
  readonly unitReason: string;
  readonly widthMm: number | null;
  readonly heightMm: number | null;
  readonly viewport: Viewport | null;
  /** Identity, unless preserveAspectRatio="none" stretches the drawing. */
  readonly toRoot: Matrix;
}

/**
 * How large a user unit of the outermost svg is.
 * @param get an attribute of the svg, or undefined.
 * @throws ValueError for a size or viewBox that cannot be read or is not positive.
 */
export function rootScale(get: (name: string) => string | undefined): RootScale {
  const scale = readScale(get);
  if (scale.unitMm >= SMALLEST_UNIT_MM && scale.unitMm <= LARGEST_UNIT_MM) return scale;
  throw new ValueError(
    `a unit of the drawing would be far from the size of any chip (${scale.unitReason}); set width, height and viewBox, for example "76mm", "26mm" and "0 0 76 26"`,
  );
}

/** A picometre and a kilometre: beyond them coordinates and widths leave what a double can multiply. */
const SMALLEST_UNIT_MM = 1e-9;
const LARGEST_UNIT_MM = 1e6;

function readScale(get: (name: string) => string | undefined): RootScale {
  const width = parseSide(get('width'), 'width');
  const height = parseSide(get('height'), 'height');
  const viewBox = parseViewBox(get('viewBox'));
  const isPhysical = (side: Side | null): boolean => side?.physical === true;
  if (viewBox === null) {
    return {
      unitMm: PX_MM,
      unitStated: isPhysical(width) || isPhysical(height),
      unitReason: `no viewBox: one unit is one CSS px, 25.4/96 mm (${saySides(width, height)})`,
      widthMm: width?.mm ?? null,
      heightMm: height?.mm ?? null,
      viewport:
        width !== null && height !== null ? { width: width.mm / PX_MM, height: height.mm / PX_MM } : null,
      toRoot: IDENTITY,
    };
  }
  if (viewBox === 'disabled') throw new ValueError('viewBox has no width or height; nothing would be drawn');
  const viewport = { width: viewBox.width, height: viewBox.height };
  if (width === null && height === null) {
    return {
      unitMm: PX_MM,
      unitStated: false,
      unitReason: 'no width or height: one unit is taken as one CSS px, 25.4/96 mm',
      widthMm: null,
      heightMm: null,
      viewport,
      toRoot: IDENTITY,
    };
  }
  const alongX = width === null ? null : width.mm / viewBox.width;
  const alongY = height === null ? null : height.mm / viewBox.height;
  const byWidth = `width ${width?.text} over viewBox width ${viewBox.width}`;
  const byHeight = `height ${height?.text} over viewBox height ${viewBox.height}`;
  if (alongX === null || alongY === null) {
    // The missing side follows from the viewBox's shape (CSS: auto with a natural ratio).
    const unitMm = alongX ?? alongY ?? PX_MM;
    return {
      unitMm,
      unitStated: isPhysical(width ?? height),
      unitReason: width !== null ? byWidth : byHeight,
      widthMm: width?.mm ?? unitMm * viewBox.width,
      heightMm: height?.mm ?? unitMm * viewBox.height,
      viewport,
      toRoot: IDENTITY,
    };
  }
  const agree = Math.abs(alongX - alongY) <= 1e-6 * Math.max(alongX, alongY);
  const size = { widthMm: width?.mm ?? null, heightMm: height?.mm ?? null, viewport };
  const { align, fit } = parseAspectRatio(get('preserveAspectRatio'));
  if (align === 'none' && !agree) {
    return {
      ...size,
      unitMm: alongX,
      unitStated: isPhysical(width) && isPhysical(height),
      unitReason: `${byWidth}, and ${byHeight} stretched by preserveAspectRatio="none"`,
      toRoot: [1, 0, 0, alongY / alongX, 0, 0],
    };
  }
  const takesWidth = fit === 'meet' || align === 'none' ? alongX <= alongY : alongX >= alongY;
  return {
    ...size,
    unitMm: takesWidth ? alongX : alongY,
    unitStated: agree ? isPhysical(width) || isPhysical(height) : isPhysical(takesWidth ? width : height),
    unitReason: takesWidth ? byWidth : byHeight,
    toRoot: IDENTITY,
  };
}

/**
 * Coordinates inside a viewBox → those of the viewport's parent (SVG 2, 8.2 "equivalent transform").
 * @param area where the viewport lies in its parent.
 */
export function viewBoxTransform(viewBox: ViewBox, aspect: AspectRatio, area: ViewBox): Matrix {
  let sx = area.width / viewBox.width;
  let sy = area.height / viewBox.height;
  let left = 0;
  let top = 0;
  if (aspect.align !== 'none') {
    const s = aspect.fit === 'meet' ? Math.min(sx, sy) : Math.max(sx, sy);
    left = aspect.align[0] * (area.width - viewBox.width * s);
    top = aspect.align[1] * (area.height - viewBox.height * s);
    sx = s;
    sy = s;
  }
  return [sx, 0, 0, sy, area.x + left - viewBox.x * sx, area.y + top - viewBox.y * sy];
}

/**
 * Four numbers; null when not given; 'disabled' when a side is zero (SVG 2: nothing inside is drawn).
 * @throws ValueError for anything else.
 */
export function parseViewBox(text: string | undefined): ViewBox | null | 'disabled' {
  if (text === undefined || text.trim() === '') return null;
  const numbers = text
    .trim()
    .split(/\s*,\s*|\s+/)
    .map(toNumber);
  const [x, y, width, height] = numbers;
  if (numbers.length !== 4 || !numbers.every(Number.isFinite) || width < 0 || height < 0) {
    throw new ValueError(`viewBox ${quoted(text)} is not "x y width height"; write for example "0 0 76 26"`);
  }
  return width === 0 || height === 0 ? 'disabled' : { x, y, width, height };
}

/** @throws ValueError when it cannot be read. */
export function parseAspectRatio(text: string | undefined): AspectRatio {
  const words = text?.trim() ?? '';
  if (words === '') return { align: [0.5, 0.5], fit: 'meet' };
  const match = /^(?:defer\s+)?(?:(none)|x(Min|Mid|Max)Y(Min|Mid|Max))(?:\s+(meet|slice))?$/.exec(words);
  if (match === null) {
    throw new ValueError(
      `preserveAspectRatio ${quoted(words)} cannot be read; write for example "xMidYMid meet"`,
    );
  }
  const fit = match[4] === 'slice' ? 'slice' : 'meet';
  return { align: match[1] === 'none' ? 'none' : [SHARE[match[2]], SHARE[match[3]]], fit };
}

const SHARE: Readonly<Record<string, 0 | 0.5 | 1>> = { Min: 0, Mid: 0.5, Max: 1 };

interface Side {
  readonly mm: number;
  readonly physical: boolean;
  readonly text: string;
}

/** Null when the side is not given, or only as a part of a page that is not known. */
function parseSide(text: string | undefined, name: string): Side | null {
  const written = text?.trim() ?? '';
  if (written === '' || written.toLowerCase() === 'auto') return null;
  let length: Length;
  try {
    length = parseLength(written);
  } catch (cause) {
    throw new ValueError(`${name} ${quoted(written)} is no length; write for example "76mm"`, { cause });
  }
  const mm = toMillimetres(length);
  if (mm === null) return null;
  if (!(mm > 0))
    throw new ValueError(`${name} ${quoted(written)} is not above zero; write for example "76mm"`);
  return { mm, physical: PHYSICAL_UNIT_MM[length.unit] !== undefined, text: written };
}

function saySides(width: Side | null, height: Side | null): string {
  if (width === null && height === null) return 'no width or height';
  return [width && `width ${width.text}`, height && `height ${height.text}`]
    .filter((part) => part !== null)
    .join(', ');
}
