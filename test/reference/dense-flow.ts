import type { DuctPart, Graph } from './graph.ts';

/** What a port does, in SI: a pressure behind a resistance, a flow into the chip, or nothing. */
export type PortDrive =
  | { readonly kind: 'pressure'; readonly pressurePa: number; readonly tubingPaSM3: number }
  | { readonly kind: 'flow'; readonly flowM3s: number }
  | { readonly kind: 'sealed' };

/** Pressures at nodes, flows along ducts, flows into the chip at ports; null where nothing sets them. */
export interface DenseFlow {
  readonly nodePressure: readonly (number | null)[];
  readonly ductFlow: readonly (number | null)[];
  readonly portFlow: ReadonlyMap<string, number | null>;
}

/** Kirchhoff's equations of each connected part, solved whole by elimination with the largest pivot. */
export function denseFlow(
  graph: Graph,
  drives: ReadonlyMap<string, PortDrive>,
  viscosityPaS: number,
): DenseFlow {
  const count = graph.nodes.length;
  const resistances = graph.ducts.map(({ parts }) => seriesResistance(parts, viscosityPaS));
  const nodePressure: (number | null)[] = new Array(count).fill(null);
  const portFlow = new Map<string, number | null>(
    graph.nodes.flatMap(({ port }) => (port === null ? [] : [[port, null] as const])),
  );
  for (const part of connectedParts(graph)) {
    const at = new Map(part.map((node, i) => [node, i]));
    const A = part.map(() => new Float64Array(part.length + 1));
    let held = false;
    graph.ducts.forEach(({ from, to }, d) => {
      const [i, j] = [at.get(from), at.get(to)];
      if (i === undefined || j === undefined || i === j) return;
      const g = 1 / resistances[d];
      A[i][i] += g;
      A[j][j] += g;
      A[i][j] -= g;
      A[j][i] -= g;
    });
    for (const node of part) {
      const drive = driveAt(graph, node, drives);
      const row = A[at.get(node)!];
      if (drive?.kind === 'flow') row[part.length] += drive.flowM3s;
      if (drive?.kind !== 'pressure') continue;
      held = true;
      if (drive.tubingPaSM3 > 0) {
        row[at.get(node)!] += 1 / drive.tubingPaSM3;
        row[part.length] += drive.pressurePa / drive.tubingPaSM3;
      } else {
        row.fill(0);
        row[at.get(node)!] = 1;
        row[part.length] = drive.pressurePa;
      }
    }
    if (!held) continue;
    eliminate(A).forEach((pressure, i) => {
      nodePressure[part[i]] = pressure;
    });
  }
  const ductFlow = graph.ducts.map(({ from, to }, d) => {
    const [a, b] = [nodePressure[from], nodePressure[to]];
    return a === null || b === null ? null : (a - b) / resistances[d];
  });
  graph.nodes.forEach(({ port }, n) => {
    if (port === null || nodePressure[n] === null) return;
    let flow = 0;
    graph.ducts.forEach(({ from, to }, d) => {
      if (from === n) flow += ductFlow[d]!;
      if (to === n) flow -= ductFlow[d]!;
    });
    portFlow.set(port, flow);
  });
  return { nodePressure, ductFlow, portFlow };
}

function driveAt(graph: Graph, node: number, drives: ReadonlyMap<string, PortDrive>): PortDrive | undefined {
  const { port } = graph.nodes[node];
  return port === null ? undefined : drives.get(port);
}

function connectedParts(graph: Graph): number[][] {
  const part = graph.nodes.map((_, n) => n);
  for (let changed = true; changed; ) {
    changed = false;
    for (const { from, to } of graph.ducts) {
      const least = Math.min(part[from], part[to]);
      if (part[from] !== least || part[to] !== least) changed = true;
      part[from] = least;
      part[to] = least;
    }
  }
  const lists = new Map<number, number[]>();
  part.forEach((p, n) => {
    lists.set(p, [...(lists.get(p) ?? []), n]);
  });
  return [...lists.values()];
}

/** Gauss with scaled rows and the largest pivot of the column; the last column is the right-hand side. */
function eliminate(A: Float64Array[]): number[] {
  const n = A.length;
  for (const row of A) {
    const largest = Math.max(...row.subarray(0, n).map(Math.abs));
    for (let j = 0; j <= n; j++) row[j] /= largest;
  }
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(A[i][k]) > Math.abs(A[pivot][k])) pivot = i;
    [A[k], A[pivot]] = [A[pivot], A[k]];
    for (let i = k + 1; i < n; i++) {
      const factor = A[i][k] / A[k][k];
      if (factor === 0) continue;
      for (let j = k; j <= n; j++) A[i][j] -= factor * A[k][j];
    }
  }
  const x = new Array<number>(n).fill(0);
  for (let k = n - 1; k >= 0; k--) {
    let sum = A[k][n];
    for (let j = k + 1; j < n; j++) sum -= A[k][j] * x[j];
    x[k] = sum / A[k][k];
  }
  return x;
}

/** Pa s/m³ of ducts in series. */
export function seriesResistance(parts: readonly DuctPart[], viscosityPaS: number): number {
  return parts.reduce(
    (sum, { widthMm, depthMm, lengthMm }) =>
      sum + viscosityPaS * lengthMm * 1e-3 * resistancePerLength(widthMm * 1e-3, depthMm * 1e-3),
    0,
  );
}

const known = new Map<string, number>();

/** R/(µ L) = 12/(l s³ F), F as printed: 1 − (192/π⁵)(s/l) Σ tanh(nπl/2s)/n⁵; the tail beyond 1000 terms is below 1e-14. */
function resistancePerLength(width: number, depth: number): number {
  const key = `${width} ${depth}`;
  const found = known.get(key);
  if (found !== undefined) return found;
  const [s, l] = width < depth ? [width, depth] : [depth, width];
  let sum = 0;
  for (let n = 1999; n > 0; n -= 2) sum += Math.tanh((n * Math.PI * l) / (2 * s)) / n ** 5;
  const F = 1 - (192 / Math.PI ** 5) * (s / l) * sum;
  const value = 12 / (l * s ** 3 * F);
  known.set(key, value);
  return value;
}
