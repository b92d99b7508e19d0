import type { Duct, DuctPart, Graph, GraphNode } from './graph.ts';
import {
  firstLeaves,
  type Line,
  lengthOf,
  nearestOn,
  pointAt,
  type StripPiece,
  stretch,
  stripOf,
  wedge,
} from './line.ts';
import { type End, type Hole, isSameDuct, type Kept, type Node, placesOn } from './places.ts';
import { cross, direction, distance, dot, minus, type Point, plus } from './points.ts';

/** Rules 5 and 7: stretches between neighbouring nodes, with their duct lengths. */
export function graphOf(
  kept: readonly Kept[],
  nodes: readonly Node[],
  holes: readonly Hole[],
  bundles: readonly (readonly End[])[],
  slack: number,
): Graph {
  const threads = sewn(kept, nodes, bundles, slack);
  const graphNodes: GraphNode[] = nodes.map(({ hole }, n) => ({
    at: hole === null ? placeOf(n, threads) : holes[hole].at,
    port: hole === null ? null : holes[hole].name,
  }));
  const ducts: Duct[] = [];
  for (const thread of threads) {
    const { path, places, closed, spans } = thread;
    const length = lengthOf(path);
    const cuts = cutsOn(thread, threads, nodes, bundles, kept, slack);
    const add = (from: number, to: number, runs: readonly (readonly [number, number])[]) => {
      const parts = runs.flatMap(([s, t]) => partsOf(spans, s, t, cuts));
      const drawnMm = runs.reduce((sum, [s, t]) => sum + t - s, 0);
      if (drawnMm > 0) ducts.push({ from, to, parts, drawnMm, flow: null });
    };
    const end = (at: Point): number => graphNodes.push({ at, port: null }) - 1;
    if (places.length === 0) {
      if (!closed) add(end(path[0]), end(path[path.length - 1]), [[0, length]]);
      continue;
    }
    for (let i = 1; i < places.length; i++) {
      add(places[i - 1].node, places[i].node, [[places[i - 1].to, places[i].from]]);
    }
    const [first, last] = [places[0], places[places.length - 1]];
    if (closed) {
      add(last.node, first.node, [
        [last.to, length],
        [0, first.from],
      ]);
      continue;
    }
    if (first.from > slack) add(end(path[0]), first.node, [[0, first.from]]);
    if (last.to < length - slack) add(last.node, end(path[path.length - 1]), [[last.to, length]]);
  }
  return { nodes: graphNodes, ducts };
}

/** What is left of one line, or of several sewn at seams; positions count from its first point. */
interface Thread {
  readonly lines: readonly number[];
  readonly path: readonly Point[];
  readonly closed: boolean;
  readonly places: readonly ThreadPlace[];
  /** Ducts in order, each up to a position. */
  readonly spans: readonly { readonly to: number; readonly line: Line }[];
  /** Which drawn end lies at the start and at the end. */
  readonly ends: readonly [string, string];
  /** Whether the first and the last piece was carried on, and not in the drawn direction. */
  readonly asides: readonly [boolean, boolean];
}

interface ThreadPlace {
  readonly node: number;
  readonly from: number;
  readonly to: number;
}

const endKey = ({ line, atStart }: { readonly line: number; readonly atStart: boolean }) =>
  `${line} ${atStart ? 'start' : 'end'}`;

/** A seam of equal ducts (two ends, no third, neither carried on) is no node: the two go on as one. */
function sewn(
  kept: readonly Kept[],
  nodes: readonly Node[],
  bundles: readonly (readonly End[])[],
  slack: number,
): Thread[] {
  const carried = (end: End) => (end.atStart ? kept[end.line].before : kept[end.line].after) !== null;
  const isSeam = (bundle: readonly End[]) =>
    bundle.length === 2 &&
    isSameDuct(kept[bundle[0].line].line, kept[bundle[1].line].line) &&
    !bundle.some(carried) &&
    nodes.every(({ places }) => {
      const here = places.filter((place) =>
        bundle.some(({ line, s }) => line === place.line && Math.abs(place.from - s) <= 2 * slack),
      );
      return here.length === 0 || here.length === places.length;
    });
  const threads = kept.map((one, l) => threadOf(one, l, nodes, slack));
  for (const bundle of bundles.filter(isSeam)) {
    const [a, b] = bundle.map((end) => threads.findIndex(({ ends }) => ends.includes(endKey(end))));
    if (a === b || a < 0 || b < 0) continue;
    const first = threads[a].ends[1] === endKey(bundle[0]) ? threads[a] : turned(threads[a]);
    const second = threads[b].ends[0] === endKey(bundle[1]) ? threads[b] : turned(threads[b]);
    const one = sewnPair(first, second, 2 * slack);
    threads[a] = one;
    threads.splice(b, 1);
  }
  return threads;
}

function threadOf(one: Kept, l: number, nodes: readonly Node[], slack: number): Thread {
  const { line, least, most } = one;
  const path = pathOf(one);
  return {
    lines: [l],
    path,
    closed: line.closed,
    places: placesOn(nodes, l)
      .filter(({ place }) => place.to >= least - slack && place.from <= most + slack)
      .map(({ node, place }) => ({
        node,
        from: Math.max(least, place.from) - least,
        to: Math.min(most, place.to) - least,
      })),
    spans: [{ to: lengthOf(path), line }],
    ends: line.closed ? ['', ''] : [endKey({ line: l, atStart: true }), endKey({ line: l, atStart: false })],
    asides: [
      one.before !== null && least < 0 && isAside(line.points[1], line.points[0], one.before, slack),
      one.after !== null &&
        most > one.length &&
        isAside(line.points.at(-2)!, line.points.at(-1)!, one.after, slack),
    ],
  };
}

/** Whether the way from the end of a stroke to where it was carried on leaves the drawn direction. */
function isAside(inner: Point, end: Point, tip: Point, slack: number): boolean {
  const u = direction(inner, end);
  const v = minus(tip, end);
  return dot(u, v) <= 0 || Math.abs(cross(u, v)) > slack;
}

function turned({ path, places, spans, ends, asides, ...rest }: Thread): Thread {
  const length = lengthOf(path);
  return {
    ...rest,
    path: [...path].reverse(),
    places: places.map(({ node, from, to }) => ({ node, from: length - to, to: length - from })).reverse(),
    spans: spans.map(({ line }, i) => ({ to: length - (i === 0 ? 0 : spans[i - 1].to), line })).reverse(),
    ends: [ends[1], ends[0]],
    asides: [asides[1], asides[0]],
  };
}

function sewnPair(a: Thread, b: Thread, near: number): Thread {
  const length = lengthOf(a.path);
  const gap = distance(a.path[a.path.length - 1], b.path[0]);
  const shift = length + (gap > 1e-12 ? gap : 0);
  return {
    lines: [...a.lines, ...b.lines],
    path: [...a.path, ...(gap > 1e-12 ? b.path : b.path.slice(1))],
    closed: false,
    places: [
      ...a.places.filter(({ to }) => to < length - near),
      ...b.places
        .filter(({ from }) => from > near)
        .map(({ node, from, to }) => ({ node, from: from + shift, to: to + shift })),
    ],
    spans: [...a.spans, ...b.spans.map(({ to, line }) => ({ to: to + shift, line }))],
    ends: [a.ends[0], b.ends[1]],
    asides: [a.asides[0], b.asides[1]],
  };
}

/** What is left of a line, with what was carried on. */
function pathOf({ line, length, before, after, least, most }: Kept): Point[] {
  const drawn = stretch(line.points, Math.max(0, least), Math.min(length, most));
  const path = [
    ...(before !== null && least < 0 ? [before] : []),
    ...drawn,
    ...(after !== null && most > length ? [after] : []),
  ];
  return path.filter((p, i) => i === 0 || distance(p, path[i - 1]) > 0);
}

function placeOf(node: number, threads: readonly Thread[]): Point {
  for (const { path, places } of threads) {
    const place = places.find((one) => one.node === node);
    if (place !== undefined) return pointAt(path, place.from);
  }
  return { x: Number.NaN, y: Number.NaN };
}

/** A stretch of a thread that counts by a factor. */
interface Cut {
  readonly from: number;
  readonly to: number;
  readonly factor: number;
}

function cutsOn(
  thread: Thread,
  threads: readonly Thread[],
  nodes: readonly Node[],
  bundles: readonly (readonly End[])[],
  kept: readonly Kept[],
  slack: number,
): Cut[] {
  const { path, closed, places, spans } = thread;
  const length = lengthOf(path);
  const own = spans[0].line;
  return places.flatMap(({ node, from, to }) =>
    threads
      .filter((other) => other !== thread && other.places.some((place) => place.node === node))
      .flatMap((other): Cut[] => {
        const { line } = other.spans[0];
        if (own.plane !== line.plane || isSameDuct(own, line)) return [];
        const factor = Math.min(1, own.widthMm / line.widthMm) * Math.min(1, own.depthMm / line.depthMm) ** 3;
        if (factor === 1) return [];
        const strips = oneStrip(other, threads, nodes, bundles, kept, slack);
        const walk = (s: number, t: number) =>
          Math.abs(t - s) <= slack ? 0 : firstLeaves(around(path, closed, s, t), strips, slack);
        const back = walk(from, closed ? from - length : 0);
        const on = walk(to, closed ? to + length : length);
        return [
          { from: from - back, to: from, factor },
          { from: to, to: to + on, factor },
        ].flatMap((cut) =>
          (closed ? [-1, 0, 1] : [0]).map((k) => ({
            ...cut,
            from: cut.from + k * length,
            to: cut.to + k * length,
          })),
        );
      }),
  );
}

/** The path from s to t; of a closed one also once around. */
function around(path: readonly Point[], closed: boolean, s: number, t: number): Point[] {
  if (!closed) return stretch(path, s, t);
  const length = lengthOf(path);
  if (t > s) return [...stretch(path, s, length), ...stretch(path, 0, s).slice(1)];
  return [...stretch(path, s, 0), ...stretch(path, length, s).slice(1)];
}

/** Rule 5: strips of equal ducts that meet end to end are one strip, the seam inside. */
function oneStrip(
  first: Thread,
  threads: readonly Thread[],
  nodes: readonly Node[],
  bundles: readonly (readonly End[])[],
  kept: readonly Kept[],
  slack: number,
): StripPiece[] {
  const group = [first];
  const pieces: StripPiece[] = [];
  const inner = ({ line, atStart }: End) => kept[line].line.points.at(atStart ? 1 : -2)!;
  for (const thread of group) {
    const { line } = thread.spans[0];
    pieces.push(
      ...stripOf(etchedPath(thread, slack), thread.closed, line.halfMm).map((piece) =>
        ownWidth(piece, thread),
      ),
    );
    for (const bundle of bundles) {
      for (const end of bundle.filter((one) => thread.lines.includes(one.line))) {
        for (const other of bundle) {
          if (other === end || !isSameDuct(kept[other.line].line, line)) continue;
          const theirs = threads.find(({ lines }) => lines.includes(other.line))!;
          if (!group.includes(theirs)) group.push(theirs);
          pieces.push(wedge(inner(end), end.at, inner(other), line.halfMm));
        }
      }
    }
    for (const end of nodesAtEnds(thread)) {
      // What lies in a well is the port's: ends there stand apart, and meet nobody's end.
      if (nodes[end.node].hole !== null) continue;
      for (const theirs of threads) {
        if (theirs.spans[0].line.plane !== line.plane || !isSameDuct(theirs.spans[0].line, line)) continue;
        for (const other of nodesAtEnds(theirs)) {
          if (other.node !== end.node || (theirs === thread && other.at === end.at)) continue;
          if (!group.includes(theirs)) group.push(theirs);
          pieces.push(wedge(end.inner, end.at, other.inner, line.halfMm));
        }
      }
    }
  }
  return pieces;
}

/** Sewn ducts may differ by 1e-6 in width: each piece has its own walls. */
function ownWidth(piece: StripPiece, { spans }: Thread): StripPiece {
  if (spans.every(({ line }) => line.halfMm === spans[0].line.halfMm)) return piece;
  const at = piece.kind === 'wedge' ? piece.v : plus(piece.p, piece.u, piece.length / 2);
  const away = spans.map(({ line }) => nearestOn(at, line.points).distance);
  return { ...piece, half: spans[away.indexOf(Math.min(...away))].line.halfMm };
}

/** The nodes that a thread ends at, and which way it comes. */
function nodesAtEnds({ path, closed, places }: Thread): { node: number; at: Point; inner: Point }[] {
  if (closed || places.length === 0) return [];
  const length = lengthOf(path);
  const [first, last] = [places[0], places[places.length - 1]];
  const n = path.length;
  return [
    ...(first.from < 1e-3 ? [{ node: first.node, at: path[0], inner: path[1] }] : []),
    ...(last.to > length - 1e-3 ? [{ node: last.node, at: path[n - 1], inner: path[n - 2] }] : []),
  ];
}

/**
 * The path that the strip runs along: an end carried on in its own direction with what was carried on, one carried on
 * aside as it was drawn. Pieces shorter than the slack (the gap at a seam, what was carried on to a centreline that the
 * end was drawn to) say nothing of where a strip ends or which way it points.
 */
function etchedPath({ path, closed, asides }: Thread, slack: number): readonly Point[] {
  if (closed) return path;
  const drawn = path.slice(asides[0] ? 1 : 0, asides[1] ? -1 : undefined);
  if (drawn.length < 3) return drawn;
  const first = distance(drawn[0], drawn[1]) <= 2 * slack ? 1 : 0;
  const last = distance(drawn[drawn.length - 2], drawn[drawn.length - 1]) <= 2 * slack ? 1 : 0;
  const whole = drawn.length - first - last < 2 ? drawn : drawn.slice(first, drawn.length - last);
  return whole.filter((p, i) => i === 0 || i === whole.length - 1 || distance(p, whole[i - 1]) > slack);
}

/** The ducts between two positions, one for each span. */
function partsOf(spans: Thread['spans'], s: number, t: number, cuts: readonly Cut[]): DuctPart[] {
  return spans.flatMap(({ to, line }, i) => {
    const from = Math.max(s, i === 0 ? 0 : spans[i - 1].to);
    const until = Math.min(t, to);
    if (until <= from) return [];
    const { widthMm, depthMm } = line;
    return [{ widthMm, depthMm, lengthMm: ductLength(from, until, cuts) }];
  });
}

/** Every bit counts once, with the smallest factor that applies to it. */
function ductLength(from: number, to: number, cuts: readonly Cut[]): number {
  const marks = [from, to, ...cuts.flatMap((cut) => [cut.from, cut.to])]
    .filter((s) => s >= from && s <= to)
    .sort((a, b) => a - b);
  let sum = 0;
  for (let i = 1; i < marks.length; i++) {
    const middle = (marks[i - 1] + marks[i]) / 2;
    const factors = cuts.filter((cut) => cut.from <= middle && middle <= cut.to).map(({ factor }) => factor);
    sum += (marks[i] - marks[i - 1]) * Math.min(1, ...factors);
  }
  return sum;
}
