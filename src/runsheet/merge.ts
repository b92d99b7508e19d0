import type { MapEntry, MapNode, TreeNode } from './tree.ts';

/**
 * A case as a whole sheet: the base with the changes laid over it. Maps merge key by key, texts and lists replace.
 *
 * Keys that exclude each other replace each other: where the base drives `feed` by pressure and the case by flow, the
 * merged port has the flow and keeps its tubing. An empty value at the top ("ports:") changes nothing.
 */
export function mergeCase(base: MapNode, changes: MapNode): MapNode {
  return mergeMaps(base, changes, []);
}

function mergeMaps(base: MapNode, changes: MapNode, path: readonly string[]): MapNode {
  const entries = new Map<string, MapEntry>(base.entries);
  for (const group of exclusive(path)) {
    if (!group.some((alternative) => alternative.some((key) => changes.entries.has(key)))) continue;
    for (const alternative of group) {
      if (!alternative.some((key) => changes.entries.has(key)))
        for (const key of alternative) entries.delete(key);
    }
  }
  for (const [key, change] of changes.entries) {
    const before = entries.get(key);
    if (path.length === 0 && change.node.kind === 'text' && change.node.empty) continue;
    const node = before === undefined ? change.node : mergeNodes(before.node, change.node, [...path, key]);
    entries.set(key, { node, line: change.line });
  }
  return { kind: 'map', entries, line: changes.line };
}

function mergeNodes(base: TreeNode, change: TreeNode, path: readonly string[]): TreeNode {
  if (base.kind !== 'map' || change.kind !== 'map') return change;
  if (
    path[0] === 'tolerances' &&
    path.length > 1 &&
    (base.entries.has('limit') || change.entries.has('limit'))
  )
    return change;
  return mergeMaps(base, change, path);
}

/** Groups of alternatives at a place in the sheet: giving one of a group takes the others away. */
function exclusive(path: readonly string[]): readonly (readonly (readonly string[])[])[] {
  if (path.length === 2 && path[0] === 'ports') return [[['pressure'], ['flow'], ['head']]];
  if (path.length === 1 && path[0] === 'fluid') return [[['viscosity', 'density'], ['glycerol']]];
  if (path.length === 1 && path[0] === 'tolerances') return [[['width'], ['width_bias', 'width_own']]];
  return [];
}
