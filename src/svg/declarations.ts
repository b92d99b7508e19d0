import type { CssNode } from 'css-tree';
import parseCss from 'css-tree/parser';

/** Property → value, as text; null when an element has none of its own. */
export type Specified = ReadonlyMap<string, string> | null;

/** The properties that the shorthand `marker` sets. */
export const MARKERS = ['marker-start', 'marker-mid', 'marker-end'] as const;

/** CSS declarations of one rule or `style` attribute, in order; names in lower case, values trimmed, as text. */
export type Declarations = readonly Declaration[];

export interface Declaration {
  readonly property: string;
  readonly value: string;
  readonly important: boolean;
}

/**
 * The declarations of a `style` attribute. What is no declaration is passed over, as CSS says.
 * Editors repeat a few texts on thousands of shapes, and css-tree takes 8 µs for each: keep a cache per file.
 */
export function parseStyleAttribute(text: string): Declarations {
  if (!/["'(){}[\]\\/!@]/.test(text)) return splitPlain(text);
  return toDeclarations(parseCss(text, { context: 'declarationList', parseValue: false }));
}

/** The declarations among the children of a css-tree DeclarationList or Block. */
export function toDeclarations(block: CssNode): Declarations {
  if (block.type !== 'DeclarationList' && block.type !== 'Block') return [];
  const found: Declaration[] = [];
  for (const node of block.children) {
    if (node.type === 'Declaration' && node.value.type === 'Raw') {
      add(found, node.property, node.value.value, node.important !== false);
    }
  }
  return found;
}

/** Text without quotes, brackets, escapes, comments or importance: semicolons and colons say it all. */
function splitPlain(text: string): Declarations {
  const found: Declaration[] = [];
  for (const part of text.split(';')) {
    const colon = part.indexOf(':');
    if (colon > 0) add(found, part.slice(0, colon).trim(), part.slice(colon + 1), false);
  }
  return found;
}

function add(found: Declaration[], name: string, raw: string, important: boolean): void {
  const value = raw.trim();
  if (value === '' || !/^-?[a-zA-Z]/.test(name)) return;
  const property = name.toLowerCase();
  if (property === 'marker') {
    for (const part of MARKERS) found.push({ property: part, value, important });
  } else found.push({ property, value, important });
}
