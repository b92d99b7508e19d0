import { isPattern, longestMatch, recordOf } from './names.ts';
import { EXCLUSIVE_KEYS, type SheetValues } from './schema.ts';
import { isEmpty, type MapEntry, type MapNode, type TreeNode } from './tree.ts';

/**
 * A case as a whole sheet: the base with the changes laid over it. Maps merge key by key, texts and lists replace.
 *
 * Keys that exclude each other replace each other: where the base drives `feed` by pressure and the case by flow, the
 * merged port has the flow and keeps its tubing. An empty value at the top ("ports:") changes nothing.
 * `open` and `sealed` are a port's condition written short: what else the base says of the port is put back by `keepPorts`.
 */
export function mergeCase(base: MapNode, changes: MapNode): MapNode {
  return mergeMaps(base, changes, []);
}

function mergeMaps(base: MapNode, changes: MapNode, path: readonly string[]): MapNode {
  const entries = new Map<string, MapEntry>(base.entries);
  const alternatives =
    EXCLUSIVE_KEYS.get(path[0] === 'ports' && path.length === 2 ? 'ports.*' : path.join('.')) ?? [];
  const isGiven = (keys: readonly string[]): boolean => keys.some((key) => changes.entries.has(key));
  if (alternatives.some(isGiven)) {
    for (const key of alternatives.filter((keys) => !isGiven(keys)).flat()) entries.delete(key);
  }
  for (const [key, change] of changes.entries) {
    const before = entries.get(key) ?? coveringPort(base, key, path);
    if (path.length === 0 && isEmpty(change.node)) continue;
    const node = before === undefined ? change.node : mergeNodes(before.node, change.node, [...path, key]);
    entries.set(key, { node, line: change.line });
  }
  return { kind: 'map', entries, line: changes.line };
}

/** A port that the sheet has under a pattern, and the case under a name or a narrower pattern, is still that port. */
function coveringPort(base: MapNode, key: string, path: readonly string[]): MapEntry | undefined {
  if (path.length !== 1 || path[0] !== 'ports') return undefined;
  const pattern = longestMatch([...base.entries.keys()].filter(isPattern), key);
  return pattern === null ? undefined : base.entries.get(pattern);
}

/**
 * The ports of a case with what the change left alone: a port written `open` or `sealed` in the case keeps its tubing,
 * what it carries and what it is for (nothing, when sealed); one written so in the sheet keeps that condition until the case gives another.
 */
export function keepPorts(
  base: SheetValues,
  merged: SheetValues,
  baseRoot: MapNode,
  changes: MapNode,
): SheetValues {
  const before = portsOf(baseRoot);
  const kept = [...portsOf(changes)].map(([name, { node }]) => {
    const key = before.has(name) ? name : longestMatch([...before.keys()].filter(isPattern), name);
    const port = merged.ports[name];
    if (key === null) return [name, port] as const;
    const was = base.ports[key];
    if (node.kind === 'text') {
      const expect = port.condition.kind === 'sealed' ? null : was.expect;
      return [name, { ...was, condition: port.condition, expect }] as const;
    }
    const condition = port.condition.kind === 'unset' ? was.condition : port.condition;
    return [name, { ...port, condition }] as const;
  });
  return { ...merged, ports: recordOf([...Object.entries(merged.ports), ...kept]) };
}

/** What a sheet or a case writes under `ports`. */
export function portsOf(root: MapNode): ReadonlyMap<string, MapEntry> {
  const ports = root.entries.get('ports')?.node;
  return ports?.kind === 'map' ? ports.entries : new Map();
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
