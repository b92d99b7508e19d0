/**
 * `transform`, as attribute (SVG 2, 8.5; CSS Transforms 1, 6.1) and as CSS property (CSS Transforms 1, 4). The two are not
 * written alike: the attribute has plain numbers, the property has units and commas. A browser ignores what is written in
 * the other's way, and anything else that it cannot read. Here both are errors: the widths and places behind would be wrong.
 */
import type { Specified } from './declarations.ts';
import { parseLength, toUserUnits } from './lengths.ts';
import { IDENTITY, multiply, translation } from './matrix.ts';
import { NUMBER, toNumber } from './numbers.ts';
import { ownKeyword } from './style.ts';
import type { Matrix } from './types.ts';
import { quoted, ValueError } from './value-error.ts';
import type { Viewport } from './viewport.ts';

/** Which of the two grammars a transform is written in. */
type TransformGrammar = 'attribute' | 'css';

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
 * What an element says of its own: `transform` about `transform-origin` (CSS Transforms 1, 4).
 * @param css what of `specified` comes from CSS, and so is written in its grammar.
 * @throws ValueError for what cannot be read, and for the properties of CSS Transforms 2.
 */
export function ownTransform(css: Specified, specified: Specified, viewport: Viewport | null): Matrix {
  const text = specified?.get('transform') ?? 'none';
  for (const property of ['translate', 'rotate', 'scale', 'zoom', 'offset-path']) {
    const value = specified?.get(property);
    if (value !== undefined && !/^(?:none|normal|initial|unset|1|100%)$/i.test(value)) {
      throw new ValueError(
        `the CSS property ${property}: ${quoted(value)} is not read; write it as transform`,
      );
    }
  }
  const matrix = parseTransform(
    /^(?:initial|unset|revert|revert-layer)$/i.test(text) ? 'none' : text,
    css?.has('transform') ? 'css' : 'attribute',
    viewport,
  );
  const origin = specified?.get('transform-origin');
  const box = ownKeyword(specified, 'transform-box', 'view-box');
  if (text !== 'none' && box !== 'view-box') {
    throw new ValueError(`transform-box: ${quoted(box)} is not read; write the transform without it`);
  }
  if (origin === undefined || text === 'none') return matrix;
  const [x, y] = parseTransformOrigin(origin, viewport);
  return multiply(multiply(translation(x, y), matrix), translation(-x, -y));
}

/** A point; the reference box is the viewport, as `transform-box: view-box` says. */
function parseTransformOrigin(text: string, viewport: Viewport | null): readonly [number, number] {
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
  const fault = faultIn(name, args);
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
  return functionFor(values, ATTRIBUTE_FUNCTIONS.get(name), fault, '').toMatrix(...values);
}

/** Lengths and angles with their units (a zero needs none), separated by commas. */
function cssFunction(written: string, args: string, viewport: Viewport | null): Matrix {
  const fault = faultIn(written, args);
  const parts = args.trim() === '' ? [] : args.trim().split(/\s*,\s*/);
  const found = CSS_FUNCTIONS.get(written.toLowerCase());
  const { kinds, toMatrix } = functionFor(parts, found, fault, ', with commas between them');
  return toMatrix(...parts.map((part, i) => cssValue(part, kinds[i], viewport, fault)));
}

type Fault = (why: string) => ValueError;

function faultIn(name: string, args: string): Fault {
  return (why) => new ValueError(`transform ${quoted(`${name}(${args})`)} ${why}`);
}

function functionFor(
  values: readonly unknown[],
  found: TransformFunction | undefined,
  fault: Fault,
  hint: string,
): TransformFunction {
  if (found === undefined) throw fault('is not known; use matrix, translate, scale, rotate, skewX or skewY');
  const { counts } = found;
  if (!counts.includes(values.length)) throw fault(`needs ${counts.join(' or ')} values${hint}`);
  return found;
}

interface TransformFunction {
  /** How many values it may have. */
  readonly counts: readonly number[];
  /** What each is in CSS, a length by the side of the viewport that its percentages refer to. */
  readonly kinds: readonly CssKind[];
  /** From plain numbers, in user units and degrees. */
  readonly toMatrix: (...values: readonly number[]) => Matrix;
}

type CssKind = 'number' | 'factor' | 'angle' | keyof Viewport;

function readAs(
  counts: readonly number[],
  kinds: readonly CssKind[],
  toMatrix: TransformFunction['toMatrix'],
): TransformFunction {
  return { counts, kinds, toMatrix };
}

const SIX_NUMBERS = new Array<CssKind>(6).fill('number');
const MATRIX = readAs([6], SIX_NUMBERS, (a, b, c, d, e, f) => [a, b, c, d, e, f]);
const TRANSLATE = readAs([1, 2], ['width', 'height'], (x, y = 0) => translation(x, y));
const SCALE = readAs([1, 2], ['factor', 'factor'], (x, y = x) => [x, 0, 0, y, 0, 0]);
const ROTATE = readAs([1], ['angle'], rotation);
const SKEW_X = readAs([1], ['angle'], (x) => [1, 0, tangent(x), 1, 0, 0]);
const SKEW_Y = readAs([1], ['angle'], (y) => [1, tangent(y), 0, 1, 0, 0]);

const ATTRIBUTE_FUNCTIONS: ReadonlyMap<string, TransformFunction> = new Map([
  ['matrix', MATRIX],
  ['translate', TRANSLATE],
  ['scale', SCALE],
  ['rotate', readAs([1, 3], [], rotationAbout)],
  ['skewX', SKEW_X],
  ['skewY', SKEW_Y],
]);

/** By name in lower case. */
const CSS_FUNCTIONS: ReadonlyMap<string, TransformFunction> = new Map([
  ['matrix', MATRIX],
  ['translate', TRANSLATE],
  ['translatex', readAs([1], ['width'], (x) => translation(x, 0))],
  ['translatey', readAs([1], ['height'], (y) => translation(0, y))],
  ['scale', SCALE],
  ['scalex', readAs([1], ['factor'], (x) => [x, 0, 0, 1, 0, 0])],
  ['scaley', readAs([1], ['factor'], (y) => [1, 0, 0, y, 0, 0])],
  ['rotate', ROTATE],
  ['rotatez', ROTATE],
  ['skew', readAs([1, 2], ['angle', 'angle'], (x, y = 0) => [1, tangent(y), tangent(x), 1, 0, 0])],
  ['skewx', SKEW_X],
  ['skewy', SKEW_Y],
]);

function cssValue(text: string, kind: CssKind, viewport: Viewport | null, fault: Fault): number {
  switch (kind) {
    case 'factor':
      if (text.endsWith('%')) return parseLength(text).value / 100;
      return cssValue(text, 'number', viewport, fault);
    case 'number': {
      const value = toNumber(text);
      if (Number.isNaN(value)) throw fault(`cannot be read: ${quoted(text)} is no number`);
      return value;
    }
    case 'angle': {
      const match = ANGLE.exec(text);
      const value = match === null ? Number.NaN : toNumber(match[1]);
      if (match === null || Number.isNaN(value)) throw fault(`cannot be read: ${quoted(text)} is no angle`);
      if (match[2] === undefined && value !== 0) throw fault(noUnit(`${text}deg`));
      return value * DEGREES[(match[2] ?? 'deg').toLowerCase()];
    }
    case 'width':
    case 'height': {
      const length = parseLength(text);
      if (length.unit === '' && length.value !== 0) throw fault(noUnit(`${text}px`));
      return toUserUnits(length, viewport?.[kind] ?? null);
    }
    default:
      return kind satisfies never;
  }
}

function noUnit(better: string): string {
  return `has no unit in CSS, so a browser ignores it; write ${quoted(better)}`;
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

function rotationAbout(degrees: number, x?: number, y = 0): Matrix {
  if (x === undefined) return rotation(degrees);
  return multiply(multiply(translation(x, y), rotation(degrees)), translation(-x, -y));
}

function tangent(degrees: number): number {
  return Math.tan((degrees * Math.PI) / 180);
}
