import { utf8Length } from '../utf8-length.ts';
/**
 * A run sheet's YAML as a tree of texts, maps and lists that know their lines, before any key is judged.
 *
 * All values are read as text (YAML's failsafe schema), so `007` stays `007` and `no` stays `no`. Anchors, aliases,
 * tags and second documents are refused, nesting and size are bounded before anything recursive runs: an input of
 * 1 MB costs a few seconds at worst.
 */

import {
  Composer,
  type CST,
  type Document,
  isAlias,
  isMap,
  isScalar,
  isSeq,
  Lexer,
  LineCounter,
  type ParsedNode,
  Parser,
  type YAMLError,
} from 'yaml';
import { InputError } from '../errors.ts';
import { UNUSABLE_KEYS } from './names.ts';
import { type KeyPath, pathText } from './path-text.ts';
import { quote } from './quote.ts';

interface TextNode {
  readonly kind: 'text';
  readonly text: string;
  readonly line: number;
  /** Nothing was written: `ports:` with nothing after it. */
  readonly empty: boolean;
}
export interface MapEntry {
  readonly node: TreeNode;
  /** Line of the key. */
  readonly line: number;
}
export interface MapNode {
  readonly kind: 'map';
  readonly entries: ReadonlyMap<string, MapEntry>;
  readonly line: number;
}
interface ListNode {
  readonly kind: 'list';
  readonly items: readonly TreeNode[];
  readonly line: number;
}
export type TreeNode = TextNode | MapNode | ListNode;

/**
 * Reads the YAML of a run sheet.
 * @param text the whole file
 * @param file as given on the command line, for messages
 * @throws InputError naming file and line
 */
export function parseTree(text: string, file: string): MapNode {
  if (utf8Length(text) > MAX_RUN_SHEET_BYTES) {
    throw new InputError(
      file,
      'is over the limit "run sheet size" of 1 MB; leave out what the chip does not need',
    );
  }
  const lines = new LineCounter();
  const source: Source = {
    lineOf: (offset) => Math.max(1, lines.linePos(offset).line),
    fault: (line, what, options) => new InputError(`${file}:${line}`, what, options),
  };
  const document = compose(text, lines, source);
  if (document === null) throw new InputError(file, 'could not be read as YAML');
  refuseErrors(document, text, source);
  const { contents } = document;
  if (contents === null || (isScalar(contents) && contents.source === '' && contents.type === 'PLAIN')) {
    return { kind: 'map', entries: new Map(), line: 1 };
  }
  const root = toTree(contents, source, null, []);
  if (root.kind === 'map') return root;
  throw source.fault(root.line, 'is not a run sheet; write keys with values, for example "depth: 50 um"');
}

interface Source {
  /** Line of a place in the text, 1-based. */
  readonly lineOf: (offset: number) => number;
  /** What is wrong in a line, to be thrown. */
  readonly fault: (line: number, what: string, options?: { readonly cause: unknown }) => InputError;
}

/** The tree as plain data for a schema: strings, arrays and objects without a prototype. */
export function toPlain(node: TreeNode): unknown {
  switch (node.kind) {
    case 'text':
      return node.text;
    case 'list':
      return node.items.map(toPlain);
    case 'map': {
      const plain: Record<string, unknown> = Object.create(null);
      for (const [key, entry] of node.entries) plain[key] = toPlain(entry.node);
      return plain;
    }
    default:
      return node satisfies never;
  }
}

/** The map with each of its nodes changed, under the same keys. */
export function mapNodes(map: MapNode, change: (node: TreeNode, key: string) => TreeNode): MapNode {
  const entries = new Map<string, MapEntry>();
  for (const [key, entry] of map.entries) {
    const node = change(entry.node, key);
    entries.set(key, node === entry.node ? entry : { ...entry, node });
  }
  return { ...map, entries };
}

/** Whether nothing was written: `ports:` with nothing after it. */
export function isEmpty(node: TreeNode): boolean {
  return node.kind === 'text' && node.empty;
}

/** Line of the key or list item at a path, 1-based; null when it is not there. */
export function lineAt(root: TreeNode, path: readonly (string | number)[]): number | null {
  let node: TreeNode = root;
  let line: number = root.line;
  for (const step of path) {
    if (node.kind === 'map') {
      const entry: MapEntry | undefined = node.entries.get(String(step));
      if (entry === undefined) return null;
      node = entry.node;
      line = entry.line;
    } else if (node.kind === 'list') {
      const item: TreeNode | undefined = node.items[Number(step)];
      if (item === undefined) return null;
      node = item;
      line = item.line;
    } else {
      return null;
    }
  }
  return line;
}

export const MAX_RUN_SHEET_BYTES = 1_000_000;
/** A run sheet needs six levels. */
const DEEPEST = 32;

/**
 * The composer of `yaml` recurses, and V8 aborts the process when a regular expression is first compiled on a stack
 * that is nearly full; so the parser, which keeps a stack of its own, is stopped before it is deep.
 */
function compose(text: string, lines: LineCounter, { lineOf, fault }: Source): Document.Parsed | null {
  const parser = new Parser(lines.addNewLine);
  const tokens: CST.Token[] = [];
  lines.addNewLine(0);
  for (const lexeme of new Lexer().lex(text)) {
    for (const token of parser.next(lexeme)) tokens.push(token);
    if (parser.stack.length > DEEPEST) {
      throw fault(
        lineOf(parser.offset),
        `is nested deeper than the limit "run sheet depth" of ${DEEPEST} levels; a run sheet needs six`,
      );
    }
  }
  for (const token of parser.end()) tokens.push(token);
  const options = { schema: 'failsafe', uniqueKeys: false, prettyErrors: false, logLevel: 'silent' } as const;
  let first: Document.Parsed | null = null;
  for (const document of new Composer(options).compose(tokens, true, text.length)) {
    if (first !== null) {
      const line = lineOf(document.range[0]);
      throw fault(line, 'starts a second document; a run sheet is one, so leave out the line "---"');
    }
    first = document;
  }
  return first;
}

function refuseErrors(document: Document.Parsed, text: string, { lineOf, fault }: Source): void {
  const first = [...document.errors].sort((a, b) => a.pos[0] - b.pos[0])[0];
  if (first !== undefined) {
    const line = lineOf(first.pos[0]);
    const source = text.split('\n', line)[line - 1] ?? '';
    const sameLine = document.errors.filter((error) => lineOf(error.pos[0]) === line);
    throw fault(line, sayError(first, sameLine, source), { cause: first });
  }
  const tag = document.warnings.find((warning) => warning.code === 'TAG_RESOLVE_FAILED');
  if (tag !== undefined) {
    const line = lineOf(tag.pos[0]);
    throw fault(line, 'has a YAML tag; leave out the word that starts with "!", or quote it');
  }
}

function sayError(error: YAMLError, sameLine: readonly YAMLError[], source: string): string {
  const star = /(?:^|[\s{[,])(\*[^\s:,\]}]*)/.exec(source.replace(/"[^"]*"|'[^']*'|#.*$/g, ''));
  if (star !== null) return starMessage(star[1]);
  if (sameLine.some(({ code }) => code === 'TAB_AS_INDENT')) {
    return 'is indented with a tab; YAML takes spaces only, so put two spaces instead';
  }
  const shown = quote(source.trim());
  switch (error.code) {
    case 'BLOCK_AS_IMPLICIT_KEY':
    case 'MULTILINE_IMPLICIT_KEY':
    case 'BAD_INDENT':
    case 'MISSING_CHAR':
    case 'UNEXPECTED_TOKEN':
    case 'BAD_SCALAR_START':
    case 'BAD_DQ_ESCAPE':
      return `is not YAML at ${shown} (${lowerFirst(firstLine(error.message))}); check the indentation and brackets, and quote texts with ": " or special signs`;
    default:
      return `is not YAML at ${shown} (${lowerFirst(firstLine(error.message))})`;
  }
}

function starMessage(star: string): string {
  return `a name or pattern that starts with * must stand in quotes; write "${star.replace(/["\\]/g, '')}"`;
}

function firstLine(message: string): string {
  return message.split(/[\n;]/, 1)[0].slice(0, 100);
}

function lowerFirst(message: string): string {
  return message.charAt(0).toLowerCase() + message.slice(1);
}

function toTree(node: ParsedNode | null, source: Source, keyLine: number | null, path: KeyPath): TreeNode {
  if (node === null) return { kind: 'text', text: '', line: keyLine ?? 1, empty: true };
  const { fault } = source;
  const line = source.lineOf(node.range[0]);
  if (isAlias(node)) throw fault(line, starMessage(`*${node.source}`));
  if (node.anchor !== undefined) {
    throw fault(
      line,
      'has a YAML anchor (&); run sheets have none, so write the value out or quote the text',
    );
  }
  if (isScalar(node)) {
    const text = String(node.value ?? '');
    return {
      kind: 'text',
      text,
      line: text === '' ? (keyLine ?? line) : line,
      empty: text === '' && node.type === 'PLAIN',
    };
  }
  if (isSeq(node)) {
    const items = node.items.map((item, i) => toTree(item, source, line, [...path, i]));
    return { kind: 'list', items, line };
  }
  if (isMap(node)) {
    const entries = new Map<string, MapEntry>();
    let previous: string | null = null;
    for (const { key, value } of node.items) {
      const read = keyOf(key, source, line);
      if (value === null && previous !== null)
        refuseComma(entries.get(previous), read, [...path, previous], source);
      previous = read.text;
      const earlier = entries.get(read.text);
      if (earlier !== undefined) {
        throw fault(
          read.line,
          `key ${quote(read.text)} is there twice (first in line ${earlier.line}); keep one of them`,
        );
      }
      entries.set(read.text, {
        node: toTree(value, source, read.line, [...path, read.text]),
        line: read.line,
      });
    }
    return { kind: 'map', entries, line };
  }
  return node satisfies never;
}

interface Key {
  readonly text: string;
  readonly line: number;
}

function keyOf(key: ParsedNode | null, { lineOf, fault }: Source, mapLine: number): Key {
  if (key === null) throw fault(mapLine, 'has a value without a key before its ":"');
  const line = lineOf(key.range[0]);
  if (isAlias(key)) throw fault(line, starMessage(`*${key.source.replace(/:$/, '')}`));
  if (!isScalar(key) || key.anchor !== undefined)
    throw fault(line, 'has a key that is not plain text; quote the key');
  const text = String(key.value ?? '');
  if (text === '') throw fault(line, 'has an empty key; give it a name');
  if (UNUSABLE_KEYS.has(text))
    throw fault(line, `${quote(text)} can't be a name in a run sheet; give it another name in the drawing`);
  return { text, line };
}

/** In braces, `{ depth: 50,5 um }` is the value 50 and then a key `5 um` without a value. */
function refuseComma(before: MapEntry | undefined, key: Key, path: KeyPath, { fault }: Source): void {
  if (before?.node.kind !== 'text' || !/^[+-]?\d+$/.test(before.node.text) || !/^\d/.test(key.text)) return;
  const [whole, rest] = [before.node.text, key.text];
  throw fault(
    key.line,
    `${pathText(path)}: ${quote(`${whole},${rest}`)} has a comma; decimals take a point; write for example ${quote(`${whole}.${rest}`)}`,
  );
}
