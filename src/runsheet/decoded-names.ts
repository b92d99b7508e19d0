import { InputError } from '../errors.ts';
import { withoutEscapes } from '../escaped-names.ts';
import { pathText } from './path-text.ts';
import { quote } from './quote.ts';
import { DRAWN_KEYS } from './schema.ts';
import { type MapEntry, type MapNode, mapNodes } from './tree.ts';

/**
 * The tree with an editor's escapes read in every key that is a name of the drawing, so that a run sheet may write `lane_x5F_1` or
 * `lane_1`, and a case another than the sheet. Names that are values are read by the schema.
 * @throws InputError with the line when two keys of one map then are the same
 */
export function withDecodedNames(root: MapNode, file: string): MapNode {
  const { entries } = decodeSheet(root, file, []);
  return mapNodes({ ...root, entries }, (node, key) =>
    key !== 'cases' || node.kind !== 'map'
      ? node
      : mapNodes(node, (change, name) =>
          change.kind === 'map' ? decodeSheet(change, file, ['cases', name]) : change,
        ),
  );
}

function decodeSheet(sheet: MapNode, file: string, prefix: readonly string[]): MapNode {
  const decode = (map: MapNode, place: readonly string[]): MapNode =>
    mapNodes(map, (node, key) => {
      const here = [...place, key];
      if (node.kind !== 'map') return node;
      return DRAWN_KEYS.has(here.join('.'))
        ? decodeKeys(node, file, [...prefix, ...here])
        : decode(node, here);
    });
  return decode(sheet, []);
}

function decodeKeys(node: MapNode, file: string, path: readonly string[]): MapNode {
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
