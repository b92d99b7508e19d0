import { type ParsedElement, parse } from 'svg-parser';
import { InputError } from '../errors.ts';
import { type ScannedXml, scanXml } from './scan.ts';

const SVG_NAMESPACE = 'http://www.w3.org/2000/svg';

/** How many prefixes a file may bind to SVG's namespace; a drawing has one. */
const MAX_PREFIXES = 100;

export interface XmlElement {
  /** Name without its prefix. */
  readonly name: string;
  /** In SVG's namespace (or the file declares none). */
  readonly isSvg: boolean;
  readonly line: number;
  /** name, value, name, value … as read, always text. */
  readonly attributes: readonly string[];
  readonly parent: XmlElement | null;
  readonly children: readonly XmlElement[];
  /** Position among the parent's children. */
  readonly index: number;
  /** Character data of `title` and `style`; empty for every other element. */
  readonly text: string;
}

export interface XmlTree extends Pick<ScannedXml, 'foreignSheets'> {
  readonly root: XmlElement;
}

/**
 * The element tree of an SVG file; svg-parser builds it. Comments, processing instructions and other text are left out.
 * @throws InputError when the text is not XML, is cut off, or its root is not SVG's `svg`.
 */
export function readTree(text: string, where: string): XmlTree {
  const scanned = scanXml(text, where);
  const root = buildTree(parseSkeleton(scanned, where), scanned, where);
  if (root.name !== 'svg' || !root.isSvg) {
    const written = scanned.tags[0].name;
    const why = root.name === 'svg' ? ` in another namespace than ${SVG_NAMESPACE}` : '';
    throw new InputError(
      `${where}:${root.line}`,
      `XML, but not SVG: its root element is <${written}>${why}, where <svg> is needed; save the drawing as plain SVG`,
    );
  }
  return { root, foreignSheets: scanned.foreignSheets };
}

/** The value of an attribute by its full name, or undefined. */
export function attribute({ attributes }: XmlElement, name: string): string | undefined {
  for (let i = 0; i < attributes.length; i += 2) if (attributes[i] === name) return attributes[i + 1];
  return undefined;
}

/** The value of the first attribute with this prefix-free name in any prefix: `href` also finds `xlink:href`. */
export function prefixedAttribute({ attributes }: XmlElement, suffix: `:${string}`): string | undefined {
  for (let i = 0; i < attributes.length; i += 2) if (attributes[i].endsWith(suffix)) return attributes[i + 1];
  return undefined;
}

function parseSkeleton(scanned: ScannedXml, where: string): ParsedElement {
  try {
    return parse(scanned.skeleton).children[0];
  } catch (cause) {
    throw new InputError(where, 'not XML that can be read; save the drawing as plain SVG', { cause });
  }
}

interface Growing extends XmlElement {
  readonly children: Growing[];
  text: string;
}

/** Level by level, because a file may nest deeper than the call stack reaches. */
function buildTree(parsedRoot: ParsedElement, scanned: ScannedXml, where: string): XmlElement {
  // A plain <svg> without any xmlns is taken for SVG, as editors and programs do.
  const outside: ReadonlySet<string> = new Set(scanned.tags[0].name === 'svg' ? [''] : []);
  const make = (
    parsed: ParsedElement,
    parent: Growing | null,
    index: number,
    prefixes: ReadonlySet<string>,
  ): Pending => {
    const tag = scanned.tags[Number(String(parsed.properties.k).slice(1))];
    const own = declaredPrefixes(tag.attributes, prefixes);
    const colon = tag.name.indexOf(':');
    const element: Growing = {
      name: colon < 0 ? tag.name : tag.name.slice(colon + 1),
      isSvg: own.has(colon < 0 ? '' : tag.name.slice(0, colon)),
      line: tag.line,
      attributes: tag.attributes,
      parent,
      children: [],
      index,
      text: '',
    };
    return { parsed, element, prefixes: own };
  };
  const root = make(parsedRoot, null, 0, outside);
  const pending: Pending[] = [root];
  for (let i = 0; i < pending.length; i++) {
    const { parsed, element, prefixes } = pending[i];
    if (prefixes.size > MAX_PREFIXES) {
      const what = `more than ${MAX_PREFIXES} prefixes for SVG's namespace`;
      throw new InputError(where, `${what}; save the drawing as plain SVG`);
    }
    for (const child of parsed.children) {
      if (typeof child === 'string') continue; // CDATA never reaches svg-parser
      if (child.type === 'text') element.text += textOf(child.value, scanned);
      else {
        const made = make(child, element, element.children.length, prefixes);
        element.children.push(made.element);
        pending.push(made);
      }
    }
  }
  return root.element;
}

interface Pending {
  readonly parsed: ParsedElement;
  readonly element: Growing;
  /** Prefixes bound to SVG's namespace here; '' is the default namespace. */
  readonly prefixes: ReadonlySet<string>;
}

function declaredPrefixes(attributes: readonly string[], prefixes: ReadonlySet<string>): ReadonlySet<string> {
  let own = prefixes;
  for (let i = 0; i < attributes.length; i += 2) {
    const name = attributes[i];
    if (!name.startsWith('xmlns')) continue;
    const prefix = name === 'xmlns' ? '' : name.startsWith('xmlns:') ? name.slice(6) : null;
    if (prefix === null) continue;
    const isSvg = attributes[i + 1] === SVG_NAMESPACE;
    if (own.has(prefix) === isSvg) continue;
    const copy = new Set(own);
    if (isSvg) copy.add(prefix);
    else copy.delete(prefix);
    own = copy;
  }
  return own;
}

function textOf(keys: string, scanned: ScannedXml): string {
  return Array.from(keys.matchAll(/_(\d+);/g), ([, key]) => scanned.texts[Number(key)]).join('');
}
