import { InputError } from '../errors.ts';
import { withoutEscapes } from '../escaped-names.ts';
import { pathText } from './path-text.ts';
import { quote } from './quote.ts';
import type { MapEntry, MapNode, TreeNode } from './tree.ts';

/**
 * The tree with an editor's escapes read in every name of the drawing, so that a run sheet may write `lane_x5F_1` or `lane_1`.
 * @throws InputError with the line when two keys of one map then are the same
 */
export function withDecodedNames(root: MapNode, file: string): MapNode {
  return decodeSheet(root, file, []);
}

/** Sections whose keys are names of the drawing. */
const NAMED_BY_KEY: ReadonlySet<string> = new Set(['layers', 'ports', 'channels', 'pump_limits']);

/** Tolerances that may be given by name. */
const BY_NAME: ReadonlySet<string> = new Set(['depth', 'pressure', 'flow']);

/** Values that are a name, or a list of names. */
const NAMES: ReadonlySet<string> = new Set(['outline', 'ports_layer', 'ignore', 'fields', 'pillars']);

/** Keys of the entries of a list (or of `switch`) whose value is a name, or a list of names. */
const NAMES_IN_ENTRIES: ReadonlyMap<string, ReadonlySet<string>> = new Map([
  ['targets', new Set(['channel', 'port', 'node', 'by'])],
  ['accept', new Set(['at'])],
  ['switch', new Set(['from', 'reach'])],
]);

function decodeSheet(sheet: MapNode, file: string, path: readonly string[]): MapNode {
  return mapValues(sheet, (node, key) => {
    const here = [...path, key];
    if (NAMED_BY_KEY.has(key)) return decodeKeys(node, file, here);
    if (NAMES.has(key)) return decodeTexts(node);
    const inEntries = NAMES_IN_ENTRIES.get(key);
    if (inEntries !== undefined) return decodeEntries(node, inEntries);
    if (key === 'tolerances' && node.kind === 'map') {
      return mapValues(node, (value, name) =>
        BY_NAME.has(name) ? decodeKeys(value, file, [...here, name]) : value,
      );
    }
    if (key === 'cases' && node.kind === 'map' && path.length === 0) {
      return mapValues(node, (change, name) =>
        change.kind === 'map' ? decodeSheet(change, file, [...here, name]) : change,
      );
    }
    return node;
  });
}

function mapValues(map: MapNode, change: (node: TreeNode, key: string) => TreeNode): MapNode {
  const entries = new Map<string, MapEntry>();
  for (const [key, entry] of map.entries) {
    const node = change(entry.node, key);
    entries.set(key, node === entry.node ? entry : { ...entry, node });
  }
  return { ...map, entries };
}

function decodeKeys(node: TreeNode, file: string, path: readonly string[]): TreeNode {
  if (node.kind !== 'map' || ![...node.entries.keys()].some(isEscaped)) return node;
  const entries = new Map<string, MapEntry>();
  const written = new Map<string, string>();
  for (const [key, entry] of node.entries) {
    const name = withoutEscapes(key);
    const twin = written.get(name);
    if (twin !== undefined) {
      throw new InputError(
        `${file}:${entry.line}`,
        `${pathText([...path, key])}: ${quote(twin)} and ${quote(key)} are one name, ${quote(name)}, once an editor's escapes are read; keep one of them`,
      );
    }
    written.set(name, key);
    entries.set(name, entry);
  }
  return { ...node, entries };
}

function isEscaped(name: string): boolean {
  return withoutEscapes(name) !== name;
}

function decodeTexts(node: TreeNode): TreeNode {
  switch (node.kind) {
    case 'text':
      return isEscaped(node.text) ? { ...node, text: withoutEscapes(node.text) } : node;
    case 'list':
      return { ...node, items: node.items.map(decodeTexts) };
    case 'map':
      return node;
    default:
      return node satisfies never;
  }
}

function decodeEntries(node: TreeNode, keys: ReadonlySet<string>): TreeNode {
  switch (node.kind) {
    case 'list':
      return { ...node, items: node.items.map((item) => decodeEntries(item, keys)) };
    case 'map':
      return mapValues(node, (value, key) => (keys.has(key) ? decodeTexts(value) : value));
    case 'text':
      return node;
    default:
      return node satisfies never;
  }
}
