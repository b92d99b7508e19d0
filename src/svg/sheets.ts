/**
 * `<style>` rules: css-tree parses the sheet, css-select matches the selectors on the element tree.
 * Read: rules at the top level and inside `@media all` / `screen`. Not read, and counted: every other at-rule that
 * could change a drawing, rules nested in rules, and rules whose selector css-select does not know (as CSS itself drops a
 * rule with an unknown selector).
 * Cost: rules are filed under the id, class or tag of their last part, so an element meets only those that could fit.
 */

import { compile, type Options } from 'css-select';
import type { Block, CssNode, Rule, Selector } from 'css-tree';
import parseCss from 'css-tree/parser';
import { grouped } from '../by-key.ts';
import { InputError } from '../errors.ts';
import { type Declarations, toDeclarations } from './declarations.ts';
import { MAX_SELECTOR_STEPS } from './limits.ts';
import { attribute, type XmlElement } from './tree.ts';

export interface SheetRule {
  /** Selectors 4, 17: ids, classes, types. */
  readonly specificity: readonly [number, number, number];
  /** Order of appearance among all rules. */
  readonly order: number;
  readonly declarations: Declarations;
}

export interface Sheets {
  /** Rules that were passed over. */
  readonly skipped: number;
  /**
   * Rules that select the element, weakest first (specificity, then order).
   * @param copyOf root of the copy that the element is part of: nothing above or beside it is seen. Null outside of copies.
   */
  readonly matching: (element: XmlElement, copyOf: XmlElement | null) => readonly SheetRule[];
}

/**
 * All `<style>` sheets of a file; null when there are none.
 * @throws InputError for a sheet that css-tree cannot parse, and from `matching` when selectors cost too much.
 */
export function readSheets(styles: readonly XmlElement[], where: string): Sheets | null {
  const budget: Budget = { stepsLeft: MAX_SELECTOR_STEPS, where, copyOf: null };
  const reading: Reading = { selectable: [], skipped: 0, rules: 0, options: adapterOptions(budget) };
  for (const element of styles) {
    const type = attribute(element, 'type')?.trim().toLowerCase() ?? '';
    if (type !== '' && type !== 'text/css') continue;
    if (!appliesOnScreen(attribute(element, 'media') ?? 'all')) continue;
    readSheet(element, where, reading);
  }
  if (reading.selectable.length === 0 && reading.skipped === 0) return null;
  return { skipped: reading.skipped, matching: fileByKey(reading.selectable, budget) };
}

/** One selector of a rule, ready to be asked. */
interface Selectable extends SheetRule {
  /** `#id`, `.class`, a tag name, or `*`: what an element must have so that the selector can fit. */
  readonly key: string;
  readonly matches: (element: XmlElement) => boolean;
}

interface Reading {
  readonly selectable: Selectable[];
  skipped: number;
  rules: number;
  readonly options: Options<XmlElement, XmlElement>;
}

interface Budget {
  stepsLeft: number;
  readonly where: string;
  /** Root of the copy in which selectors are matched just now. */
  copyOf: XmlElement | null;
}

function readSheet(element: XmlElement, where: string, reading: Reading): void {
  let sheet: CssNode;
  try {
    sheet = parseCss(element.text, { parseValue: false, parseAtrulePrelude: false, positions: true });
  } catch (cause) {
    // css-tree forgives bad CSS; it throws only when brackets nest deeper than the call stack.
    throw new InputError(`${where}:${element.line}`, '<style>: the sheet cannot be read; simplify it', {
      cause,
    });
  }
  const pending: CssNode[] = sheet.type === 'StyleSheet' ? sheet.children.toArray().reverse() : [];
  for (let node = pending.pop(); node !== undefined; node = pending.pop()) {
    if (node.type === 'Rule') readRule(node, element.text, reading);
    else if (node.type === 'Raw') reading.skipped++;
    else if (node.type === 'Atrule') {
      const name = node.name.toLowerCase();
      const query = node.prelude?.type === 'Raw' ? node.prelude.value : '';
      if (name === 'media' && appliesOnScreen(query) && node.block !== null) {
        pending.push(...node.block.children.toArray().reverse());
      } else if (!HARMLESS_AT_RULES.has(name) && !(name === 'media' && isOnlyForOtherMedia(query)))
        reading.skipped++;
    }
  }
}

/** At-rules that cannot change which strokes are drawn, or where. */
const HARMLESS_AT_RULES: ReadonlySet<string> = new Set(
  'charset font-face namespace page counter-style'.split(' '),
);

function appliesOnScreen(query: string): boolean {
  return query.split(',').some((one) => /^(?:(?:only\s+)?(?:all|screen)|not\s+print)?$/i.test(one.trim()));
}

function isOnlyForOtherMedia(query: string): boolean {
  return query.split(',').every((one) => /^(?:only\s+)?(?:print|speech)\b/i.test(one.trim()));
}

function readRule(rule: Rule, source: string, reading: Reading): void {
  reading.skipped += nestedRules(rule.block);
  if (rule.prelude.type !== 'SelectorList') {
    reading.skipped++;
    return;
  }
  const order = reading.rules++;
  const declarations = toDeclarations(rule.block);
  const found: Selectable[] = [];
  for (const selector of rule.prelude.children) {
    if (selector.type !== 'Selector' || selector.loc == null) {
      reading.skipped++;
      return;
    }
    if (namesPseudoElement(selector)) continue;
    const text = source.slice(selector.loc.start.offset, selector.loc.end.offset);
    const matches = compileSelector(text, reading.options);
    if (matches === null) {
      reading.skipped++;
      return;
    }
    found.push({ specificity: specificityOf(selector), order, declarations, key: keyOf(selector), matches });
  }
  reading.selectable.push(...found);
}

function nestedRules(block: Block): number {
  let nested = 0;
  for (const node of block.children) if (node.type === 'Rule' || node.type === 'Atrule') nested++;
  return nested;
}

/** Pseudo-elements that CSS knows: their rules are valid and style no element of ours. */
const PSEUDO_ELEMENTS: ReadonlySet<string> = new Set(
  'before after first-line first-letter marker selection placeholder backdrop cue'.split(' '),
);

function namesPseudoElement(selector: Selector): boolean {
  for (const part of selector.children) {
    if (part.type === 'PseudoElementSelector' && PSEUDO_ELEMENTS.has(part.name.toLowerCase())) return true;
    // CSS 2 wrote four of them with one colon.
    if (part.type === 'PseudoClassSelector' && /^(before|after|first-line|first-letter)$/i.test(part.name))
      return true;
  }
  return false;
}

function compileSelector(
  text: string,
  options: Options<XmlElement, XmlElement>,
): ((element: XmlElement) => boolean) | null {
  try {
    return compile<XmlElement, XmlElement>(text, options);
  } catch {
    // css-select throws for what it does not know; the caller counts the rule as skipped.
    return null;
  }
}

/** css-select's view of the tree. Every step is counted, because `:nth-child` and `~` on one long row are quadratic. */
function adapterOptions(budget: Budget): Options<XmlElement, XmlElement> {
  const visited = (element: XmlElement, more = 0): XmlElement => {
    budget.stepsLeft -= 1 + more;
    if (budget.stepsLeft >= 0) return element;
    throw new InputError(
      budget.where,
      `the <style> rules take over ${MAX_SELECTOR_STEPS} steps to match (the limit); use simpler selectors`,
    );
  };
  const readAttribute = (element: XmlElement, name: string): string | undefined =>
    attribute(visited(element, element.attributes.length / 2), name);
  // css-select types rows of elements as mutable arrays and only reads them.
  const siblings = (element: XmlElement): XmlElement[] =>
    (element === budget.copyOf ? [element] : (element.parent?.children ?? [element])) as XmlElement[];
  return {
    xmlMode: true,
    adapter: {
      isTag: (node): node is XmlElement => visited(node) === node,
      getAttributeValue: readAttribute,
      hasAttrib: (element, name) => readAttribute(element, name) !== undefined,
      getChildren: (element) => visited(element, element.children.length).children as XmlElement[],
      getSiblings: (element) => siblings(visited(element)),
      prevElementSibling: (element) =>
        visited(element) === budget.copyOf ? null : (siblings(element)[element.index - 1] ?? null),
      getName: (element) => visited(element).name,
      getParent: (element) => (visited(element) === budget.copyOf ? null : element.parent),
      getText: (element) => visited(element, element.text.length).text,
      removeSubsets: (nodes) => nodes,
    },
  };
}

/** @see Selectors 4, 17 https://www.w3.org/TR/selectors-4/#specificity-rules */
function specificityOf(selector: Selector): readonly [number, number, number] {
  const sum: [number, number, number] = [0, 0, 0];
  for (const part of selector.children) {
    if (part.type === 'IdSelector') sum[0]++;
    else if (part.type === 'ClassSelector' || part.type === 'AttributeSelector') sum[1]++;
    else if (part.type === 'TypeSelector') sum[2] += part.name === '*' ? 0 : 1;
    else if (part.type === 'PseudoElementSelector') sum[2]++;
    else if (part.type === 'PseudoClassSelector') addPseudoClass(sum, part.name.toLowerCase(), part.children);
  }
  return sum;
}

function addPseudoClass(sum: [number, number, number], name: string, inner: Iterable<CssNode> | null): void {
  if (name === 'where') return;
  const takesItsArguments = name === 'is' || name === 'not' || name === 'has' || name === 'matches';
  if (!takesItsArguments) sum[1]++;
  let most: readonly [number, number, number] = [0, 0, 0];
  for (const node of inner ?? []) {
    const list = node.type === 'Nth' ? node.selector : node;
    if (list?.type !== 'SelectorList') continue;
    for (const one of list.children) {
      if (one.type !== 'Selector') continue;
      const own = specificityOf(one);
      if (compareSpecificity(own, most) > 0) most = own;
    }
  }
  for (let i = 0; i < 3; i++) sum[i] += most[i];
}

function compareSpecificity(a: readonly number[], b: readonly number[]): number {
  return a[0] - b[0] || a[1] - b[1] || a[2] - b[2];
}

function keyOf(selector: Selector): string {
  let key = '*';
  for (const part of selector.children) {
    if (part.type === 'Combinator') key = '*';
    else if ('name' in part && typeof part.name === 'string' && /[\\|*]/.test(part.name)) continue;
    else if (part.type === 'IdSelector') key = `#${part.name}`;
    else if (part.type === 'ClassSelector' && !key.startsWith('#')) key = `.${part.name}`;
    else if (part.type === 'TypeSelector' && key === '*') key = part.name;
  }
  return key;
}

function fileByKey(
  selectable: readonly Selectable[],
  budget: Budget,
): (element: XmlElement, copyOf: XmlElement | null) => readonly SheetRule[] {
  const byKey = grouped(selectable, ({ key }) => key);
  return (element, copyOf) => {
    budget.copyOf = copyOf;
    const found: Selectable[] = [];
    for (const key of keysOf(element)) {
      const filed = byKey.get(key);
      if (filed === undefined) continue;
      budget.stepsLeft -= filed.length;
      for (const one of filed) if (one.matches(element)) found.push(one);
    }
    return found.sort((a, b) => compareSpecificity(a.specificity, b.specificity) || a.order - b.order);
  };
}

function keysOf(element: XmlElement): Iterable<string> {
  const keys = new Set(['*', element.name]);
  const id = attribute(element, 'id');
  if (id !== undefined) keys.add(`#${id}`);
  const classes = attribute(element, 'class')?.trim();
  if (classes) for (const one of classes.split(/\s+/)) keys.add(`.${one}`);
  return keys;
}
