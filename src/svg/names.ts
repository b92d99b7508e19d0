import { attribute, prefixedAttribute, type XmlElement } from './tree.ts';

/** The drawn name: `data-name`, a vector editor's label (`inkscape:label` …), a child `title`, `id`; trimmed; else null. */
export function drawnName(element: XmlElement): string | null {
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
