/**
 * Reads the lexical side of XML 1.0 (tags, attributes, comments, CDATA, DOCTYPE) and prepares a skeleton for svg-parser,
 * which builds the tree. svg-parser turns values that look like numbers into numbers (id="007" → 7), leaves entities
 * undecoded, mangles CDATA, fails on names with a dot or a letter beyond ASCII, lets a second root replace the first and
 * accepts a file that ends inside an element. So it is given tags without their attributes: each carries only a key
 * (`k="_12"`) to the tag read here, and text carries keys too (`_3;`).
 * Limits: no validation against a DTD; nothing outside the file is opened. Cost: linear in the text.
 */
import { remembered } from '../by-key.ts';
import { InputError } from '../errors.ts';
import { decodeReferences, type Entities, readEntities } from './entities.ts';
import { MAX_ELEMENTS } from './limits.ts';
import { quoted } from './value-error.ts';

export interface ScannedTag {
  /** As written, prefix included. */
  readonly name: string;
  /** Line of its `<`, from 1. */
  readonly line: number;
  /** name, value, name, value … ; values are decoded and always text. */
  readonly attributes: readonly string[];
}

export interface ScannedXml {
  /** Well-formed, with one root; tag number i carries k="_i". */
  readonly skeleton: string;
  readonly tags: readonly ScannedTag[];
  /** Style sheets in other files that the file asks for (`<?xml-stylesheet … ?>`); none is opened. */
  readonly foreignSheets: number;
  /** Decoded character data of `title` and `style` elements; `_i;` in the skeleton. */
  readonly texts: readonly string[];
}

/** @throws InputError for an empty file, text that is not XML, XML that is cut off, and more than 2 million elements. */
export function scanXml(text: string, where: string): ScannedXml {
  const scan = new XmlScan(text, where);
  scan.refuseWhatIsNoText();
  while (scan.at < text.length) {
    const open = text.indexOf('<', scan.at);
    scan.characters(open < 0 ? text.length : open);
    if (open < 0) break;
    if (text.startsWith('<!--', open)) scan.passOver('<!--', '-->', 'a comment');
    else if (text.startsWith('<![CDATA[', open)) scan.cdata();
    else if (text.startsWith('<!', open)) scan.doctype();
    else if (text.startsWith('<?', open)) scan.processingInstruction();
    else if (text.startsWith('</', open)) scan.closingTag();
    else scan.openingTag();
  }
  return scan.finish();
}

const NAME_SOURCE = '[A-Za-z_:\\u0080-\\uffff][-.\\w:\\u0080-\\uffff]*';

class XmlScan {
  readonly #text: string;
  readonly #where: string;
  /** First character not yet read. */
  at = 0;
  #line = 1;
  #nextBreak: number;
  #foreignSheets = 0;
  readonly #tags: ScannedTag[] = [];
  readonly #texts: string[] = [];
  readonly #skeleton: string[] = [];
  readonly #open: ScannedTag[] = [];
  #entities: Entities = { declared: new Map(), charactersLeft: 0 };
  /** One copy of every attribute and tag name, so that comparing names compares addresses. */
  readonly #names = new Map<string, string>();

  // Sticky and stateful, so each scan has its own.
  readonly #name = new RegExp(NAME_SOURCE, 'y');
  readonly #attribute = new RegExp(`\\s+(${NAME_SOURCE})\\s*=\\s*(?:"([^"]*)"|'([^']*)')`, 'y');
  readonly #attributeStart = new RegExp(`\\s+(${NAME_SOURCE})\\s*=\\s*["']`, 'y');
  readonly #tagEnd = /\s*(\/?)>/y;
  readonly #restIsEmpty = new RegExp(`\\s*(?:\\/|${NAME_SOURCE}\\s*(?:=\\s*)?)?$`, 'y');
  readonly #closing = new RegExp(`</(${NAME_SOURCE})\\s*>`, 'y');
  readonly #closingCutOff = new RegExp(`</(?:${NAME_SOURCE}\\s*)?$`, 'y');

  constructor(text: string, where: string) {
    this.#text = text;
    this.#where = where;
    this.#nextBreak = text.indexOf('\n');
    if (text.charCodeAt(0) === 0xfeff) this.at = 1;
  }

  refuseWhatIsNoText(): void {
    const text = this.#text;
    if (text.trim() === '')
      throw new InputError(this.#where, 'the file is empty; save the drawing again as plain SVG');
    if (text.startsWith('\u001f')) {
      throw new InputError(
        this.#where,
        'the file is compressed (.svgz); save the drawing as plain, uncompressed SVG',
      );
    }
    const control = text.search(/[\u0000-\u0008\u000b\u000c\u000e-\u001f]/);
    if (control >= 0) {
      this.#countLines(control);
      const code = text.charCodeAt(control).toString(16).padStart(2, '0');
      throw this.#fault(
        `not XML: it holds the control character 0x${code}; save the drawing as plain SVG in UTF-8`,
      );
    }
    const encoding =
      /^\s*<\?xml[^>]*?\bencoding\s*=\s*["']([\w.-]+)/.exec(text.slice(0, 200))?.[1] ?? 'UTF-8';
    if (text.includes('\ufffd') && !/^(utf-?8|us-ascii)$/i.test(encoding)) {
      throw new InputError(this.#where, `the file is written in ${encoding}; save the drawing in UTF-8`);
    }
  }

  /** Character data up to `end`. */
  characters(end: number): void {
    if (end > this.at) this.#characterData(this.#text.slice(this.at, end), 'with references');
    this.#countLines(end);
    this.at = end;
  }

  passOver(opening: string, closing: string, what: string): void {
    const end = this.#text.indexOf(closing, this.at + opening.length);
    if (end < 0) throw this.#cutOff(what);
    this.#moveTo(end + closing.length);
  }

  processingInstruction(): void {
    if (/^<\?xml-stylesheet\s/.test(this.#text.slice(this.at, this.at + 20))) this.#foreignSheets++;
    this.passOver('<?', '?>', 'a processing instruction');
  }

  cdata(): void {
    const start = this.at + '<![CDATA['.length;
    const end = this.#text.indexOf(']]>', start);
    if (end < 0) throw this.#cutOff('a CDATA section');
    this.#characterData(this.#text.slice(start, end), 'as it stands');
    this.#moveTo(end + 3);
  }

  doctype(): void {
    const text = this.#text;
    if (!/^<!DOCTYPE\b/i.test(text.slice(this.at, this.at + 10))) {
      if (text.length - this.at < 10) throw this.#cutOff('a declaration');
      throw this.#notXmlHere('; save the drawing as plain SVG');
    }
    let subsetStart = -1;
    let i = this.at + 9;
    for (; i < text.length; i++) {
      const c = text[i];
      if (c === '"' || c === "'") i = this.#indexOrEnd(c, i + 1);
      else if (c === '[' && subsetStart < 0) subsetStart = i + 1;
      else if (text.startsWith('<!--', i)) i = this.#indexOrEnd('-->', i + 4);
      else if (text.startsWith('<?', i)) i = this.#indexOrEnd('?>', i + 2);
      else if (c === ']') {
        this.#entities = readEntities(text.slice(subsetStart, i));
        subsetStart = -1;
      } else if (c === '>' && subsetStart < 0) break;
    }
    if (i >= text.length) throw this.#cutOff('its DOCTYPE');
    this.#moveTo(i + 1);
  }

  closingTag(): void {
    const name = this.#match(this.#closing)?.[1];
    if (name === undefined) {
      if (this.#match(this.#closingCutOff)) throw this.#cutOff('a closing tag');
      throw this.#notXmlHere('; save the drawing as plain SVG');
    }
    const open = this.#open.pop();
    if (open === undefined) throw this.#fault(`not XML: </${name}> closes nothing; remove it`);
    if (open.name !== name) {
      throw this.#fault(
        `not XML: </${name}> stands where <${open.name}> of line ${open.line} must be closed; write </${open.name}>`,
      );
    }
    this.#skeleton.push(`</${skeletonName(name)}>`);
    this.#moveTo(this.#closing.lastIndex);
  }

  openingTag(): void {
    const text = this.#text;
    const name = this.#match(this.#name, this.at + 1)?.[0];
    if (name === undefined) {
      if (this.at + 1 >= text.length) throw this.#cutOff('a tag');
      throw this.#notXmlHere(': "<" must open a tag; write "&lt;" for the character');
    }
    if (this.#open.length === 0 && this.#tags.length > 0) {
      throw this.#fault(`a second root element <${name}> follows the drawing; keep only one <svg>`);
    }
    if (this.#tags.length >= MAX_ELEMENTS) {
      throw this.#fault(`more than ${MAX_ELEMENTS} elements (the limit); split the drawing`);
    }
    const { attributes, end } = this.#attributes(name, this.#name.lastIndex);
    const tag: ScannedTag = { name: this.#shared(name), line: this.#line, attributes };
    const close = this.#match(this.#tagEnd, end);
    if (close === null) throw this.#brokenTag(name, end);
    const selfClosing = close[1] === '/';
    this.#skeleton.push(`<${skeletonName(name)} k="_${this.#tags.length}"${selfClosing ? '/>' : '>'}`);
    this.#tags.push(tag);
    if (!selfClosing) this.#open.push(tag);
    this.#moveTo(this.#tagEnd.lastIndex);
  }

  finish(): ScannedXml {
    if (this.#open.length > 0 || this.#tags.length === 0) throw this.#cutOff('the file');
    return {
      skeleton: this.#skeleton.join(''),
      tags: this.#tags,
      foreignSheets: this.#foreignSheets,
      texts: this.#texts,
    };
  }

  /** And where they end. */
  #attributes(
    tagName: string,
    from: number,
  ): { readonly attributes: readonly string[]; readonly end: number } {
    const found: string[] = [];
    /** Only for tags with many attributes; a few are compared one by one. */
    let seen: Set<string> | null = null;
    const where = `${this.#where}:${this.#line}`;
    let end = from;
    for (;;) {
      const match = this.#match(this.#attribute, end);
      if (match === null) break;
      end = this.#attribute.lastIndex;
      const [, written, inDouble, inSingle] = match;
      const name = this.#shared(written);
      const raw = inDouble ?? inSingle ?? '';
      if (raw.includes('<')) {
        throw this.#fault(
          `not XML: the value of ${name} in <${tagName}> holds "<"; is a closing quote missing?`,
        );
      }
      if (found.length === 32) seen = new Set(found.filter((_, i) => i % 2 === 0));
      if (seen === null ? isNameAmong(found, name) : seen.has(name))
        throw this.#fault(`not XML: <${tagName}> has the attribute ${name} twice; keep one`);
      seen?.add(name);
      // XML 1.0, 3.3.3: a line break or tab in a value is read as a space; a reference to one stays.
      const value = decodeReferences(
        /[\t\n\r]/.test(raw) ? raw.replace(/\r\n|[\t\n\r]/g, ' ') : raw,
        this.#entities,
        where,
      );
      found.push(name, value);
    }
    return { attributes: found, end };
  }

  #brokenTag(tagName: string, at: number): InputError {
    if (this.#match(this.#restIsEmpty, at)) return this.#cutOff(`<${tagName}>`);
    const unclosed = this.#match(this.#attributeStart, at)?.[1];
    if (unclosed !== undefined) return this.#cutOff(`the value of ${unclosed} in <${tagName}>`);
    return this.#fault(
      `not XML: <${tagName}> cannot be read at ${quoted(this.#text.slice(at, at + 40))}; attributes are written name="value"`,
    );
  }

  #characterData(raw: string, how: 'with references' | 'as it stands'): void {
    const open = this.#open.at(-1);
    if (open === undefined) {
      if (raw.trim() === '' && how === 'with references') return;
      this.#countLines(this.at + (raw.length - raw.trimStart().length));
      throw this.#tags.length === 0
        ? this.#fault(`not XML: it begins with ${quoted(raw.trim())}; save the drawing as plain SVG`)
        : this.#fault(
            `not XML: ${quoted(raw.trim())} follows the end of <${this.#tags[0]?.name}>; remove it`,
          );
    }
    const isRead = /(?:^|:)(?:title|style)$/.test(open.name);
    if (!isRead && !raw.includes('&')) return;
    const text =
      how === 'as it stands' ? raw : decodeReferences(raw, this.#entities, `${this.#where}:${this.#line}`);
    if (!isRead || text === '') return;
    this.#skeleton.push(`_${this.#texts.length};`);
    this.#texts.push(text);
  }

  #match(pattern: RegExp, at = this.at): RegExpExecArray | null {
    pattern.lastIndex = at;
    return pattern.exec(this.#text);
  }

  #indexOrEnd(what: string, from: number): number {
    const found = this.#text.indexOf(what, from);
    return found < 0 ? this.#text.length : found + what.length - 1;
  }

  #moveTo(end: number): void {
    this.#countLines(end);
    this.at = end;
  }

  #countLines(upTo: number): void {
    while (this.#nextBreak >= 0 && this.#nextBreak < upTo) {
      this.#line++;
      this.#nextBreak = this.#text.indexOf('\n', this.#nextBreak + 1);
    }
  }

  #shared(name: string): string {
    return remembered(this.#names, name, () => name);
  }

  #notXmlHere(what: string): InputError {
    return this.#fault(`not XML at ${quoted(this.#text.slice(this.at, this.at + 40))}${what}`);
  }

  #fault(what: string): InputError {
    return new InputError(`${this.#where}:${this.#line}`, what);
  }

  #cutOff(inside: string): InputError {
    const open = this.#open.at(-1);
    const context = open === undefined ? '' : ` (<${open.name}> of line ${open.line} is never closed)`;
    return this.#fault(
      `cut off: the file ends inside ${inside === 'the file' ? 'the drawing' : inside}${context}; save or copy it again`,
    );
  }
}

function isNameAmong(attributes: readonly string[], name: string): boolean {
  for (let i = 0; i < attributes.length; i += 2) if (attributes[i] === name) return true;
  return false;
}

/** A name that svg-parser can read; the true one is kept beside. */
function skeletonName(name: string): string {
  return /^[\w:-]+$/.test(name) ? name : name.replace(/[^\w:-]/g, (c) => `_x${c.charCodeAt(0).toString(16)}`);
}
