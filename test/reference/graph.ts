import type { Point } from './points.ts';

/** A network as plainly as can be: nodes, and ducts between them. */
export interface Graph {
  readonly nodes: readonly GraphNode[];
  readonly ducts: readonly Duct[];
}

export interface GraphNode {
  readonly at: Point;
  /** Name of the port that this node is; null for none. */
  readonly port: string | null;
}

/** One duct, or several in series, from node `from` to node `to`. */
export interface Duct {
  readonly from: number;
  readonly to: number;
  readonly parts: readonly DuctPart[];
  /** Length as drawn outside wells, mm. */
  readonly drawnMm: number;
  /** From → to, m³/s; null while not known. */
  readonly flow: number | null;
}

export interface DuctPart {
  readonly widthMm: number;
  readonly depthMm: number;
  /** What resists flow. */
  readonly lengthMm: number;
}

/**
 * The same network with all that the way of drawing may add taken away: ducts drawn shorter than `shortestMm` (what the
 * slack leaves between places that were meant to be one) join their nodes, and nodes where just two ducts meet are inner
 * points of one chain. A port stays a node. Chains come first: a node where nothing branches takes no length from its duct,
 * however near to another it stands.
 */
export function simplified(graph: Graph, shortestMm: number): Graph {
  return chained(contracted(chained(graph), shortestMm));
}

function contracted({ nodes, ducts }: Graph, shortestMm: number): Graph {
  const root = nodes.map((_, i) => i);
  const find = (i: number): number => (root[i] === i ? i : find(root[i]));
  const isShort = (duct: Duct) =>
    duct.drawnMm < shortestMm || duct.parts.every(({ lengthMm }) => lengthMm === 0);
  for (const duct of ducts.filter(isShort)) {
    const [a, b] = [find(duct.from), find(duct.to)];
    if (a === b || (nodes[a].port !== null && nodes[b].port !== null)) continue;
    if (nodes[b].port === null) root[b] = a;
    else root[a] = b;
  }
  const kept = ducts
    .filter((duct) => !isShort(duct))
    .map((duct) => ({ ...duct, from: find(duct.from), to: find(duct.to) }));
  return { nodes, ducts: kept };
}

function chained({ nodes, ducts }: Graph): Graph {
  const list: (Duct | null)[] = [...ducts];
  const at: number[][] = nodes.map(() => []);
  ducts.forEach(({ from, to }, i) => {
    at[from].push(i);
    at[to].push(i);
  });
  for (let n = 0; n < nodes.length; n++) {
    if (nodes[n].port !== null || at[n].length !== 2 || at[n][0] === at[n][1]) continue;
    const [i, j] = at[n];
    const first = ending(list[i]!, n);
    const second = starting(list[j]!, n);
    list[i] = {
      from: first.from,
      to: second.to,
      parts: [...first.parts, ...second.parts],
      drawnMm: first.drawnMm + second.drawnMm,
      flow: first.flow ?? second.flow,
    };
    list[j] = null;
    at[n] = [];
    at[second.to] = at[second.to].map((k) => (k === j ? i : k));
  }
  const used = [...new Set(list.flatMap((duct) => (duct === null ? [] : [duct.from, duct.to])))];
  nodes.forEach(({ port }, n) => {
    if (port !== null && !used.includes(n)) used.push(n);
  });
  used.sort((a, b) => a - b);
  const index = new Map(used.map((n, i) => [n, i]));
  return {
    nodes: used.map((n) => nodes[n]),
    ducts: list.flatMap((duct) =>
      duct === null ? [] : [{ ...duct, from: index.get(duct.from)!, to: index.get(duct.to)! }],
    ),
  };
}

const ending = (duct: Duct, n: number): Duct => (duct.to === n ? duct : reversed(duct));
const starting = (duct: Duct, n: number): Duct => (duct.from === n ? duct : reversed(duct));

export function reversed(duct: Duct): Duct {
  return {
    ...duct,
    from: duct.to,
    to: duct.from,
    parts: [...duct.parts].reverse(),
    flow: duct.flow === null ? null : -duct.flow,
  };
}
