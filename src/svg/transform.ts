/**
 * `transform`, as attribute (SVG 2, 8.5; CSS Transforms 1, 6.1) and as CSS property (CSS Transforms 1, 4). The two are not
 * written alike: the attribute has plain numbers, the property has units and commas. A browser ignores what is written in
 * the other's way, and anything else that it cannot read. Here both are errors: the widths and places behind would be wrong.
 */
import { parseLength, toUserUnits } from './lengths.ts';
import { IDENTITY, multiply, translation } from './matrix.ts';
import { NUMBER, toNumber } from './numbers.ts';
import type { Matrix } from './types.ts';
import { quoted, ValueError } from './value-error.ts';
import type { Viewport } from './viewport.ts';

/** Which of the two grammars a transform is written in. */
export type TransformGrammar = 'attribute' | 'css';

/**
 * @param viewport what percentages refer to.
 * @throws ValueError naming the text that cannot be read.
 */
export function parseTransform(text: string, grammar: TransformGrammar, viewport: Viewport | null): Matrix {
  if (/^\s*(?:none)?\s*$/i.test(text)) return IDENTITY;
  const pattern =
    grammar === 'attribute'
      ? /\s*([a-zA-Z]+)\s*\(([^()]*)\)(?:\s*,(?=\s*[a-zA-Z]))?/y
      : /\s*([a-z][a-z0-9]*)\(([^()]*)\)/iy;
  let matrix = IDENTITY;
  let end = 0;
  for (let match = pattern.exec(text); match !== null; match = pattern.exec(text)) {
    const [, name, args] = match;
    const own = grammar === 'attribute' ? attributeFunction(name, args) : cssFunction(name, args, viewport);
    matrix = multiply(matrix, own);
    end = pattern.lastIndex;
  }
  if (text.slice(end).trim() !== '') {
    const example = grammar === 'attribute' ? 'translate(10 5)' : 'translate(10px, 5px)';
    throw new ValueError(
      `transform cannot be read at ${quoted(text.slice(end))}; write for example "${example}"`,
    );
  }
  if (!matrix.every(Number.isFinite)) throw new ValueError(`transform ${quoted(text)} is too large`);
  return matrix;
}

/**
 * `transform-origin` as a point; the reference box is the viewport, as `transform-box: view-box` says.
 * @throws ValueError when it cannot be read.
 */
export function parseTransformOrigin(text: string, viewport: Viewport | null): readonly [number, number] {
  const parts = text.trim().toLowerCase().split(/\s+/);
  if (parts.length > 3) throw new ValueError(`transform-origin ${quoted(text)} has more than three values`);
  const [first, second = 'center'] = parts;
  // Keywords may come in either order; a keyword of the other axis says so.
  const swapped = /^(top|bottom)$/.test(first) || /^(left|right)$/.test(second);
  const [x, y] = swapped ? [second, first] : [first, second];
  return [originPart(x, viewport?.width ?? null), originPart(y, viewport?.height ?? null)];
}

function originPart(text: string, whole: number | null): number {
  const keyword = { left: '0%', top: '0%', center: '50%', right: '100%', bottom: '100%' }[text];
  return toUserUnits(parseLength(keyword ?? text), whole);
}

const NUMBERS = new RegExp(`\\s*(${NUMBER})\\s*(,?)`, 'y');

/** Plain numbers, in user units and degrees; a sign or a point may stand in for the separator. */
function attributeFunction(name: string, args: string): Matrix {
  const fault = (why: string) => new ValueError(`transform ${quoted(`${name}(${args})`)} ${why}`);
  const values: number[] = [];
  let [end, isCommaLast] = [0, false];
  NUMBERS.lastIndex = 0;
  for (let match = NUMBERS.exec(args); match !== null; match = NUMBERS.exec(args)) {
    values.push(toNumber(match[1]));
    end = NUMBERS.lastIndex;
    isCommaLast = match[2] === ',';
  }
  const rest = args.slice(end).trim();
  if (rest !== '' || isCommaLast || values.some(Number.isNaN)) {
    throw fault(`cannot be read at ${quoted(rest)}; the attribute takes plain numbers, "translate(10 5)"`);
  }
  const [a, b, c, d, e, f] = values;
  const counts = (...allowed: readonly number[]) => {
    if (!allowed.includes(values.length)) throw fault(`needs ${allowed.join(' or ')} values`);
  };
  switch (name) {
    case 'matrix':
      counts(6);
      return [a, b, c, d, e, f];
    case 'translate':
      counts(1, 2);
      return translation(a, b ?? 0);
    case 'scale':
      counts(1, 2);
      return [a, 0, 0, b ?? a, 0, 0];
    case 'rotate':
      counts(1, 3);
      return values.length === 1
        ? rotation(a)
        : multiply(multiply(translation(b, c), rotation(a)), translation(-b, -c));
    case 'skewX':
      counts(1);
      return [1, 0, tangent(a), 1, 0, 0];
    case 'skewY':
      counts(1);
      return [1, tangent(a), 0, 1, 0, 0];
    default:
      throw fault('is not known; use matrix, translate, scale, rotate, skewX or skewY');
  }
}

/** Lengths and angles with their units (a zero needs none), separated by commas. */
function cssFunction(written: string, args: string, viewport: Viewport | null): Matrix {
  const parts = args.trim() === '' ? [] : args.trim().split(/\s*,\s*/);
  const fault = (why: string) => new ValueError(`transform ${quoted(`${written}(${args})`)} ${why}`);
  const counts = (...allowed: readonly number[]) => {
    if (!allowed.includes(parts.length)) {
      throw fault(`needs ${allowed.join(' or ')} values, with commas between them`);
    }
  };
  const number = (i: number): number => {
    const value = toNumber(parts[i]);
    if (Number.isNaN(value)) throw fault(`cannot be read: ${quoted(parts[i])} is no number`);
    return value;
  };
  const factor = (i: number): number =>
    parts[i].endsWith('%') ? parseLength(parts[i]).value / 100 : number(i);
  const length = (i: number, whole: number | null): number => {
    const value = parseLength(parts[i]);
    if (value.unit === '' && value.value !== 0) {
      throw fault(`has no unit in CSS, so a browser ignores it; write ${quoted(`${parts[i]}px`)}`);
    }
    return toUserUnits(value, whole);
  };
  const angle = (i: number): number => {
    const match = ANGLE.exec(parts[i]);
    const value = match === null ? Number.NaN : toNumber(match[1]);
    if (match === null || Number.isNaN(value)) throw fault(`cannot be read: ${quoted(parts[i])} is no angle`);
    if (match[2] === undefined && value !== 0) {
      throw fault(`has no unit in CSS, so a browser ignores it; write ${quoted(`${parts[i]}deg`)}`);
    }
    return value * DEGREES[(match[2] ?? 'deg').toLowerCase()];
  };
  const width = viewport?.width ?? null;
  const height = viewport?.height ?? null;
  switch (written.toLowerCase()) {
    case 'matrix':
      counts(6);
      return [number(0), number(1), number(2), number(3), number(4), number(5)];
    case 'translate':
      counts(1, 2);
      return translation(length(0, width), parts.length > 1 ? length(1, height) : 0);
    case 'translatex':
      counts(1);
      return translation(length(0, width), 0);
    case 'translatey':
      counts(1);
      return translation(0, length(0, height));
    case 'scale': {
      counts(1, 2);
      const x = factor(0);
      return [x, 0, 0, parts.length > 1 ? factor(1) : x, 0, 0];
    }
    case 'scalex':
      counts(1);
      return [factor(0), 0, 0, 1, 0, 0];
    case 'scaley':
      counts(1);
      return [1, 0, 0, factor(0), 0, 0];
    case 'rotate':
    case 'rotatez':
      counts(1);
      return rotation(angle(0));
    case 'skew':
      counts(1, 2);
      return [1, parts.length > 1 ? tangent(angle(1)) : 0, tangent(angle(0)), 1, 0, 0];
    case 'skewx':
      counts(1);
      return [1, 0, tangent(angle(0)), 1, 0, 0];
    case 'skewy':
      counts(1);
      return [1, tangent(angle(0)), 0, 1, 0, 0];
    default:
      throw fault('is not known; use matrix, translate, scale, rotate, skewX or skewY');
  }
}

const ANGLE = new RegExp(`^(${NUMBER})(deg|rad|grad|turn)?$`, 'i');

const DEGREES: Readonly<Record<string, number>> = { deg: 1, grad: 0.9, rad: 180 / Math.PI, turn: 360 };

/** Exact at multiples of 90°, so that a turned drawing stays square. */
function rotation(degrees: number): Matrix {
  const quarter = degrees / 90;
  if (Number.isInteger(quarter)) {
    const i = ((quarter % 4) + 4) % 4;
    const cos = [1, 0, -1, 0][i];
    const sin = [0, 1, 0, -1][i];
    return [cos, sin, -sin, cos, 0, 0];
  }
  const angle = (degrees * Math.PI) / 180;
  const cos = Math.cos(angle);
  const sin = Math.sin(angle);
  return [cos, sin, -sin, cos, 0, 0];
}

function tangent(degrees: number): number {
  return Math.tan((degrees * Math.PI) / 180);
}
