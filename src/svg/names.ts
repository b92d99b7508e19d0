import { withoutEscapes } from '../escaped-names.ts';
import { attribute, prefixedAttribute, type XmlElement } from './tree.ts';
import { ValueError } from './value-error.ts';

/** Longest drawn name in characters: names are printed on paper, on pictures and in every row of a table. */
export const MAX_NAME = 1000;

/**
 * The drawn name of what is written so: with an editor's escapes read.
 * @throws ValueError for one longer than MAX_NAME.
 */
export function nameOf(written: string | null): string | null {
  const name = written === null ? null : withoutEscapes(written);
  if (name !== null && name.length > MAX_NAME) {
    throw new ValueError(`its name has ${name.length} characters, over ${MAX_NAME} (the limit); shorten it`);
  }
  return name;
}

/** The drawn name of whatever length, to say which element is meant. */
export function nameAsDrawn(element: XmlElement): string | null {
  const written = nameAsWritten(element);
  return written === null ? null : withoutEscapes(written);
}

/**
 * The name as it stands in the file: `data-name`, a vector editor's label (any `*:label`), a child `title`, `id`; trimmed;
 * else null.
 */
export function nameAsWritten(element: XmlElement): string | null {
  const title = element.children.find((child) => child.name === 'title' && child.isSvg);
  return (
    nonEmpty(attribute(element, 'data-name')) ??
    nonEmpty(prefixedAttribute(element, ':label')) ??
    nonEmpty(title?.text) ??
    drawnId(element)
  );
}

/** The trimmed `id`, or null. */
export function drawnId(element: XmlElement): string | null {
  return nonEmpty(attribute(element, 'id'));
}

function nonEmpty(text: string | undefined): string | null {
  const trimmed = text?.trim();
  return trimmed ? trimmed : null;
}
