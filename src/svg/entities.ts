import { decodeXML } from 'entities/decode';
import { InputError } from '../errors.ts';
import { MAX_ENTITY_CHARACTERS } from './limits.ts';
import { quoted } from './value-error.ts';

/**
 * The entities that a file's own DOCTYPE declares (old vector editors keep their namespaces in them), each with its
 * plain text, or with the reason why it is not expanded. Nothing is nested and the sum is bounded, so no bomb can be built.
 */
export interface Entities {
  readonly declared: ReadonlyMap<string, { readonly text: string } | { readonly refused: string }>;
  /** Characters that may still be expanded; counted down in place while one file is read. */
  charactersLeft: number;
}

/** The entities of a DOCTYPE's internal subset (the text between its square brackets). External ones are never opened. */
export function readEntities(subset: string): Entities {
  const declared = new Map<string, { readonly text: string } | { readonly refused: string }>();
  const declaration = /<!ENTITY\s+(%\s+)?([^\s"'<>%&;]+)\s+(?:"([^"]*)"|'([^']*)'|(?:SYSTEM|PUBLIC)\b)/g;
  for (const [, parameter, name = '', inDouble, inSingle] of subset.matchAll(declaration)) {
    if (parameter === undefined && !declared.has(name))
      declared.set(name, readDeclared(inDouble ?? inSingle));
  }
  return { declared, charactersLeft: MAX_ENTITY_CHARACTERS };
}

function readDeclared(value: string | undefined): { readonly text: string } | { readonly refused: string } {
  if (value === undefined) return { refused: 'stands for another file' };
  if (value.includes('<')) return { refused: 'holds markup' };
  if (/&(?!#|(?:amp|lt|gt|quot|apos);)/.test(value)) return { refused: 'refers to another entity' };
  return { text: decodeXML(value) };
}

/**
 * Character data or an attribute value with its references decoded: `&amp;` and its kind, `&#181;`, and what the file's
 * own DOCTYPE declares.
 * @throws InputError at `where` for a bare `&`, an unknown entity, or a reference to no character.
 */
export function decodeReferences(raw: string, entities: Entities, where: string): string {
  if (!raw.includes('&')) return raw;
  return raw.replace(/&(?:([^\s&;<]{1,100});)?/g, (reference: string, name: string | undefined) => {
    if (name === undefined) throw new InputError(where, 'not XML: a bare "&"; write "&amp;" for it');
    if (name.startsWith('#')) return decodeNumeric(reference, name, where);
    if (PREDEFINED.has(name)) return decodeXML(reference);
    const entity = entities.declared.get(name);
    if (entity === undefined) {
      throw new InputError(where, `unknown entity ${quoted(reference)}; write the character itself`);
    }
    if ('refused' in entity) {
      throw new InputError(
        where,
        `the entity ${quoted(reference)} ${entity.refused} and is not expanded; save the drawing as plain SVG`,
      );
    }
    entities.charactersLeft -= entity.text.length;
    if (entities.charactersLeft < 0) {
      throw new InputError(
        where,
        `the file's own entities expand to over ${MAX_ENTITY_CHARACTERS} characters (the limit); save the drawing as plain SVG`,
      );
    }
    return entity.text;
  });
}

const PREDEFINED: ReadonlySet<string> = new Set(['amp', 'lt', 'gt', 'quot', 'apos']);

function decodeNumeric(reference: string, name: string, where: string): string {
  const digits = /^#(?:x([0-9a-fA-F]+)|([0-9]+))$/.exec(name);
  const code = digits?.[1] !== undefined ? Number.parseInt(digits[1], 16) : Number(digits?.[2] ?? Number.NaN);
  // XML 1.0, 2.2 Char
  const isCharacter =
    code === 0x9 ||
    code === 0xa ||
    code === 0xd ||
    (code >= 0x20 && code <= 0xd7ff) ||
    (code >= 0xe000 && code <= 0xfffd) ||
    (code >= 0x10000 && code <= 0x10ffff);
  if (!isCharacter)
    throw new InputError(where, `${quoted(reference)} is no character; write for example "&#181;"`);
  return decodeXML(reference);
}
