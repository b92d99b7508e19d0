/**
 * Which value each CSS property of an element has: presentation attributes, then `<style>` rules by specificity and
 * order, then the `style` attribute, then the same again for what is `!important` (CSS Cascade 4, 6; SVG 2, 6.6).
 */
import { remembered } from '../by-key.ts';
import { InputError } from '../errors.ts';
import { type Declarations, parseStyleAttribute, type Specified } from './declarations.ts';
import { readSheets, type SheetRule } from './sheets.ts';
import { INITIAL_STYLE } from './style.ts';
import { attribute, type XmlElement } from './tree.ts';

export interface Cascade {
  /**
   * From rules and the `style` attribute alone.
   * @param copyOf what the `use` round the element draws, null outside of one: selectors see a copy without what stands
   * round its original (SVG 2, 5.5).
   */
  readonly css: (element: XmlElement, copyOf: XmlElement | null) => Specified;
  /** Presentation attributes too. */
  readonly specified: (element: XmlElement, css: Specified) => Specified;
  /** Style rules that could not be read. */
  readonly skippedRules: number;
}

/** Attributes that stand for the CSS property of the same name (SVG 2, 6.6), as far as they are read here. */
const PRESENTATION_ATTRIBUTES: ReadonlySet<string> = new Set([
  ...Object.keys(INITIAL_STYLE),
  ...'display opacity clip-path mask filter overflow vector-effect transform transform-origin'.split(' '),
]);

/** @param styles the `style` elements of the file, in document order. */
export function makeCascade(styles: readonly XmlElement[], where: string): Cascade {
  const sheets = styles.length === 0 ? null : readSheets(styles, where);
  const byText = new Map<string, Declarations>();
  const declared = (element: XmlElement): Declarations => {
    const text = attribute(element, 'style');
    if (text === undefined) return NONE;
    return remembered(byText, text, () => parseOrExplain(text, `${where}:${element.line}`));
  };
  /** Elements that `use` draws again are matched once. */
  const known = new Map<XmlElement | null, Map<XmlElement, Specified>>();
  const inlineOnly = new Map<Declarations, Specified>([[NONE, null]]);
  const css = (element: XmlElement, copyOf: XmlElement | null): Specified => {
    const inline = declared(element);
    if (sheets === null) return remembered(inlineOnly, inline, () => merge([], inline));
    const ofCopy = remembered(known, copyOf, () => new Map<XmlElement, Specified>());
    return remembered(ofCopy, element, () => merge(sheets.matching(element, copyOf), inline));
  };
  return { css, specified, skippedRules: sheets?.skipped ?? 0 };
}

const NONE: Declarations = [];

function parseOrExplain(text: string, where: string): Declarations {
  try {
    return parseStyleAttribute(text);
  } catch (cause) {
    throw new InputError(where, 'a style attribute nests its brackets too deep to be read; simplify it', {
      cause,
    });
  }
}

function merge(rules: readonly SheetRule[], inline: Declarations): Specified {
  if (rules.length === 0 && inline.length === 0) return null;
  const values = new Map<string, string>();
  for (const important of [false, true]) {
    for (const rule of rules) apply(rule.declarations, important, values);
    apply(inline, important, values);
  }
  return values;
}

function apply(declarations: Declarations, important: boolean, values: Map<string, string>): void {
  for (const one of declarations) if (one.important === important) values.set(one.property, one.value);
}

function specified(element: XmlElement, css: Specified): Specified {
  const { attributes } = element;
  let values: Map<string, string> | null = null;
  for (let i = 0; i < attributes.length; i += 2) {
    if (!PRESENTATION_ATTRIBUTES.has(attributes[i])) continue;
    const value = attributes[i + 1].trim();
    if (value === '') continue;
    values ??= new Map();
    values.set(attributes[i], value);
  }
  if (values === null || css === null) return values ?? css;
  for (const [property, value] of css) values.set(property, value);
  return values;
}
