/**
 * Walks the element tree as SVG renders it (SVG 2, 5 and 8): groups, nested svg, `use` and `symbol`, `switch`; what is not
 * displayed is not there. Without recursion, because a file may nest deeper than the call stack reaches.
 * Cost: linear in the elements drawn; `use` may draw one element often, so the drawn elements are counted and bounded.
 */
import { InputError } from '../errors.ts';
import type { Cascade } from './cascade.ts';
import type { Specified } from './declarations.ts';
import { givenLength, parseLength, toUserUnits } from './lengths.ts';
import { MAX_COPIES, MAX_ELEMENTS, MAX_GROUP_NAMES, MAX_PATH_COMMANDS } from './limits.ts';
import { multiply, translation } from './matrix.ts';
import { drawnId, MAX_NAME, nameAsDrawn, nameAsWritten, nameOf } from './names.ts';
import { shapePath } from './shapes.ts';
import {
  addDisguises,
  type Disguise,
  type InheritedStyle,
  inherit,
  ownKeyword,
  resolveStyle,
} from './style.ts';
import { ownTransform } from './transform.ts';
import { attribute, prefixedAttribute, type XmlElement } from './tree.ts';
import { refuseEscapedTwins } from './twins.ts';
import {
  type Clip,
  type Group,
  type Matrix,
  type PathCommand,
  SHAPE_TAGS,
  type Shape,
  type ShapeStyle,
  type ShapeTag,
  type Undrawn,
} from './types.ts';
import { quoted, ValueError } from './value-error.ts';
import { parseAspectRatio, parseViewBox, type Viewport, viewBoxTransform } from './viewport.ts';

/** What an element is drawn in. */
export interface Surroundings {
  readonly toRoot: Matrix;
  readonly viewport: Viewport | null;
  readonly style: InheritedStyle;
  readonly disguises: readonly Disguise[];
}

export interface Walked {
  readonly shapes: readonly Shape[];
  readonly undrawn: readonly Undrawn[];
  readonly unread: ReadonlyMap<string, number>;
}

/**
 * Everything that the children of the outermost svg draw, in document order.
 * @param byId the first element of each id.
 * @throws InputError with line and element for a value that cannot be read, a `use` that draws itself, or a limit; with both
 * names where two that are written differently are one.
 */
export function walkDrawing(
  root: XmlElement,
  surroundings: Surroundings,
  cascade: Cascade,
  byId: ReadonlyMap<string, XmlElement>,
  where: string,
): Walked {
  const walk = new Walk(cascade, byId, where);
  walk.enterRoot(root, surroundings);
  for (let frame = walk.top(); frame !== undefined; frame = walk.top()) {
    if (frame.next < frame.elements.length) walk.enter(frame.elements[frame.next++], frame.context);
    else walk.leave(frame);
  }
  refuseEscapedTwins(walk.shapes, walk.escaped, where);
  return { shapes: walk.shapes, undrawn: walk.undrawn, unread: walk.unread };
}

interface Context extends Surroundings {
  readonly chain: GroupChain | null;
  /** The element is drawn by this `use`, directly. */
  readonly use: XmlElement | null;
  /** What the innermost `use` round the element draws; null outside of one. */
  readonly copyOf: XmlElement | null;
  readonly clips: readonly Clip[];
}

/** The enclosing groups that have a name or a depth, innermost first; listed once for all shapes in them. */
interface GroupChain {
  readonly group: Group;
  readonly outer: GroupChain | null;
  list: readonly Group[] | null;
}

interface Frame {
  /** The open container; cannot be drawn again inside itself. */
  readonly element: XmlElement;
  readonly elements: readonly XmlElement[];
  next: number;
  readonly context: Context;
}

/** Elements that are never drawn where they stand (SVG 2, 5.1.4 and the descriptive elements): nothing is lost with them. */
const NEVER_DRAWN: ReadonlySet<string> = new Set(
  (
    'defs symbol clipPath mask pattern marker linearGradient radialGradient meshgradient hatch solidcolor filter ' +
    'style title desc metadata view cursor font font-face missing-glyph glyph color-profile'
  ).split(' '),
);

/** Elements that draw or change something that is not read; each is counted under its own name. */
const UNREAD: ReadonlySet<string> = new Set(
  (
    'foreignObject script animate animateTransform animateMotion animateColor set video audio iframe canvas ' +
    'flowRoot mesh hatchpath'
  ).split(' '),
);

/** What is counted over the whole drawing, and the most of it. */
const LIMITS = {
  elements: { most: MAX_ELEMENTS, what: 'elements' },
  copies: { most: MAX_COPIES, what: 'elements that use draws again' },
  commands: { most: MAX_PATH_COMMANDS, what: 'path commands' },
};

type Counted = keyof typeof LIMITS;

/** Attributes that CSS knows as properties too (SVG 2, 7 and 9.3.2); those of lines and polygons are none. */
const GEOMETRY_PROPERTIES: ReadonlySet<string> = new Set('x y width height cx cy r rx ry d'.split(' '));

/** What of an element is not read, as the key of the count; null when all of it is. */
type PassedOver = string | null;

const NO_GROUPS: readonly Group[] = [];

class Walk {
  readonly shapes: Shape[] = [];
  readonly undrawn: Undrawn[] = [];
  readonly unread = new Map<string, number>();
  /** What goes by another name than it is written with, and how it is written. */
  readonly escaped = new Map<Shape | Group, string>();
  readonly #cascade: Cascade;
  readonly #byId: ReadonlyMap<string, XmlElement>;
  readonly #where: string;
  readonly #frames: Frame[] = [];
  readonly #open = new Set<XmlElement>();
  #groupNames = 0;
  readonly #counts: Record<Counted, number> = { elements: 0, copies: 0, commands: 0 };
  /** Paths of elements that `use` draws again, with the viewport that their percentages referred to. */
  readonly #paths = new Map<
    XmlElement,
    { readonly viewport: Viewport | null; readonly css: Specified; readonly path: readonly PathCommand[] }
  >();
  #lastStyle: { readonly key: readonly unknown[]; readonly style: ShapeStyle } | null = null;

  constructor(cascade: Cascade, byId: ReadonlyMap<string, XmlElement>, where: string) {
    this.#cascade = cascade;
    this.#byId = byId;
    this.#where = where;
  }

  top(): Frame | undefined {
    return this.#frames.at(-1);
  }

  enterRoot(root: XmlElement, surroundings: Surroundings): void {
    const depth = attribute(root, 'data-depth') ?? null;
    const chain =
      depth === null ? null : { group: { name: null, dataDepth: depth }, outer: null, list: null };
    this.#push(root, root.children, { ...surroundings, chain, use: null, copyOf: null, clips: [] });
  }

  leave(frame: Frame): void {
    this.#frames.pop();
    this.#open.delete(frame.element);
  }

  enter(element: XmlElement, context: Context): void {
    this.#count('elements', 1, element);
    if (context.copyOf !== null) this.#count('copies', 1, element);
    if (!element.isSvg) return;
    try {
      const passedOver = this.#draw(element, context);
      if (passedOver !== null) this.unread.set(passedOver, (this.unread.get(passedOver) ?? 0) + 1);
    } catch (cause) {
      if (!(cause instanceof ValueError)) throw cause;
      throw this.#fault(element, cause.message, cause);
    }
  }

  #draw(element: XmlElement, context: Context): PassedOver {
    const { name } = element;
    if (UNREAD.has(name)) return name;
    const isSymbolInUse = name === 'symbol' && context.use !== null;
    if (NEVER_DRAWN.has(name) && !isSymbolInUse) {
      if (context.copyOf === null) this.#passOver(element, `it stands in <${name}>, where nothing is drawn`);
      return null;
    }
    const isShape = isShapeTag(name);
    const isContainer = name === 'g' || name === 'a' || name === 'svg' || name === 'switch' || name === 'use';
    if (!isShape && !isContainer && !isSymbolInUse) return 'unknown element';

    const condition = unmetCondition(element);
    if (condition !== null) {
      this.#passOver(element, 'a viewer without extensions that is set to English does not show it');
      return condition;
    }
    const css = this.#cascade.css(element, context.copyOf);
    if (css?.has('all'))
      throw new ValueError('the CSS property all is not read; set each property by itself');
    const specified = this.#cascade.specified(element, css);
    if (ownKeyword(specified, 'display', 'inline') === 'none') {
      this.#passOver(element, 'it is hidden (display: none)');
      return null;
    }
    const style = inherit(context.style, specified);
    const toRoot = multiply(context.toRoot, ownTransform(css, specified, context.viewport));
    if (!toRoot.every(Number.isFinite)) throw new ValueError('its transforms together are too large');
    if (toRoot[0] * toRoot[3] - toRoot[1] * toRoot[2] === 0) {
      this.#passOver(element, 'its transform flattens it');
      return 'shape flattened by its transform';
    }
    const disguises = addDisguises(context.disguises, specified);
    const inner: Context = { ...context, toRoot, style, disguises };
    if (isShape) return this.#drawShape(element, name, css, specified, inner);
    return this.#drawContainer(element, css, specified, inner);
  }

  #drawShape(
    element: XmlElement,
    tag: ShapeTag,
    css: Specified,
    specified: Specified,
    context: Context,
  ): PassedOver {
    const visibility = context.style.visibility.toLowerCase();
    if (visibility === 'hidden' || visibility === 'collapse') {
      this.#passOverShape(element, context.use, `it is hidden (visibility: ${visibility})`);
      return null;
    }
    const path = this.#pathOf(element, tag, css, context);
    if (path.length === 0 && tag !== 'text' && tag !== 'image') {
      this.#passOverShape(element, context.use, 'it has no size');
      return 'shape without size';
    }
    this.#count('commands', path.length, element);
    const { use } = context;
    const written = (use && nameAsWritten(use)) ?? nameAsWritten(element);
    const shape: Shape = {
      tag,
      ordinal: this.shapes.length,
      // A shape drawn by `use` goes by the name that the use was given, if any: each copy can have its own.
      name: nameOf(written),
      id: (use && drawnId(use)) ?? drawnId(element),
      groups: this.#groupsOf(context.chain, element),
      dataChannel: [element, use].some((one) => one !== null && attribute(one, 'data-channel') !== undefined),
      dataDepth: (use && attribute(use, 'data-depth')) ?? attribute(element, 'data-depth') ?? null,
      toRoot: context.toRoot,
      path,
      style: this.#styleOf(tag, specified, context),
      clips: context.clips,
    };
    this.shapes.push(shape);
    if (written !== null && written !== shape.name) this.escaped.set(shape, written);
    return null;
  }

  /** A shape that is not drawn, under the name that it would have. */
  #passOverShape(element: XmlElement, use: XmlElement | null, why: string): void {
    this.#addUndrawn('shape', (use && nameAsDrawn(use)) ?? nameAsDrawn(element), why);
  }

  /** The names in a part of the tree that is not drawn. */
  #passOver(element: XmlElement, why: string): void {
    const pending = [element];
    for (let one = pending.pop(); one !== undefined; one = pending.pop()) {
      if (!one.isSvg) continue;
      const kind = isShapeTag(one.name) || one.name === 'use' ? 'shape' : 'group';
      if (kind === 'shape' || one.name === 'g' || one.name === 'svg' || one.name === 'symbol')
        this.#addUndrawn(kind, nameAsDrawn(one), why);
      this.#count('elements', one.children.length, one);
      for (let i = one.children.length - 1; i >= 0; i--) pending.push(one.children[i]);
    }
  }

  #addUndrawn(kind: Undrawn['kind'], name: string | null, why: string): void {
    if (name !== null && name.length <= MAX_NAME) this.undrawn.push({ kind, name, why });
  }

  #drawContainer(element: XmlElement, css: Specified, specified: Specified, context: Context): PassedOver {
    const { name } = element;
    if (name === 'use') return this.#drawUse(element, css, context);
    if (name === 'svg' || name === 'symbol') return this.#drawViewport(element, css, specified, context);
    const elements = name === 'switch' ? this.#chosen(element) : element.children;
    this.#push(element, elements, { ...context, use: null, chain: this.#extend(context.chain, element) });
    return null;
  }

  /** The first child that can be drawn here. */
  #chosen(element: XmlElement): readonly XmlElement[] {
    this.#count('elements', element.children.length, element);
    const chosen = element.children.find(
      (child) =>
        child.isSvg &&
        !NEVER_DRAWN.has(child.name) &&
        child.name !== 'foreignObject' &&
        unmetCondition(child) === null,
    );
    return chosen === undefined ? [] : [chosen];
  }

  #drawUse(element: XmlElement, css: Specified, context: Context): PassedOver {
    const href = (attribute(element, 'href') ?? prefixedAttribute(element, ':href') ?? '').trim();
    if (!href.startsWith('#')) return href === '' ? 'use of nothing' : 'use of another file';
    const target = this.#byId.get(href.slice(1)) ?? this.#byId.get(decodeFragment(href.slice(1)));
    if (target === undefined) return 'use of nothing';
    if (this.#open.has(target) || target === element) {
      throw new ValueError(`it draws ${quoted(href)}, which it is part of; point href at another element`);
    }
    refuseCssSize(css, 'width', 'height');
    const x = side(element, css, 'x', context.viewport) ?? 0;
    const y = side(element, css, 'y', context.viewport) ?? 0;
    const isShape = isShapeTag(target.name);
    // A use that draws one shape stands for the shape, and so is no group of its own.
    const depth = attribute(element, 'data-depth') ?? null;
    const chain = isShape ? context.chain : this.#extend(context.chain, element, depth);
    const toRoot = x === 0 && y === 0 ? context.toRoot : multiply(context.toRoot, translation(x, y));
    this.#push(element, [target], { ...context, toRoot, chain, use: element, copyOf: target });
    return null;
  }

  #drawViewport(element: XmlElement, css: Specified, specified: Specified, context: Context): PassedOver {
    const { viewport, use } = context;
    if (element.name === 'svg') refuseCssSize(css, 'x', 'y', 'width', 'height');
    // SVG 2, 5.6.2: the width and height of a use replace those of the svg or symbol that it draws.
    const size = (name: 'width' | 'height'): number | null => {
      const given = (use && side(use, null, name, viewport)) ?? side(element, null, name, viewport);
      if (given !== null && given < 0) throw new ValueError(`${name} is negative; a size is zero or more`);
      return given ?? viewport?.[name] ?? null;
    };
    const x = side(element, null, 'x', viewport) ?? 0;
    const y = side(element, null, 'y', viewport) ?? 0;
    const width = size('width');
    const height = size('height');
    if (width === 0 || height === 0) return 'svg without size';
    const viewBox = parseViewBox(attribute(element, 'viewBox'));
    if (viewBox === 'disabled') return 'svg without size';
    let inner: Matrix = translation(x, y);
    let own: Viewport | null = width === null || height === null ? null : { width, height };
    const showsAll = /^(?:visible|auto)$/.test(ownKeyword(specified, 'overflow', 'hidden'));
    const clips =
      own === null || showsAll ? context.clips : [...context.clips, { toRoot: context.toRoot, x, y, ...own }];
    if (viewBox !== null) {
      if (own === null)
        throw new ValueError('it has a viewBox but no width and height, and neither has the drawing');
      const aspect = parseAspectRatio(attribute(element, 'preserveAspectRatio'));
      inner = viewBoxTransform(viewBox, aspect, { x, y, ...own });
      own = viewBox;
    }
    const toRoot = multiply(context.toRoot, inner);
    const chain = this.#extend(context.chain, element);
    this.#push(element, element.children, { ...context, toRoot, viewport: own, chain, clips, use: null });
    return null;
  }

  #push(element: XmlElement, elements: readonly XmlElement[], context: Context): void {
    this.#open.add(element);
    this.#frames.push({ element, elements, next: 0, context });
  }

  #pathOf(element: XmlElement, tag: ShapeTag, css: Specified, context: Context): readonly PathCommand[] {
    const known = context.copyOf !== null ? this.#paths.get(element) : undefined;
    if (known !== undefined && known.viewport === context.viewport && known.css === css) return known.path;
    const ofCss = (name: string) => (GEOMETRY_PROPERTIES.has(name) ? css?.get(name) : undefined);
    const path = shapePath(tag, (name) => ofCss(name) ?? attribute(element, name), context.viewport);
    if (context.copyOf !== null) this.#paths.set(element, { viewport: context.viewport, css, path });
    return path;
  }

  /** Shapes in a row mostly look the same: they share one object. */
  #styleOf(tag: ShapeTag, specified: Specified, context: Context): ShapeStyle {
    const own = specified?.get('vector-effect');
    const key = [tag, context.style, context.disguises, context.viewport, own];
    if (this.#lastStyle?.key.every((part, i) => part === key[i])) return this.#lastStyle.style;
    const style = resolveStyle(tag, context.style, specified, context.disguises, context.viewport);
    this.#lastStyle = { key, style };
    return style;
  }

  #extend(chain: GroupChain | null, element: XmlElement, depth?: string | null): GroupChain | null {
    const written = nameAsWritten(element);
    const name = nameOf(written);
    const dataDepth = depth ?? attribute(element, 'data-depth') ?? null;
    if (name === null && dataDepth === null) return chain;
    const group: Group = { name, dataDepth };
    if (name !== null) {
      if (written !== null && written !== name) this.escaped.set(group, written);
      this.#addUndrawn('group', name, 'it holds nothing that is drawn');
    }
    return { group, outer: chain, list: null };
  }

  #groupsOf(chain: GroupChain | null, element: XmlElement): readonly Group[] {
    if (chain === null) return NO_GROUPS;
    if (chain.list !== null) return chain.list;
    const list: Group[] = [];
    for (let link: GroupChain | null = chain; link !== null; link = link.outer) list.push(link.group);
    this.#groupNames += list.length;
    if (this.#groupNames > MAX_GROUP_NAMES) {
      const what = `its groups nest too deep: over ${MAX_GROUP_NAMES} group names (the limit)`;
      throw this.#fault(element, `${what}; ungroup some`);
    }
    chain.list = list.reverse();
    return chain.list;
  }

  #count(counted: Counted, count: number, element: XmlElement): void {
    this.#counts[counted] += count;
    const { most, what } = LIMITS[counted];
    if (this.#counts[counted] <= most) return;
    throw this.#fault(element, `the drawing has more than ${most} ${what} (the limit); split it`);
  }

  #fault(element: XmlElement, what: string, cause?: unknown): InputError {
    const name = nameAsDrawn(element);
    const said = name === null ? `<${element.name}>` : `<${element.name}> ${quoted(name)}`;
    return new InputError(`${this.#where}:${element.line}`, `${said}: ${what}`, { cause });
  }
}

const SHAPES: ReadonlySet<string> = new Set(SHAPE_TAGS);

function isShapeTag(name: string): name is ShapeTag {
  return SHAPES.has(name);
}

/**
 * SVG 2, 5.9: what the element asks of the viewer, as the key of the count, when a viewer without extensions that is set
 * to English does not have it; else null.
 */
function unmetCondition(element: XmlElement): string | null {
  if (attribute(element, 'requiredExtensions') !== undefined) return 'element that needs an extension';
  const languages = attribute(element, 'systemLanguage');
  if (languages === undefined) return null;
  const hasEnglish = languages.split(',').some((one) => /^en(?:-|$)/i.test(one.trim()));
  return hasEnglish ? null : 'element in another language';
}

/** By SVG 2 these properties count; browsers look at the attributes alone. */
function refuseCssSize(css: Specified, ...names: readonly ('x' | 'y' | 'width' | 'height')[]): void {
  const given = names.find((name) => css?.has(name));
  if (given !== undefined) {
    throw new ValueError(`${given} in CSS is read by some programs only; write it as an attribute`);
  }
}

/** A length of a `use` or nested svg; null when not given or `auto`. */
function side(
  element: XmlElement,
  css: Specified,
  name: 'x' | 'y' | 'width' | 'height',
  viewport: Viewport | null,
): number | null {
  const text = givenLength(css?.get(name) ?? attribute(element, name));
  if (text === null) return null;
  const whole = name === 'x' || name === 'width' ? 'width' : 'height';
  return toUserUnits(parseLength(text), viewport?.[whole] ?? null);
}

function decodeFragment(fragment: string): string {
  try {
    return decodeURIComponent(fragment);
  } catch {
    // A stray % stands for itself; the fragment was already looked up as written.
    return fragment;
  }
}
