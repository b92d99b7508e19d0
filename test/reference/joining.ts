import type { Graph } from './graph.ts';
import {
  crossing,
  disc,
  firstLeaves,
  isInStrip,
  type Line,
  lengthOf,
  nearestOn,
  pointAt,
  positions,
  stretch,
  stripOf,
} from './line.ts';
import { areEqual, type End, type Hole, type Kept, type Node, type Place, placesOn } from './places.ts';
import { cross, direction, distance, dot, minus, nearestShare, type Point, plus } from './points.ts';
import { graphOf } from './trimming.ts';

/**
 * The joining rules 1 to 7 (joints: centreline) a second time, written from the rules alone and not from src/network/:
 * every pair of pieces is looked at, everything is a list of places on lines. Rectangles of straight pieces; curves come
 * cut into straight pieces. Cost: the square of the number of pieces.
 */
export function joined(lines: readonly Line[], holes: readonly Hole[], slack: number): Graph {
  const kept: Kept[] = lines.map((line) => {
    const length = lengthOf(line.points);
    return { line, length, before: null, after: null, least: 0, most: length };
  });
  const links: (readonly Place[])[] = [];
  const wells = holes.map((hole) => wellPlaces(hole, lines, slack));
  const inWell = (line: number, s: number) =>
    wells.some((places) =>
      places.some((place) => place.line === line && s >= place.from - slack && s <= place.to + slack),
    );

  const meetings = meetingsOf(lines, slack).filter(
    ([p, q]) => !inWell(p.line, p.from) && !inWell(q.line, q.from),
  );
  const ends = endsOf(lines);
  const freeEnds = ends.filter(({ line, s }) => !inWell(line, s));
  const bundles = bundlesOf(freeEnds, lines, slack);
  const carriedEnds: { line: number; s: number; to: number }[] = [];
  for (const [b, bundle] of bundles.entries()) {
    if (bundle.length > 1) links.push(bundle.map(({ line, s }) => ({ line, from: s, to: s })));
    for (const end of bundle) {
      const carried = carriedOn(end, bundle, lines, meetings, slack);
      if (carried === null) continue;
      const { line, atStart } = end;
      const length = distance(end.at, carried.at);
      carriedEnds.push({ line, s: end.s, to: carried.line });
      const s = atStart ? -length : kept[line].length + length;
      if (length > 0) {
        if (atStart) [kept[line].before, kept[line].least] = [carried.at, s];
        else [kept[line].after, kept[line].most] = [carried.at, s];
      }
      links.push([
        { line, from: s, to: s },
        { line: carried.line, from: carried.s, to: carried.s, bundle: bundle.length > 1 ? b : undefined },
      ]);
    }
  }

  // An end that was carried on joins there, and not at the point of the centreline that lies nearest.
  const isCarried = (p: Place, q: Place) =>
    carriedEnds.some(({ line, s, to }) => line === p.line && to === q.line && Math.abs(s - p.from) <= slack);
  links.push(...meetings.filter(([p, q]) => !isCarried(p, q) && !isCarried(q, p)));

  const nodes = nodesOf(kept, links, wells, slack);
  leaveOutOvershoot(kept, nodes, holes, slack);
  leaveOutOverlaps(kept, nodes, bundles, slack);
  return graphOf(kept, nodes, holes, bundles, slack);
}

/** Rule 6: stretches of centreline inside the circle; else the nearest point of one whose strip it overlaps. */
function wellPlaces({ at, radius }: Hole, lines: readonly Line[], slack: number): Place[] {
  return lines.flatMap((line, l) => {
    const S = positions(line.points);
    const runs: [number, number][] = [];
    for (let i = 1; i < line.points.length; i++) {
      const [p, q] = [line.points[i - 1], line.points[i]];
      const run = disc(p, direction(p, q), at, radius);
      if (run === null || run[1] < 0 || run[0] > S[i] - S[i - 1]) continue;
      runs.push([S[i - 1] + Math.max(0, run[0]), Math.min(S[i], S[i - 1] + run[1])]);
    }
    const merged = mergedRuns(runs, slack);
    if (merged.length > 0) {
      // An end just short of the rim touches.
      const length = S[S.length - 1];
      const touching = [0, length].filter(
        (s) =>
          !line.closed &&
          distance(pointAt(line.points, s), at) <= radius + slack &&
          !merged.some(([from, to]) => s >= from - slack && s <= to + slack),
      );
      return [...merged, ...touching.map((s): [number, number] => [s, s])].map(([from, to]) => ({
        line: l,
        from,
        to,
      }));
    }
    const nearest = nearestOn(at, line.points);
    const overlaps = nearest.distance <= radius + slack || distanceToStrip(at, line) <= radius + slack;
    return overlaps ? [{ line: l, from: nearest.s, to: nearest.s }] : [];
  });
}

function mergedRuns(runs: readonly [number, number][], slack: number): [number, number][] {
  const merged: [number, number][] = [];
  for (const [from, to] of [...runs].sort((a, b) => a[0] - b[0])) {
    const last = merged[merged.length - 1];
    if (last !== undefined && from <= last[1] + slack) last[1] = Math.max(last[1], to);
    else merged.push([from, to]);
  }
  return merged;
}

function distanceToStrip(x: Point, { points, closed, halfMm }: Line): number {
  let least = Number.POSITIVE_INFINITY;
  for (let i = 1; i < points.length; i++) {
    const u = direction(points[i - 1], points[i]);
    const along = dot(minus(x, points[i - 1]), u);
    const length = distance(points[i - 1], points[i]);
    const dx = Math.max(0, -along, along - length);
    const dy = Math.max(0, Math.abs(cross(u, minus(x, points[i - 1]))) - halfMm);
    least = Math.min(least, Math.hypot(dx, dy));
  }
  const vertices = closed ? points : points.slice(1, -1);
  return Math.min(least, ...vertices.map((v) => Math.max(0, distance(v, x) - halfMm)));
}

/** Rule 2: where centrelines cross, and where an end or vertex of one lies within the slack of another. */
function meetingsOf(lines: readonly Line[], slack: number): (readonly [Place, Place])[] {
  const crossings: (readonly [Place, Place])[] = [];
  const found: (readonly [Place, Place])[] = [];
  const S = lines.map(({ points }) => positions(points));
  const place = (line: number, s: number): Place => ({ line, from: s, to: s });
  for (let i = 0; i < lines.length; i++) {
    for (let j = i; j < lines.length; j++) {
      if (lines[i].plane !== lines[j].plane) continue;
      const [P, Q] = [lines[i].points, lines[j].points];
      for (let k = 1; k < P.length; k++) {
        for (let m = i === j ? k + 2 : 1; m < Q.length; m++) {
          const isClosing = i === j && lines[i].closed && k === 1 && m === Q.length - 1;
          if (isClosing || areApart(P[k - 1], P[k], Q[m - 1], Q[m], slack)) continue;
          const cut = crossing(P[k - 1], P[k], Q[m - 1], Q[m]);
          if (cut !== null) {
            crossings.push([
              place(i, S[i][k - 1] + cut.t * (S[i][k] - S[i][k - 1])),
              place(j, S[j][m - 1] + cut.u * (S[j][m] - S[j][m - 1])),
            ]);
          }
          for (const v of [k - 1, k]) {
            const s = beside(P[v], Q[m - 1], Q[m], slack);
            if (s !== null) found.push([place(i, S[i][v]), place(j, S[j][m - 1] + s)]);
          }
          for (const v of [m - 1, m]) {
            const s = beside(Q[v], P[k - 1], P[k], slack);
            if (s !== null) found.push([place(i, S[i][k - 1] + s), place(j, S[j][v])]);
          }
        }
      }
    }
  }
  // Where two lines cross, an end or vertex that lies beside the crossing says nothing new.
  const isBesideCrossing = ([p, q]: readonly [Place, Place]) =>
    crossings.some(
      ([x, y]) =>
        x.line === p.line &&
        y.line === q.line &&
        Math.abs(x.from - p.from) <= 2 * slack &&
        Math.abs(y.from - q.from) <= 2 * slack,
    );
  return [...crossings, ...found.filter((pair) => !isBesideCrossing(pair))];
}

function areApart(a: Point, b: Point, c: Point, d: Point, slack: number): boolean {
  return (
    Math.max(a.x, b.x) + slack < Math.min(c.x, d.x) ||
    Math.max(c.x, d.x) + slack < Math.min(a.x, b.x) ||
    Math.max(a.y, b.y) + slack < Math.min(c.y, d.y) ||
    Math.max(c.y, d.y) + slack < Math.min(a.y, b.y)
  );
}

function beside(x: Point, p: Point, q: Point, slack: number): number | null {
  const share = nearestShare(x, p, q);
  return distance(x, plus(p, minus(q, p), share)) <= slack ? share * distance(p, q) : null;
}

function endsOf(lines: readonly Line[]): End[] {
  return lines.flatMap(({ points, closed }, line) =>
    closed
      ? []
      : [
          { line, atStart: true, at: points[0], s: 0 },
          { line, atStart: false, at: points[points.length - 1], s: lengthOf(points) },
        ],
  );
}

/** Rule 3: ends of one plane within the slack of each other, chains too. */
function bundlesOf(ends: readonly End[], lines: readonly Line[], slack: number): End[][] {
  const bundles: End[][] = [];
  for (const end of ends) {
    const near = bundles.filter((bundle) =>
      bundle.some(
        (other) => lines[other.line].plane === lines[end.line].plane && distance(other.at, end.at) <= slack,
      ),
    );
    for (const bundle of near) bundles.splice(bundles.indexOf(bundle), 1);
    bundles.push([...near.flat(), end]);
  }
  return bundles;
}

/** Rule 3: where an end is carried on to; null where it is in no other strip, or rule 4's. */
function carriedOn(
  end: End,
  bundle: readonly End[],
  lines: readonly Line[],
  meetings: readonly (readonly [Place, Place])[],
  slack: number,
): { readonly line: number; readonly s: number; readonly at: Point } | null {
  const members = new Set(bundle.map(({ line }) => line));
  const candidates = lines.flatMap((line, l) => {
    if (line.plane !== lines[end.line].plane) return [];
    if (l === end.line) {
      if (bundle.some((other) => other.line === l && other !== end)) return [];
    } else if (members.has(l)) return [];
    const part = l === end.line ? ownStretch(end, line) : { line, first: 0 };
    if (part === null || !isInStrip(end.at, part.line, slack)) return [];
    if (bundle.some((member) => hasReached(member, l, part.line, lines, meetings, slack))) return [];
    return [{ l, ...part, nearest: nearestOn(end.at, part.line.points) }];
  });
  if (candidates.length === 0) return null;
  const { l, line, first, nearest } = candidates.reduce((a, b) =>
    b.nearest.distance < a.nearest.distance ? b : a,
  );
  // An end within the slack of the centreline has met it there (rule 2): however flat it comes, it is led to no place far ahead.
  const reach = nearest.distance <= slack ? NEAR * slack : 2 * line.halfMm + slack;
  const hit = ahead(end, lines[end.line], line, reach, slack) ?? nearest;
  return { line: l, s: first + hit.s, at: hit.at };
}

/** The channel's own stretch more than two widths back from the end. */
function ownStretch(end: End, line: Line): { readonly line: Line; readonly first: number } | null {
  const length = lengthOf(line.points);
  const back = 4 * line.halfMm;
  if (length <= back) return null;
  const points = end.atStart ? stretch(line.points, back, length) : stretch(line.points, 0, length - back);
  return { line: { ...line, points }, first: end.atStart ? back : 0 };
}

/** Whether the member's stroke meets that centreline before its end, and stays inside that strip from there to the end. */
function hasReached(
  member: End,
  other: number,
  strip: Line,
  lines: readonly Line[],
  meetings: readonly (readonly [Place, Place])[],
  slack: number,
): boolean {
  const { points } = lines[member.line];
  return meetings.some((pair) =>
    [pair, [pair[1], pair[0]]].some(([mine, theirs]) => {
      if (mine.line !== member.line || theirs.line !== other) return false;
      if (Math.abs(mine.from - member.s) <= slack) return crossesBeforeEnd(member, mine.from, lines, strip);
      return isAllIn(stretch(points, member.s, mine.from), strip, slack);
    }),
  );
}

/** Whether a path stays in the strip, grown by the slack. */
function isAllIn(path: readonly Point[], { points, closed, halfMm }: Line, slack: number): boolean {
  const grown = stripOf(points, closed, halfMm + slack);
  return lengthOf(path) <= 2 * slack || firstLeaves(path, grown, slack) >= lengthOf(path) - 2 * slack;
}

/** An end within the slack beyond a centreline that its stroke crosses is an overshoot, if a small one. */
function crossesBeforeEnd(member: End, s: number, lines: readonly Line[], strip: Line): boolean {
  const { points } = lines[member.line];
  if (s === member.s) return false;
  const at = pointAt(points, s);
  return nearestOn(at, strip.points).distance < 1e-9;
}

/** Far enough to meet, at 15° and more, a centreline that is nearer than the slack. */
const NEAR = 4;

/** Where the end, carried on in its own direction, meets the centreline within reach. */
function ahead(
  end: End,
  own: Line,
  other: Line,
  reach: number,
  slack: number,
): { s: number; at: Point } | null {
  const n = own.points.length;
  const u = end.atStart
    ? direction(own.points[1], own.points[0])
    : direction(own.points[n - 2], own.points[n - 1]);
  const far = plus(end.at, u, reach);
  const S = positions(other.points);
  let best: { s: number; at: Point; t: number } | null = null;
  for (let i = 1; i < other.points.length; i++) {
    const [p, q] = [other.points[i - 1], other.points[i]];
    const v = direction(p, q);
    // The slack decides whether: an end or a corner just beside the ray is met.
    const cut = crossing(end.at, far, plus(p, v, -slack), plus(q, v, slack));
    if (cut === null) continue;
    const at = plus(end.at, minus(far, end.at), cut.t);
    const t = distance(end.at, at);
    const share = nearestShare(at, p, q);
    if (best === null || t < best.t) {
      best = { s: S[i - 1] + share * distance(p, q), at: plus(p, minus(q, p), share), t };
    }
  }
  return best;
}

/** Links that share a place (within the slack along a line) are one node. */
function nodesOf(
  kept: readonly Kept[],
  links: readonly (readonly Place[])[],
  wells: readonly (readonly Place[])[],
  slack: number,
): Node[] {
  const groups: { places: Place[]; hole: number | null }[] = [
    ...wells.map((places, hole) => ({ places: [...places], hole })),
    ...links.map((places) => ({ places: [...places], hole: null as number | null })),
  ];
  const areOne = (p: Place, q: Place) =>
    p.line === q.line &&
    kept[p.line].length > slack &&
    (p.bundle === undefined || p.bundle !== q.bundle) &&
    p.from <= q.to + slack &&
    q.from <= p.to + slack;
  for (let i = 0; i < groups.length; i++) {
    for (let j = i + 1; j < groups.length; j++) {
      if (groups[i].hole !== null && groups[j].hole !== null) continue;
      if (!groups[i].places.some((p) => groups[j].places.some((q) => areOne(p, q)))) continue;
      groups[i].places.push(...groups[j].places);
      groups[i].hole ??= groups[j].hole;
      groups.splice(j, 1);
      j = i; // look again at all the later ones
    }
  }
  return groups;
}

/** Rule 4, first sentence, and the last of rule 6: dead pieces inside the strip or beside the well they come from. */
function leaveOutOvershoot(
  kept: readonly Kept[],
  nodes: readonly Node[],
  holes: readonly Hole[],
  slack: number,
): void {
  for (const [l, one] of kept.entries()) {
    if (one.line.closed) continue;
    const mine = placesOn(nodes, l);
    if (mine.length === 0) continue;
    const first = mine[0];
    const last = mine[mine.length - 1];
    const isDead = (s: number, { node, place }: { node: number; place: Place }): boolean => {
      const from = s > place.to ? place.to : place.from;
      const { hole } = nodes[node];
      if (hole !== null) {
        return Math.abs(s - from) <= Math.max(one.line.widthMm, holes[hole].radius) + slack;
      }
      const piece = stretch(one.line.points, from, s);
      const own = ownStretch({ line: l, atStart: s === 0, at: pointAt(one.line.points, s), s }, one.line);
      return nodes[node].places.some((other) => {
        if (other.line !== l) return isAllIn(piece, kept[other.line].line, slack);
        return (
          own !== null && Math.abs(other.from - s) > 4 * one.line.halfMm && isAllIn(piece, own.line, slack)
        );
      });
    };
    if (one.before === null && first.place.from > 0 && isDead(0, first)) one.least = first.place.from;
    if (one.after === null && last.place.to < one.length && isDead(one.length, last))
      one.most = last.place.to;
  }
}

/** Rule 4, second sentence: short end pieces that run along another channel's centreline. */
function leaveOutOverlaps(
  kept: readonly Kept[],
  nodes: readonly Node[],
  bundles: readonly (readonly End[])[],
  slack: number,
): void {
  interface Overlap {
    readonly line: number;
    readonly atStart: boolean;
    readonly along: number;
    /** Positions of the two nodes at its ends. */
    readonly nodes: readonly [number, number];
    readonly cutAt: number;
  }
  const overlaps: Overlap[] = [];
  for (const bundle of bundles) {
    if (bundle.length > 1) continue;
    const [{ line: l, atStart, s }] = bundle;
    const one = kept[l];
    if (one.before !== null && atStart && distance(one.before, one.line.points[0]) > 3 * slack) continue;
    if (one.after !== null && !atStart && distance(one.after, one.line.points.at(-1)!) > 3 * slack) continue;
    const mine = placesOn(nodes, l);
    const order = atStart ? mine : [...mine].reverse();
    const end = order.find(({ place }) => Math.abs((atStart ? place.from : place.to) - s) <= 2 * slack);
    const next = order.find(({ place }) => Math.abs((atStart ? place.from : place.to) - s) > 2 * slack);
    if (next === undefined || nodes[next.node].hole !== null) continue;
    const cutAt = atStart ? next.place.from : next.place.to;
    const piece = stretch(one.line.points, Math.min(one.length, Math.max(0, cutAt)), s);
    for (const other of new Set(nodes[next.node].places.map(({ line }) => line))) {
      const along = other === l ? ownStretch(bundle[0], one.line)?.line : kept[other].line;
      if (along === undefined || !runsAlong(piece, one.line, along)) continue;
      overlaps.push({ line: l, atStart, along: other, nodes: [next.node, end?.node ?? -1], cutAt });
    }
  }
  for (const overlap of overlaps) {
    const twin = overlaps.find(
      (o) => o.line === overlap.along && o.along === overlap.line && o.nodes[0] === overlap.nodes[1],
    );
    const [mine, theirs] = [kept[overlap.line].line.widthMm, kept[overlap.along].line.widthMm];
    const isEqual = areEqual(mine, theirs);
    const isTheOne = twin === undefined || (isEqual ? overlap.line > overlap.along : mine < theirs);
    if (!isTheOne) continue;
    if (overlap.atStart) {
      kept[overlap.line].least = overlap.cutAt;
      kept[overlap.line].before = null;
    } else {
      kept[overlap.line].most = overlap.cutAt;
      kept[overlap.line].after = null;
    }
  }
}

function runsAlong(piece: readonly Point[], own: Line, other: Line): boolean {
  if (lengthOf(piece) > 2 * Math.max(own.widthMm, other.widthMm) + 1e-9) return false;
  const near = Math.min(own.widthMm, other.widthMm) / 2;
  return piece.slice(1).every((q, i) => {
    const p = piece[i];
    if (distance(p, q) === 0) return true;
    const [a, b] = [p, q].map((x) => nearestOn(x, other.points));
    if (a.distance > near || b.distance > near) return false;
    // Beyond the other's end there is nothing to run along.
    if (Math.abs(a.s - b.s) < 0.9 * distance(p, q)) return false;
    const middle = nearestOn(plus(p, minus(q, p), 0.5), other.points);
    const S = positions(other.points);
    const k = Math.max(
      1,
      S.findIndex((s) => s >= middle.s),
    );
    const cosine = Math.abs(dot(direction(p, q), direction(other.points[k - 1], other.points[k])));
    return cosine >= Math.cos((15 * Math.PI) / 180);
  });
}
