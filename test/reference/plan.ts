import type { PortDrive } from './dense-flow.ts';
import type { Duct, DuctPart, Graph } from './graph.ts';
import { cross, direction, distance, dot, minus, type Point, plus } from './points.ts';
import type { Random } from './random.ts';

/**
 * A chip whose network is known before it is drawn: nodes, and edges that leave their nodes straight. What rule 5 leaves
 * of each edge follows from the angles at its two nodes alone. Lengths in mm.
 */
export interface Plan {
  readonly nodes: readonly PlanNode[];
  readonly edges: readonly PlanEdge[];
  readonly layers: readonly PlanLayer[];
}

export interface PlanNode {
  readonly at: Point;
  readonly port: PlanPort | null;
}

export interface PlanPort {
  readonly name: string;
  readonly radius: number;
  /** Value of the port's key in the run sheet. */
  readonly entry: string;
  readonly drive: PortDrive;
  /** From the node, which lies on a centreline, to the middle of a circle that overlaps only the strip. */
  readonly aside?: Point;
}

/** Middle of the port's circle. */
export const holeOf = ({ at, port }: PlanNode): Point =>
  port?.aside === undefined ? at : plus(at, port.aside);

export interface PlanLayer {
  readonly name: string;
  readonly depthMm: number;
  readonly plane: string;
}

export interface PlanEdge {
  readonly a: number;
  readonly b: number;
  readonly layer: number;
  readonly widthMm: number;
  /** From the node a to b: the first and the last part are straight. */
  readonly path: readonly Part[];
  /** Where the edge is only what the rules carry on, and nothing is drawn. */
  readonly isCarried: boolean;
}

export type Part =
  | { readonly kind: 'line'; readonly to: Point }
  | { readonly kind: 'arc'; readonly to: Point; readonly radius: number; readonly sweep: 0 | 1 }
  | { readonly kind: 'cubic'; readonly c1: Point; readonly c2: Point; readonly to: Point };

export const VISCOSITY_PA_S = 0.001;
export const DENSITY_KG_M3 = 1000;
const GRAVITY_M_S2 = 9.80665;

/** A random plan: a net of cells, a star, a fork of small angle, or a chamber with bundles of feeders. */
export function randomPlan(random: Random): Plan {
  for (;;) {
    const kind = random.share();
    const plan =
      kind < 0.55 ? net(random) : kind < 0.7 ? star(random) : kind < 0.8 ? fork(random) : chamber(random);
    if (isApart(plan, kind < 0.7 ? 25 : 12))
      return random.chance(0.3) ? withThinNeighbour(plan, random) : plan;
  }
}

const WIDTHS = [0.1, 0.15, 0.2, 0.3, 0.4, 0.5, 0.8];
const DEPTHS = [0.03, 0.05, 0.08, 0.1, 0.12, 0.2];

function layersOf(random: Random): PlanLayer[] {
  const depths = random.shuffled(DEPTHS);
  return [
    { name: 'lanes', depthMm: depths[0], plane: 'chip' },
    { name: 'feeds', depthMm: depths[1], plane: 'chip' },
    { name: 'control', depthMm: depths[2], plane: 'top' },
  ];
}

/** Neighbours of a grid, a tree with some loops; upright or leaning. A bridge in another plane over it, sometimes. */
function net(random: Random): Plan {
  const layers = layersOf(random);
  const [columns, rows] = [random.whole(2, 4), random.whole(2, 3)];
  const pitch = 6;
  const jitter = random.chance(0.4) ? 0 : 0.8;
  const shake = () => random.between(-jitter, jitter);
  const at: Point[] = [];
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) at.push({ x: 4 + c * pitch + shake(), y: 4 + r * pitch + shake() });
  }
  const pairs: [number, number][] = [];
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      const n = r * columns + c;
      if (c + 1 < columns) pairs.push([n, n + 1]);
      if (r + 1 < rows) pairs.push([n, n + columns]);
      if (c + 1 < columns && r + 1 < rows && random.chance(0.5)) {
        pairs.push(random.chance(0.5) ? [n, n + columns + 1] : [n + 1, n + columns]);
      }
    }
  }
  const root = at.map((_, i) => i);
  const find = (i: number): number => (root[i] === i ? i : find(root[i]));
  const loops = random.between(0, 0.5);
  const chosen = random.shuffled(pairs).filter(([a, b]) => {
    const isNew = find(a) !== find(b);
    root[find(a)] = find(b);
    return isNew || random.chance(loops);
  });
  const widths = random.shuffled(WIDTHS).slice(0, random.whole(1, 3));
  const edges = chosen.map(([a, b]): PlanEdge => {
    const layer = random.chance(0.7) ? 0 : 1;
    return edgeOf(random, at, a, b, layer, random.oneOf(widths));
  });
  const degree = at.map((_, n) => edges.filter(({ a, b }) => a === n || b === n).length);
  const isPort = degree.map((d) => (d === 1 ? random.chance(0.9) : random.chance(0.12)));
  if (random.chance(0.25)) addSidePort(random, at, edges, isPort);
  // A loop without a port has no node at all.
  if (!isPort.includes(true)) isPort[chosen[0][0]] = true;
  if (random.chance(0.3)) {
    const ports = random.shuffled(degree.map((_, n) => n).filter((n) => isPort[n]));
    if (ports.length > 1) {
      const [a, b] = ports;
      edges.push({ ...edgeOf(random, at, a, b, 2, 0.2), path: [{ kind: 'line', to: at[b] }] });
    }
  }
  const nodes = withPorts(random, at, isPort);
  return {
    nodes: nodes.map((node, n) => (n < degree.length ? node : aside(node, n, edges, random))),
    edges,
    layers,
  };
}

/** A port in the middle of a straight edge: its circle will lie beside the centreline. */
function addSidePort(random: Random, at: Point[], edges: PlanEdge[], isPort: boolean[]): void {
  const e = edges.findIndex(({ path, layer }) => path.length === 1 && layer !== 2);
  if (e < 0) return;
  const edge = edges[e];
  const [p, q] = [at[edge.a], at[edge.b]];
  const s = at.push(plus(p, minus(q, p), random.between(0.48, 0.52))) - 1;
  isPort.push(true);
  edges.splice(e, 1, { ...edge, b: s, path: [{ kind: 'line', to: at[s] }] });
  edges.push({ ...edge, a: s });
}

function aside(node: PlanNode, n: number, edges: readonly PlanEdge[], random: Random): PlanNode {
  if (node.port === null) return node;
  const { path, widthMm } = edges.find(({ a }) => a === n)!;
  const u = direction(node.at, path[0].to);
  const far = node.port.radius + widthMm * random.between(0.1, 0.4);
  return { ...node, port: { ...node.port, aside: { x: -u.y * far, y: u.x * far } } };
}

/** A thin dead channel that runs beside the middle of a straight one, close, and joins nothing. */
function withThinNeighbour(plan: Plan, random: Random): Plan {
  const edge = plan.edges.find(
    ({ a, b, path, layer }) =>
      path.length === 1 && layer !== 2 && [a, b].every((n) => plan.nodes[n].port?.aside === undefined),
  );
  if (edge === undefined) return plan;
  const [p, q] = [plan.nodes[edge.a].at, plan.nodes[edge.b].at];
  const length = distance(p, q);
  const u = direction(p, q);
  if (length < 5.5) return plan;
  const widthMm = random.oneOf([0.02, 0.05]);
  const far = edge.widthMm / 2 + widthMm / 2 + random.between(0.003, 0.05);
  const side = random.chance(0.5) ? far : -far;
  const end = (s: number): PlanNode => ({
    at: plus(plus(p, u, s), { x: -u.y, y: u.x }, side),
    port: null,
  });
  const nodes = [...plan.nodes, end(length / 2 - 0.3), end(length / 2 + 0.3)];
  const [a, b] = [nodes.length - 2, nodes.length - 1];
  const thin: PlanEdge = { ...edge, a, b, widthMm, path: [{ kind: 'line', to: nodes[b].at }] };
  return { ...plan, nodes, edges: [...plan.edges, thin] };
}

/** Three to six arms round one point, each to a port or to a dead end. */
function star(random: Random): Plan {
  const layers = layersOf(random);
  const count = random.whole(3, 6);
  const centre = { x: 12, y: 12 };
  const slots = random.shuffled(Array.from({ length: 9 }, (_, i) => i)).slice(0, count);
  const lean = random.chance(0.3) ? 0 : random.between(0, 2 * Math.PI);
  const step = count <= 4 && random.chance(0.5) ? Math.PI / 2 : (2 * Math.PI) / 9;
  const angles = (step === Math.PI / 2 ? [0, 1, 2, 3].slice(0, count) : slots).map((k) => lean + k * step);
  const at = [
    centre,
    ...angles.map((t) => plus(centre, { x: Math.cos(t), y: Math.sin(t) }, random.between(6, 9))),
  ];
  const widths = random.shuffled(WIDTHS).slice(0, random.whole(1, 3));
  const edges = angles.map((_, i) =>
    edgeOf(random, at, 0, i + 1, random.chance(0.7) ? 0 : 1, random.oneOf(widths)),
  );
  const isPort = at.map((_, n) => n > 0 && random.chance(0.92));
  return { nodes: withPorts(random, at, isPort), edges, layers };
}

/** A straight channel and one that parts from it at a small angle. */
function fork(random: Random): Plan {
  const layers = layersOf(random);
  const lean = random.chance(0.3) ? 0 : random.between(0, 2 * Math.PI);
  const angle = (random.between(12, 40) * Math.PI) / 180;
  const centre = { x: 14, y: 14 };
  const arm = (turn: number) =>
    plus(centre, { x: Math.cos(lean + turn), y: Math.sin(lean + turn) }, random.between(8, 10));
  const at = [centre, arm(0), arm(Math.PI), arm(random.chance(0.5) ? angle : -angle)];
  const [main, branch] = random.shuffled([0.1, 0.15, 0.2, 0.3, 0.4]);
  const straight = (n: number, layer: number, widthMm: number): PlanEdge => {
    return { a: 0, b: n, layer, widthMm, path: [{ kind: 'line', to: at[n] }], isCarried: false };
  };
  const layer = random.whole(0, 1);
  const edges = [
    straight(1, 0, main),
    straight(2, 0, main),
    straight(3, layer, random.oneOf([main, branch])),
  ];
  return { nodes: withPorts(random, at, [false, true, true, true]), edges, layers };
}

/** A wide deep channel between two ports, with bundles of feeders that end in one point at or inside its walls. */
function chamber(random: Random): Plan {
  const layers = [
    { name: 'chamber', depthMm: random.oneOf([0.2, 0.3]), plane: 'chip' },
    { name: 'feeds', depthMm: random.oneOf([0.05, 0.1, 0.2]), plane: 'chip' },
  ];
  const width = random.between(1, 3);
  const bundles = random.whole(1, 3);
  const lean = random.chance(0.3) ? 0 : random.between(0, 2 * Math.PI);
  const along = { x: Math.cos(lean), y: Math.sin(lean) };
  const across = { x: -along.y, y: along.x };
  const frame = (x: number, y: number) => plus(plus({ x: 25, y: 25 }, along, x), across, y);
  const at: Point[] = [frame(-4, 0), frame(bundles * 14, 0)];
  const places: { readonly node: number; readonly x: number }[] = [];
  const edges: PlanEdge[] = [];
  const isPort = [true, true];
  const widths = random.shuffled([0.1, 0.15, 0.2, 0.3]).slice(0, random.whole(1, 2));
  for (let k = 0; k < bundles; k++) {
    const side = random.chance(0.5) ? 1 : -1;
    const x = 5 + k * 14;
    const y = (width / 2) * (random.chance(0.6) ? 1 : random.between(0.55, 0.9));
    const bundle = at.push(frame(x, side * y)) - 1;
    isPort.push(false);
    const elevations = random.shuffled([40, 65, 90, 115, 140]).slice(0, random.whole(2, 4));
    for (const degrees of elevations) {
      const t = (degrees * Math.PI) / 180;
      const far = at.push(frame(x + 6.5 * Math.cos(t), side * (y + 6.5 * Math.sin(t)))) - 1;
      isPort.push(random.chance(0.9));
      const foot = x - y / Math.tan(t);
      const place = at.push(frame(foot, 0)) - 1;
      isPort.push(false);
      places.push({ node: place, x: foot });
      const feeder = edgeOf(random, at, bundle, far, 1, random.oneOf(widths));
      edges.push(feeder);
      edges.push({ ...feeder, b: place, path: [{ kind: 'line', to: at[place] }], isCarried: true });
    }
  }
  const order = [0, ...[...places].sort((p, q) => p.x - q.x).map(({ node }) => node), 1];
  for (let i = 1; i < order.length; i++) {
    const [a, b] = [order[i - 1], order[i]];
    edges.push({ a, b, layer: 0, widthMm: width, path: [{ kind: 'line', to: at[b] }], isCarried: false });
  }
  return { nodes: withPorts(random, at, isPort), edges, layers };
}

/** Straight, bent, with an arc or with a Bézier curve in its middle. */
function edgeOf(
  random: Random,
  at: readonly Point[],
  a: number,
  b: number,
  layer: number,
  widthMm: number,
): PlanEdge {
  const [p, q] = [at[a], at[b]];
  const length = distance(p, q);
  const u = direction(p, q);
  const n = { x: -u.y, y: u.x };
  const spot = (share: number, aside: number) => plus(plus(p, u, share * length), n, aside);
  const shape = random.share();
  const aside = random.between(0.3, 0.9) * (random.chance(0.5) ? 1 : -1);
  let path: Part[] = [{ kind: 'line', to: q }];
  if (shape > 0.8) {
    path = [
      { kind: 'line', to: spot(0.36, 0) },
      { kind: 'line', to: spot(0.5, aside) },
      { kind: 'line', to: spot(0.64, 0) },
      ...path,
    ];
  } else if (shape > 0.7) {
    const chord = 0.28 * length;
    const radius = chord ** 2 / (8 * Math.abs(aside)) + Math.abs(aside) / 2;
    if (Math.abs(aside) < 0.3 * chord) {
      path = [
        { kind: 'line', to: spot(0.36, 0) },
        { kind: 'arc', to: spot(0.64, 0), radius, sweep: aside < 0 ? 1 : 0 },
        ...path,
      ];
    }
  } else if (shape > 0.6) {
    path = [
      { kind: 'line', to: spot(0.36, 0) },
      { kind: 'cubic', c1: spot(0.4, aside), c2: spot(0.6, -aside), to: spot(0.64, 0) },
      ...path,
    ];
  }
  return { a, b, layer, widthMm, path, isCarried: false };
}

function withPorts(random: Random, at: readonly Point[], isPort: readonly boolean[]): PlanNode[] {
  let count = 0;
  const first = isPort.indexOf(true);
  return at.map((point, n) => ({
    at: point,
    port: isPort[n] ? portOf(random, `port-${String.fromCharCode(97 + count++)}`, n === first) : null,
  }));
}

function portOf(random: Random, name: string, isHeld: boolean): PlanPort {
  const radius = random.between(0.5, 0.8);
  const tubed = random.chance(0.3);
  const tubing = tubed ? ', tubing: { bore: 0.25 mm, length: 120 mm }' : '';
  const tubingPaSM3 = tubed ? (128 * VISCOSITY_PA_S * 0.12) / (Math.PI * 0.25e-3 ** 4) : 0;
  const kind = isHeld
    ? 'pressure'
    : random.oneOf(['pressure', 'pressure', 'head', 'flow', 'open', 'sealed'] as const);
  switch (kind) {
    case 'pressure': {
      const kilo = random.whole(-5, 40);
      const drive = { kind, pressurePa: kilo * 1000, tubingPaSM3 } as const;
      return { name, radius, entry: `{ pressure: ${kilo} kPa${tubing} }`, drive };
    }
    case 'head': {
      const mm = random.whole(-50, 200);
      const pressurePa = DENSITY_KG_M3 * GRAVITY_M_S2 * mm * 1e-3;
      return {
        name,
        radius,
        entry: `{ head: ${mm} mm${tubing} }`,
        drive: { kind: 'pressure', pressurePa, tubingPaSM3 },
      };
    }
    case 'flow': {
      const ul = random.whole(-5, 9);
      return {
        name,
        radius,
        entry: `{ flow: ${ul} uL/min${tubing} }`,
        drive: { kind, flowM3s: (ul * 1e-9) / 60 },
      };
    }
    case 'open':
      return { name, radius, entry: 'open', drive: { kind: 'pressure', pressurePa: 0, tubingPaSM3: 0 } };
    case 'sealed':
      return { name, radius, entry: 'sealed', drive: { kind } };
    default:
      return kind satisfies never;
  }
}

/** The straight parts at both ends of an edge: their directions away from the node, and how long they are. */
export function armsOf(plan: Plan, node: number): Arm[] {
  return plan.edges.flatMap((edge, e) =>
    [edge.a, edge.b].flatMap((n, side) => {
      if (n !== node) return [];
      const next = side === 0 ? edge.path[0].to : lastCorner(plan, edge);
      const at = plan.nodes[node].at;
      return [{ edge: e, side, u: direction(at, next), straight: distance(at, next) }];
    }),
  );
}

export interface Arm {
  readonly edge: number;
  /** 0 where the edge starts at the node, 1 where it ends there. */
  readonly side: number;
  readonly u: Point;
  readonly straight: number;
}

function lastCorner(plan: Plan, edge: PlanEdge): Point {
  return edge.path.length > 1 ? edge.path[edge.path.length - 2].to : plan.nodes[edge.a].at;
}

/** Length of the parts of an edge. */
export function lengthsOf(plan: Plan, edge: PlanEdge): number[] {
  let p = plan.nodes[edge.a].at;
  return edge.path.map((part) => {
    const length = partLength(p, part);
    p = part.to;
    return length;
  });
}

function partLength(p: Point, part: Part): number {
  switch (part.kind) {
    case 'line':
      return distance(p, part.to);
    case 'arc':
      return 2 * part.radius * Math.asin(distance(p, part.to) / (2 * part.radius));
    case 'cubic': {
      let sum = 0;
      let last = p;
      for (let i = 1; i <= 2000; i++) {
        const next = cubicAt(p, part.c1, part.c2, part.to, i / 2000);
        sum += distance(last, next);
        last = next;
      }
      return sum;
    }
    default:
      return part satisfies never;
  }
}

export function cubicAt(p: Point, c1: Point, c2: Point, q: Point, t: number): Point {
  const s = 1 - t;
  const mix = (a: number, b: number, c: number, d: number) =>
    s * s * s * a + 3 * s * s * t * b + 3 * s * t * t * c + t * t * t * d;
  return { x: mix(p.x, c1.x, c2.x, q.x), y: mix(p.y, c1.y, c2.y, q.y) };
}

/**
 * How far the arm runs in the strips of ducts of one size that meet at the node, to the exact wall. Strips that start
 * square at the node hold it up to (W/2)/sin of the angle, if the angle is at most a right one; where two of one size
 * meet they are one strip, round at the node, and hold it for W/2 at least.
 */
export function runIn(arm: Arm, others: readonly Arm[], widthMm: number, goOn: boolean): number {
  const runs = others
    .filter(({ u }) => goOn || dot(arm.u, u) > -1e-9)
    .map(({ u }) => widthMm / 2 / Math.abs(cross(arm.u, u)));
  if (others.length > 1) runs.push(widthMm / 2);
  return Math.max(0, ...runs);
}

/** The true network. */
export function graphOfPlan(plan: Plan): Graph {
  return {
    nodes: plan.nodes.map(({ at, port }) => ({ at, port: port === null ? null : port.name })),
    ducts: plan.edges.map((edge, e) => ductOf(plan, edge, e)),
  };
}

function ductOf(plan: Plan, edge: PlanEdge, e: number): Duct {
  const length = lengthsOf(plan, edge).reduce((a, b) => a + b, 0);
  const rim = (n: number) => {
    const { port } = plan.nodes[n];
    return port === null || port.aside !== undefined ? 0 : port.radius;
  };
  const [from, to] = [rim(edge.a), length - rim(edge.b)];
  const cuts = [
    ...cutsAt(plan, e, 0).map(({ run, factor }) => ({ from: 0, to: run, factor })),
    ...cutsAt(plan, e, 1).map(({ run, factor }) => ({ from: length - run, to: length, factor })),
  ];
  const marks = [from, to, ...cuts.flatMap((cut) => [cut.from, cut.to])].filter((s) => s >= from && s <= to);
  marks.sort((a, b) => a - b);
  let lengthMm = 0;
  for (let i = 1; i < marks.length; i++) {
    const middle = (marks[i - 1] + marks[i]) / 2;
    const factors = cuts.filter((cut) => cut.from <= middle && middle <= cut.to).map(({ factor }) => factor);
    lengthMm += (marks[i] - marks[i - 1]) * Math.min(1, ...factors);
  }
  const part: DuctPart = { widthMm: edge.widthMm, depthMm: plan.layers[edge.layer].depthMm, lengthMm };
  return { from: edge.a, to: edge.b, parts: [part], drawnMm: to - from, flow: null };
}

/** Rule 5 at one node of an edge: how far which factor applies. */
export function cutsAt(
  plan: Plan,
  e: number,
  side: number,
): { readonly run: number; readonly factor: number }[] {
  const edge = plan.edges[e];
  const node = side === 0 ? edge.a : edge.b;
  if (plan.nodes[node].port !== null) return [];
  const arms = armsOf(plan, node);
  const arm = arms.find((one) => one.edge === e && one.side === side)!;
  const depth = plan.layers[edge.layer].depthMm;
  const cuts: { run: number; factor: number }[] = [];
  const sizes = new Map<string, Arm[]>();
  for (const other of arms) {
    const { layer, widthMm } = plan.edges[other.edge];
    const key = `${layer} ${widthMm}`;
    sizes.set(key, [...(sizes.get(key) ?? []), other]);
  }
  const isBundle = arms.some((one) => plan.edges[one.edge].isCarried && one.side === 0);
  for (const others of sizes.values()) {
    const { layer, widthMm } = plan.edges[others[0].edge];
    const deep = plan.layers[layer].depthMm;
    const factor = Math.min(1, edge.widthMm / widthMm) * Math.min(1, depth / deep) ** 3;
    if (others.includes(arm) || factor === 1) continue;
    cuts.push({ run: runIn(arm, others, widthMm, false), factor });
  }
  if (edge.isCarried || isBundle) cuts.push(...chamberCuts(plan, e));
  return cuts;
}

/** Where a bundle lies inside its chamber, the piece from the chamber's centreline to its wall is the chamber's. */
function chamberCuts(plan: Plan, e: number): { readonly run: number; readonly factor: number }[] {
  const edge = plan.edges[e];
  const main = plan.edges.find(({ layer }) => layer === 0)!;
  const [from, to] = [plan.nodes[main.a].at, plan.nodes[main.b].at];
  const along = direction(from, to);
  const bundle = plan.nodes[edge.a].at;
  const depth = (p: Point) => Math.abs(cross(along, minus(p, from)));
  const factor =
    Math.min(1, edge.widthMm / main.widthMm) *
    Math.min(1, plan.layers[edge.layer].depthMm / plan.layers[main.layer].depthMm) ** 3;
  if (edge.isCarried) return [{ run: Number.POSITIVE_INFINITY, factor }];
  const sine = Math.abs(cross(along, direction(bundle, edge.path[0].to)));
  return [{ run: (main.widthMm / 2 - depth(bundle)) / sine, factor }];
}

/** Points of an edge, curves finely, for measuring how near others come. */
export function sampled(plan: Plan, edge: PlanEdge): Point[] {
  const points = [plan.nodes[edge.a].at];
  for (const part of edge.path) {
    const p = points[points.length - 1];
    const n = Math.max(2, Math.ceil(distance(p, part.to) / 0.15));
    for (let i = 1; i <= n; i++) {
      const t = i / n;
      if (part.kind === 'cubic') points.push(cubicAt(p, part.c1, part.c2, part.to, t));
      else if (part.kind === 'line') points.push(plus(p, minus(part.to, p), t));
      else points.push(arcAt(p, part.to, part.radius, part.sweep, t));
    }
  }
  return points;
}

function arcAt(p: Point, q: Point, radius: number, sweep: 0 | 1, t: number): Point {
  const half = distance(p, q) / 2;
  const u = direction(p, q);
  const side = sweep === 1 ? 1 : -1;
  const n = { x: -u.y * side, y: u.x * side };
  const centre = plus(plus(p, u, half), n, Math.sqrt(radius * radius - half * half));
  const start = Math.atan2(p.y - centre.y, p.x - centre.x);
  const turn = 2 * Math.asin(half / radius) * side;
  return plus(centre, { x: Math.cos(start + t * turn), y: Math.sin(start + t * turn) }, radius);
}

/** Whether strips come near each other only at nodes they share, and no strip's ends reach beyond straight parts. */
function isApart(plan: Plan, leastDegrees: number): boolean {
  const drawn = plan.edges.filter(({ isCarried }) => !isCarried);
  const samples = drawn.map((edge) => sampled(plan, edge));
  const isChamber = drawn.length < plan.edges.length;
  for (let n = 0; n < plan.nodes.length; n++) {
    const arms = armsOf(plan, n).filter(({ edge }) => !plan.edges[edge].isCarried);
    const { port } = plan.nodes[n];
    for (const arm of arms) {
      for (const other of arms) {
        if (other === arm || plan.edges[arm.edge].layer === 2 || plan.edges[other.edge].layer === 2) continue;
        const cosine = dot(arm.u, other.u);
        if (cosine > Math.cos((leastDegrees * Math.PI) / 180)) return false;
        const half = plan.edges[other.edge].widthMm / 2;
        const sine = Math.abs(cross(arm.u, other.u));
        if (cosine > 0 && half / sine > 0.8 * arm.straight) return false;
        // In a well, strips part before the rim.
        if (port !== null && cosine > -0.1 && port.radius * sine < half + 0.05) return false;
        const nearRight = Math.abs(cosine);
        if (nearRight > 1e-9 && nearRight < 0.03) return false;
      }
    }
  }
  for (let i = 0; i < drawn.length; i++) {
    for (let j = i + 1; j < drawn.length; j++) {
      const [A, B] = [drawn[i], drawn[j]];
      if (plan.layers[A.layer].plane !== plan.layers[B.layer].plane) continue;
      if (isChamber && Math.min(A.layer, B.layer) === 0) continue;
      const shared = [A.a, A.b].filter((n) => n === B.a || n === B.b).map((n) => plan.nodes[n].at);
      if (shared.length > 1) return false;
      const gap = (A.widthMm + B.widthMm) / 2 + 0.2;
      for (const p of samples[i]) {
        for (const q of samples[j]) {
          if (distance(p, q) > gap) continue;
          if (shared.length === 0 || Math.min(distance(p, shared[0]), distance(q, shared[0])) > 2.3)
            return false;
        }
      }
    }
  }
  // Wells keep clear of what does not lead to them.
  return plan.nodes.every(
    (node, n) =>
      node.port === null ||
      drawn.every((edge, e) =>
        edge.a === n || edge.b === n
          ? true
          : samples[e].every((p) => distance(p, holeOf(node)) > node.port!.radius + edge.widthMm / 2 + 0.1),
      ),
  );
}
