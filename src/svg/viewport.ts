/** Viewports, viewBox and preserveAspectRatio (SVG 2, 8.2, 8.6, 8.7), and the size of a user unit. */
import { givenLength, type Length, PHYSICAL_UNIT_MM, PX_MM, parseLength, toMillimetres } from './lengths.ts';
import { IDENTITY } from './matrix.ts';
import { toNumber } from './numbers.ts';
import type { DrawingScale, Matrix } from './types.ts';
import { quoted, ValueError } from './value-error.ts';

/** What percentages refer to, in user units. */
export interface Viewport {
  readonly width: number;
  readonly height: number;
}

/** What a percentage of neither side refers to: the diagonal as SVG 2, 7.11 takes it, √((w² + h²)/2). */
export function diagonalOf({ width, height }: Viewport): number {
  return Math.hypot(width, height) / Math.SQRT2;
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

export interface RootScale extends DrawingScale {
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
  if (viewBox === 'disabled') throw new ValueError('viewBox has no width or height; nothing would be drawn');
  const [widthMm, heightMm] = [width?.mm ?? null, height?.mm ?? null];
  const isEitherPhysical = isPhysical(width) || isPhysical(height);
  if (viewBox === null) {
    return {
      unitMm: PX_MM,
      unitStated: isEitherPhysical,
      unitReason: `no viewBox: one unit is one CSS px, 25.4/96 mm (${saySides(width, height)})`,
      widthMm,
      heightMm,
      viewport:
        widthMm !== null && heightMm !== null ? { width: widthMm / PX_MM, height: heightMm / PX_MM } : null,
      toRoot: IDENTITY,
    };
  }
  const viewport = { width: viewBox.width, height: viewBox.height };
  const size = { widthMm, heightMm, viewport, toRoot: IDENTITY };
  const byWidth = `width ${width?.text} over viewBox width ${viewBox.width}`;
  const byHeight = `height ${height?.text} over viewBox height ${viewBox.height}`;
  const alongX = widthMm === null ? null : widthMm / viewBox.width;
  const alongY = heightMm === null ? null : heightMm / viewBox.height;
  if (alongX === null || alongY === null) {
    const unitMm = alongX ?? alongY;
    if (unitMm === null) {
      const unitReason = 'no width or height: one unit is taken as one CSS px, 25.4/96 mm';
      return { ...size, unitMm: PX_MM, unitStated: false, unitReason };
    }
    return {
      ...size,
      unitMm,
      unitStated: isEitherPhysical,
      unitReason: width !== null ? byWidth : byHeight,
      // The missing side follows from the viewBox's shape (CSS: auto with a natural ratio).
      widthMm: widthMm ?? unitMm * viewBox.width,
      heightMm: heightMm ?? unitMm * viewBox.height,
    };
  }
  const agree = Math.abs(alongX - alongY) <= 1e-6 * Math.max(alongX, alongY);
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
    unitStated: agree ? isEitherPhysical : isPhysical(takesWidth ? width : height),
    unitReason: takesWidth ? byWidth : byHeight,
  };
}

function isPhysical(side: Side | null): boolean {
  return side?.physical === true;
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
  const written = givenLength(text);
  if (written === null) return null;
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
