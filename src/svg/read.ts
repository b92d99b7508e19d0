import { InputError } from '../errors.ts';
import { utf8Length } from '../utf8-length.ts';
import { makeCascade } from './cascade.ts';
import { MAX_SVG_BYTES } from './limits.ts';
import { multiply } from './matrix.ts';
import { addDisguises, INITIAL_STYLE, inherit, ownKeyword } from './style.ts';
import { parseTransform } from './transform.ts';
import { attribute, readTree, type XmlElement } from './tree.ts';
import type { SvgDrawing } from './types.ts';
import { ValueError } from './value-error.ts';
import { rootScale } from './viewport.ts';
import { walkDrawing } from './walk.ts';

/**
 * SVG text → the shapes it draws, each with its resolved style and its transform to root user units (the coordinates of
 * the root viewBox, y down). Knows nothing of chips. Nothing outside the text is opened.
 * @param where the file's name, for messages.
 * @throws InputError (`file:line: <element>: what, and what would be right`) for an empty file, text that is not XML or not
 * SVG, a file that is cut off, a value that cannot be read, or a limit.
 */
export function readSvg(text: string, where: string): SvgDrawing {
  if (text.length > MAX_SVG_BYTES || utf8Length(text) > MAX_SVG_BYTES) {
    throw new InputError(
      where,
      `the SVG is over ${MAX_SVG_BYTES / 1e6} MB (the limit); split or simplify the drawing`,
    );
  }
  const { root, foreignSheets } = readTree(text, where);
  const { byId, styles } = indexTree(root);
  const cascade = makeCascade(styles, where);
  const css = cascade.css(root, null);
  const specified = cascade.specified(root, css);
  // A transform on the outermost svg turns or scales the whole picture; where to does not matter, so neither does its origin.
  const scale = readOrExplain(root, where, () => {
    const grammar = css?.has('transform') ? 'css' : 'attribute';
    const transform = parseTransform(specified?.get('transform') ?? 'none', grammar, null);
    // A size in CSS wins over the attributes.
    const size = rootScale((name) => css?.get(name) ?? attribute(root, name));
    return { ...size, toRoot: multiply(size.toRoot, transform) };
  });
  const { toRoot, viewport, ...size } = scale;
  const surroundings = {
    toRoot,
    viewport,
    style: inherit(INITIAL_STYLE, specified),
    disguises: addDisguises([], specified),
  };
  const isShown = ownKeyword(specified, 'display', 'inline') !== 'none';
  const walked = isShown
    ? walkDrawing(root, surroundings, cascade, byId, where)
    : { shapes: [], undrawn: [], unread: new Map<string, number>() };
  const unread = new Map(walked.unread);
  if (cascade.skippedRules > 0) unread.set('style rule', cascade.skippedRules);
  if (foreignSheets > 0) unread.set('style sheet in another file', foreignSheets);
  return { ...size, shapes: walked.shapes, undrawn: walked.undrawn, unread: Object.fromEntries(unread) };
}

interface TreeIndex {
  readonly byId: ReadonlyMap<string, XmlElement>;
  readonly styles: readonly XmlElement[];
}

/** In document order, so that the first of two elements with one id is found and later style rules win. */
function indexTree(root: XmlElement): TreeIndex {
  const byId = new Map<string, XmlElement>();
  const styles: XmlElement[] = [];
  const pending = [root];
  for (let element = pending.pop(); element !== undefined; element = pending.pop()) {
    const id = attribute(element, 'id');
    if (id !== undefined && !byId.has(id)) byId.set(id, element);
    if (element.isSvg && element.name === 'style') styles.push(element);
    for (let i = element.children.length - 1; i >= 0; i--) pending.push(element.children[i]);
  }
  return { byId, styles };
}

function readOrExplain<T>(root: XmlElement, where: string, read: () => T): T {
  try {
    return read();
  } catch (cause) {
    if (!(cause instanceof ValueError)) throw cause;
    throw new InputError(`${where}:${root.line}`, `<svg>: ${cause.message}`, { cause });
  }
}
