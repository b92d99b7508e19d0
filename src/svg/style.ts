/** From specified values to what a shape looks like: inheritance (CSS Cascade 4, 7; SVG 2, 13) and the resolved style. */
import { MARKERS, type Specified } from './declarations.ts';
import { readLength } from './lengths.ts';
import { toNumber } from './numbers.ts';
import { paintIsVisible, parseOpacity } from './paint.ts';
import type { ShapeStyle, ShapeTag } from './types.ts';
import { quoted, ValueError } from './value-error.ts';
import { diagonalOf, type Viewport } from './viewport.ts';

export type Disguise = ShapeStyle['disguises'][number];

/** Inherited properties as specified, with their initial values. */
export const INITIAL_STYLE = Object.freeze({
  stroke: 'none',
  'stroke-width': '1',
  'stroke-opacity': '1',
  'stroke-dasharray': 'none',
  'stroke-linecap': 'butt',
  fill: 'black',
  'fill-opacity': '1',
  visibility: 'visible',
  color: 'black',
  'marker-start': 'none',
  'marker-mid': 'none',
  'marker-end': 'none',
});

type InheritedProperty = keyof typeof INITIAL_STYLE;

export type InheritedStyle = Readonly<Record<InheritedProperty, string>>;

/** What an element hands down: the parent's own object when it changes nothing, so that whole groups share one. */
export function inherit(parent: InheritedStyle, specified: Specified): InheritedStyle {
  if (specified === null) return parent;
  let style: Record<InheritedProperty, string> | null = null;
  for (const [property, value] of specified) {
    if (!isInherited(property)) continue;
    const computed = computedValue(property, value, parent);
    if (computed === parent[property]) continue;
    style ??= { ...parent };
    style[property] = computed;
  }
  return style ?? parent;
}

/** A property that is not inherited, in lower case; `initial` when not given. */
export function ownKeyword(specified: Specified, property: string, initial: string): string {
  const value = specified?.get(property)?.toLowerCase();
  return value === undefined || GLOBAL_KEYWORDS.has(value) ? initial : value;
}

/** `clip-path`, `mask`, `filter` and an `opacity` of 0 work on an element and all that is in it. */
export function addDisguises(outer: readonly Disguise[], specified: Specified): readonly Disguise[] {
  if (specified === null) return outer;
  const added: Disguise[] = [];
  const isSet = (property: string): boolean => ownKeyword(specified, property, 'none') !== 'none';
  if (isSet('clip-path')) added.push('clip-path');
  if (isSet('mask') || isSet('mask-image')) added.push('mask');
  if (isSet('filter')) added.push('filter');
  if (parseOpacity(ownKeyword(specified, 'opacity', '1')) === 0) added.push('opacity');
  const fresh = added.filter((one) => !outer.includes(one));
  return fresh.length === 0 ? outer : [...outer, ...fresh];
}

/**
 * @param own the shape's inherited properties with its own applied.
 * @param specified the shape's own values, for what is not inherited.
 * @throws ValueError for a stroke width or dash pattern that cannot be read.
 */
export function resolveStyle(
  tag: ShapeTag,
  own: InheritedStyle,
  specified: Specified,
  disguises: readonly Disguise[],
  viewport: Viewport | null,
): ShapeStyle {
  const inked = (paint: 'stroke' | 'fill'): boolean =>
    paintIsVisible(own[paint], own.color) && parseOpacity(own[`${paint}-opacity`]) > 0;
  const strokeInked = inked('stroke');
  const strokeWidth = strokeInked ? parseStrokeWidth(own['stroke-width'], viewport) : 0;
  const stroked = strokeInked && strokeWidth > 0;
  const linecap = own['stroke-linecap'].toLowerCase();
  const hasMarker =
    (tag === 'path' || tag === 'line' || tag === 'polyline' || tag === 'polygon') &&
    MARKERS.some((marker) => own[marker].toLowerCase() !== 'none');
  return {
    stroked,
    filled: inked('fill'),
    strokeWidth,
    zeroWidth: strokeInked && !stroked,
    dashed: stroked && isDashed(own['stroke-dasharray']),
    linecap: linecap === 'round' || linecap === 'square' ? linecap : 'butt',
    nonScalingStroke: ownKeyword(specified, 'vector-effect', 'none').includes('non-scaling-stroke'),
    disguises: hasMarker ? [...disguises, 'marker'] : disguises,
  };
}

const GLOBAL_KEYWORDS: ReadonlySet<string> = new Set('inherit initial unset revert revert-layer'.split(' '));

function isInherited(property: string): property is InheritedProperty {
  return Object.hasOwn(INITIAL_STYLE, property);
}

function computedValue(property: InheritedProperty, value: string, parent: InheritedStyle): string {
  const keyword = value.toLowerCase();
  if (keyword === 'initial') return INITIAL_STYLE[property];
  if (GLOBAL_KEYWORDS.has(keyword) || (property === 'color' && keyword === 'currentcolor'))
    return parent[property];
  return value;
}

function parseStrokeWidth(text: string, viewport: Viewport | null): number {
  const width = readLength('stroke-width', text, viewport && diagonalOf(viewport));
  if (width < 0) throw new ValueError(`stroke-width ${quoted(text)} is negative; write the channel's width`);
  return width;
}

/** A pattern with a gap in it. As SVG says, a bad pattern or one of zeros only is a solid line. */
function isDashed(text: string): boolean {
  const trimmed = text.trim();
  if (trimmed.toLowerCase() === 'none') return false;
  if (/[(]/.test(trimmed)) {
    throw new ValueError(`stroke-dasharray ${quoted(trimmed)} is computed; write plain numbers, or none`);
  }
  const values = trimmed
    .split(/\s*,\s*|\s+/)
    .map((part) => toNumber(part.replace(/(?:px|mm|cm|q|in|pt|pc|r?em|%)$/i, '')));
  if (values.some((value) => Number.isNaN(value) || value < 0)) return false;
  // An odd list is repeated, so that every value is once a gap.
  return values.length % 2 === 1
    ? values.some((value) => value > 0)
    : values.some((value, i) => i % 2 === 1 && value > 0);
}
