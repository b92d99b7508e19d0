import { type Arm, armsOf, type Part, type Plan, runIn, sampled } from './plan.ts';
import { distance, dot, type Point, plus } from './points.ts';
import type { Random } from './random.ts';

/** One drawn centreline, mm of the plan, not yet rounded. */
export interface PlanStroke {
  readonly start: Point;
  readonly parts: readonly Part[];
  readonly isClosed: boolean;
  readonly layer: number;
  readonly widthMm: number;
  /** How far from its start it runs in the strip of the channel that it starts from, and nothing else; 0 for not so. */
  readonly forkMm: number;
}

/** How far off ends may be drawn, mm. */
export interface Looseness {
  /** Ends meant for one point: each at most this far from it. */
  readonly endOffset: number;
  /** Ends at a wall or rim stay inside by this, so that rounding does not take them out of the slack. */
  readonly inside: number;
  /** How far apart two decimals are, mm. */
  readonly fineness: number;
}

/**
 * One of the many ways to draw a plan: strokes run through nodes or end there, at the centreline, at the wall, between or
 * past it; they are split, doubled, reversed, closed.
 */
export function randomStrokes(plan: Plan, random: Random, looseness: Looseness): PlanStroke[] {
  const partner = pairedArms(plan, random);
  const spread = plan.nodes.map((_, n) => isSpread(plan, n, partner, random, looseness));
  const strokes = trailsOf(plan, partner).map((trail) =>
    strokeOf(plan, trail, partner, spread, random, looseness),
  );
  const pieces = strokes
    .flatMap((stroke) => split(stroke, random, looseness))
    .map((stroke) => (random.chance(0.5) ? stroke : withoutIdleVertices(stroke)))
    .map((stroke) => (random.chance(0.5) ? stroke : turnedStroke(stroke)));
  return random.shuffled(pieces);
}

/**
 * Whether ends at the node are drawn to the wall, between and past; else all to one point, loosely. Both at once, or
 * rounding that is coarse beside the slack, would lead two ends to places further apart than the slack.
 */
function isSpread(
  plan: Plan,
  node: number,
  partner: ReadonlyMap<string, Arm>,
  random: Random,
  { fineness }: Looseness,
): boolean {
  const ends = armsOf(plan, node).filter((arm) => !partner.has(key(arm)));
  return (fineness <= 1e-4 || ends.length < 2) && random.chance(0.7);
}

const key = ({ edge, side }: { readonly edge: number; readonly side: number }) => `${edge} ${side}`;

/** Which arms of a node one stroke runs through; only equal ducts can. */
function pairedArms(plan: Plan, random: Random): Map<string, Arm> {
  const partner = new Map<string, Arm>();
  const often = random.oneOf([0.2, 0.7, 0.95]);
  plan.nodes.forEach((_, n) => {
    const all = armsOf(plan, n);
    // Where the rules put the node on a channel that runs on.
    const runsOn =
      plan.nodes[n].port?.aside !== undefined ||
      all.some(({ edge, side }) => plan.edges[edge].isCarried && side === 1);
    // A vertex at a wall is no end, and joins nothing there.
    if (all.some(({ edge, side }) => plan.edges[edge].isCarried && side === 0)) return;
    const arms = random.shuffled(all.filter(({ edge }) => !plan.edges[edge].isCarried));
    for (const arm of arms) {
      if (partner.has(key(arm)) || !(runsOn || random.chance(often))) continue;
      const edge = plan.edges[arm.edge];
      const others = arms.filter(
        (other) =>
          other.edge !== arm.edge &&
          !partner.has(key(other)) &&
          plan.edges[other.edge].layer === edge.layer &&
          plan.edges[other.edge].widthMm === edge.widthMm,
      );
      if (others.length === 0) continue;
      const other = others.reduce((a, b) => (dot(arm.u, b.u) < dot(arm.u, a.u) ? b : a));
      partner.set(key(arm), other);
      partner.set(key(other), arm);
    }
  });
  return partner;
}

interface Step {
  readonly edge: number;
  readonly forward: boolean;
}

interface Trail {
  readonly steps: readonly Step[];
  readonly isClosed: boolean;
}

function trailsOf(plan: Plan, partner: ReadonlyMap<string, Arm>): Trail[] {
  const trails: Trail[] = [];
  const used = new Set<number>();
  const follow = (edge: number, forward: boolean): Step[] => {
    const steps: Step[] = [];
    let next: Step | null = { edge, forward };
    while (next !== null && !used.has(next.edge)) {
      steps.push(next);
      used.add(next.edge);
      const on = partner.get(key({ edge: next.edge, side: next.forward ? 1 : 0 }));
      next = on === undefined ? null : { edge: on.edge, forward: on.side === 0 };
    }
    return steps;
  };
  const drawn = plan.edges.map((_, e) => e).filter((e) => !plan.edges[e].isCarried);
  for (const e of drawn) {
    for (const side of [0, 1]) {
      if (used.has(e) || partner.has(key({ edge: e, side }))) continue;
      trails.push({ steps: follow(e, side === 0), isClosed: false });
    }
  }
  for (const e of drawn) if (!used.has(e)) trails.push({ steps: follow(e, true), isClosed: true });
  return trails;
}

/** The parts of an edge in the order of the step. */
function partsOf(
  plan: Plan,
  { edge, forward }: Step,
): { readonly start: Point; readonly parts: readonly Part[] } {
  const { a, path } = plan.edges[edge];
  const start = plan.nodes[a].at;
  return forward ? { start, parts: path } : turnedParts(start, path);
}

export function turnedParts(
  start: Point,
  parts: readonly Part[],
): { readonly start: Point; readonly parts: readonly Part[] } {
  const points = [start, ...parts.map(({ to }) => to)];
  const back = parts
    .map((part, i): Part => {
      const to = points[i];
      switch (part.kind) {
        case 'line':
          return { kind: 'line', to };
        case 'arc':
          return { kind: 'arc', to, radius: part.radius, sweep: part.sweep === 1 ? 0 : 1 };
        case 'cubic':
          return { kind: 'cubic', c1: part.c2, c2: part.c1, to };
        default:
          return part satisfies never;
      }
    })
    .reverse();
  return { start: points[points.length - 1], parts: back };
}

function strokeOf(
  plan: Plan,
  { steps, isClosed }: Trail,
  partner: ReadonlyMap<string, Arm>,
  spread: readonly boolean[],
  random: Random,
  looseness: Looseness,
): PlanStroke {
  const pieces = steps.map((step) => partsOf(plan, step));
  const { layer, widthMm } = plan.edges[steps[0].edge];
  let parts: Part[] = pieces.flatMap((piece) => piece.parts);
  let { start } = pieces[0];
  let forkMm = 0;
  if (!isClosed) {
    const first = { edge: steps[0].edge, side: steps[0].forward ? 0 : 1 };
    const lastStep = steps[steps.length - 1];
    const last = { edge: lastStep.edge, side: lastStep.forward ? 1 : 0 };
    const to = endPoint(plan, last, partner, spread, random, looseness);
    start = endPoint(plan, first, partner, spread, random, looseness);
    forkMm = forkOf(plan, first, start, partner);
    parts = [...parts.slice(0, -1), { ...parts[parts.length - 1], to }];
  }
  return { start, parts, isClosed, layer, widthMm, forkMm };
}

function forkOf(
  plan: Plan,
  end: { readonly edge: number; readonly side: number },
  start: Point,
  partner: ReadonlyMap<string, Arm>,
): number {
  const edge = plan.edges[end.edge];
  const n = end.side === 0 ? edge.a : edge.b;
  const arms = armsOf(plan, n);
  const through = arms.filter((one) => partner.has(key(one)));
  const arm = arms.find((one) => one.edge === end.edge && one.side === end.side)!;
  const isAtNode = distance(start, plan.nodes[n].at) < 1e-3;
  if (plan.nodes[n].port !== null || through.length !== 2 || arms.length !== 3 || !isAtNode) return 0;
  return runIn(arm, through, plan.edges[through[0].edge].widthMm, false);
}

/** A straight run through a node needs no vertex there. */
function withoutIdleVertices(stroke: PlanStroke): PlanStroke {
  const { start, parts } = stroke;
  const kept: Part[] = [];
  let from = start;
  for (const part of parts) {
    const last = kept[kept.length - 1];
    if (last?.kind === 'line' && part.kind === 'line') {
      const before = distance(from, last.to);
      const after = distance(last.to, part.to);
      if (distance(from, part.to) > before + after - 1e-12) {
        kept[kept.length - 1] = part;
        continue;
      }
    }
    if (last !== undefined) from = last.to;
    kept.push(part);
  }
  return { ...stroke, parts: kept };
}

/** Where a stroke that ends at a node is drawn to. */
function endPoint(
  plan: Plan,
  end: { readonly edge: number; readonly side: number },
  partner: ReadonlyMap<string, Arm>,
  spread: readonly boolean[],
  random: Random,
  looseness: Looseness,
): Point {
  const edge = plan.edges[end.edge];
  const n = end.side === 0 ? edge.a : edge.b;
  const { at, port } = plan.nodes[n];
  const arms = armsOf(plan, n);
  const arm = arms.find((one) => one.edge === end.edge && one.side === end.side)!;
  if (port !== null) return portEnd(plan, arm, at, port.radius, arms.length, random, looseness);
  if (arms.length === 1) return at;
  if (spread[n]) return plus(at, arm.u, movedEnd(plan, arm, arms, partner, random, looseness) ?? 0);
  const turn = random.between(0, 2 * Math.PI);
  const off = random.chance(0.5) ? 0 : looseness.endOffset * random.share();
  return plus(at, { x: Math.cos(turn), y: Math.sin(turn) }, off);
}

function portEnd(
  plan: Plan,
  arm: Arm,
  at: Point,
  radius: number,
  count: number,
  random: Random,
  looseness: Looseness,
): Point {
  const style = random.share();
  if (style < 0.3) return at;
  if (style < 0.5) return plus(at, arm.u, radius - looseness.inside);
  if (style < 0.7) return plus(at, arm.u, random.between(0.1, 0.9) * radius);
  if (style < 0.85 || count > 1) return plus(at, arm.u, -random.between(0.1, 0.8) * radius);
  const { widthMm, layer } = plan.edges[arm.edge];
  const beyond = plus(at, arm.u, -radius - random.between(0.1, 0.9) * Math.max(widthMm, radius));
  const isClear = plan.edges.every(
    (edge, e) =>
      e === arm.edge ||
      plan.layers[edge.layer].plane !== plan.layers[layer].plane ||
      sampled(plan, edge).every((p) => distance(p, beyond) > (edge.widthMm + widthMm) / 2 + 0.3),
  );
  const isClearOfWells = plan.nodes.every(
    (other) =>
      other.port === null ||
      other.at === at ||
      distance(other.at, beyond) > other.port.radius + widthMm / 2 + 0.1,
  );
  return isClear && isClearOfWells ? beyond : at;
}

/** How far from the node along its arm an end that leads to a stroke running through may be drawn; null: at the node. */
function movedEnd(
  plan: Plan,
  arm: Arm,
  arms: readonly Arm[],
  partner: ReadonlyMap<string, Arm>,
  random: Random,
  looseness: Looseness,
): number | null {
  const through = arms.filter((one) => partner.has(key(one)));
  const width = (one: Arm) => plan.edges[one.edge].widthMm;
  if (through.length === 0) return null;
  const rest = arms.filter((one) => one !== arm && !through.includes(one));
  const main = random.oneOf(through);
  const pair = [main, partner.get(key(main))!];
  const W = width(main);
  const style = random.share();
  if (style < 0.25) return null;
  if (style < 0.8) {
    const least = Math.min(...through.map(width));
    const wall = runIn(arm, pair, W, false) - looseness.inside;
    const t = style < 0.5 ? wall : random.between(0.05, 0.95) * Math.min(wall, 0.9 * W);
    if (t > 0.95 * least || t <= 0) return null;
    const isFree = rest.every((other) => {
      const cosine = dot(arm.u, other.u);
      const sine = Math.sqrt(Math.max(0, 1 - cosine * cosine));
      return cosine < 0.1 || t * sine > width(other) / 2 + 0.02;
    });
    return isFree ? t : null;
  }
  const back = { ...arm, u: { x: -arm.u.x, y: -arm.u.y } };
  const room = Math.min(0.9 * runIn(back, pair, W, false), 1.5 * W);
  const isFree = rest.every((other) => dot(back.u, other.u) < 0.3);
  const tiny = looseness.endOffset > 0 && random.chance(0.2);
  return isFree ? -(tiny ? 0.0004 : random.between(0.05, 1) * room) : null;
}

/** In two at the middle of a long straight part, or at a corner between parts: exact, overlapping, of nearly equal width. */
function split(stroke: PlanStroke, random: Random, looseness: Looseness): PlanStroke[] {
  if (stroke.isClosed || !random.chance(0.35)) return [stroke];
  if (stroke.forkMm > 0.1 && random.chance(0.5)) return splitInFork(stroke, random);
  const points = [stroke.start, ...stroke.parts.map(({ to }) => to)];
  const k = random.whole(0, stroke.parts.length - 1);
  const part = stroke.parts[k];
  const length = distance(points[k], points[k + 1]);
  if (part.kind !== 'line') return [stroke];
  const nearly = random.chance(0.4) ? 10 ** -random.between(7, 12) * (random.chance(0.5) ? 1 : -1) : 0;
  const widths = random.shuffled([stroke.widthMm, stroke.widthMm * (1 + nearly)]);
  if (length < 5) return [stroke];
  const spot = plus(
    points[k],
    { x: points[k + 1].x - points[k].x, y: points[k + 1].y - points[k].y },
    random.between(0.46, 0.54),
  );
  const u = { x: (points[k + 1].x - points[k].x) / length, y: (points[k + 1].y - points[k].y) / length };
  const off = random.chance(0.4) ? looseness.endOffset * random.between(-0.7, 0.7) : 0;
  const overlap = random.chance(0.3)
    ? Math.max(0.04, Math.min(1.2, random.between(0.2, 1.6) * stroke.widthMm))
    : 0;
  const end = plus(plus(spot, u, overlap / 2), { x: -u.y, y: u.x }, off);
  const start = plus(spot, u, -overlap / 2);
  return [
    { ...stroke, widthMm: widths[0], parts: [...stroke.parts.slice(0, k), { kind: 'line', to: end }] },
    { ...stroke, widthMm: widths[1], start, parts: stroke.parts.slice(k) },
  ];
}

/** In two where the stroke still runs in the strip that it starts from. */
function splitInFork(stroke: PlanStroke, random: Random): PlanStroke[] {
  const first = stroke.parts[0].to;
  const length = distance(stroke.start, first);
  const u = { x: (first.x - stroke.start.x) / length, y: (first.y - stroke.start.y) / length };
  const spot = plus(stroke.start, u, stroke.forkMm * random.between(0.4, 0.9));
  return [
    { ...stroke, parts: [{ kind: 'line', to: spot }] },
    { ...stroke, start: spot },
  ];
}

function turnedStroke(stroke: PlanStroke): PlanStroke {
  return { ...stroke, ...turnedParts(stroke.start, stroke.parts) };
}
