import type { Paths64, Rect64 } from 'clipper2-ts';
import { channelPaths, pointOn } from '../../src/findings/paths.ts';
import type { Finding } from '../../src/findings/types.ts';
import { endsAtVertex, type Pieces, startsAtVertex } from '../../src/geometry/pieces.ts';
import type { Network } from '../../src/network/types.ts';
import { runOf } from '../network/chip-of.ts';
import {
  type Area,
  allMeet,
  boxesMeet,
  boxOf,
  commonAreas,
  discPath,
  holds,
  isNearBox,
  isWithin,
  meet,
  middleOf,
  partPaths,
  rectanglePaths,
  type StripPart,
  sectorPaths,
  sizeMm,
  unionAreas,
} from './polygons.ts';

/**
 * "One etched area is one network", decided by polygons: the strips of the drawing, their common areas and their union
 * against the nodes and findings of the program.
 *
 * Every question is asked twice, of strips shrunk by SURE_MM and of strips grown by the slack and SURE_MM: what lies
 * between the two may be answered either way.
 */
export interface EtchedFault {
  readonly what: 'not joined' | 'blocked' | 'parts' | 'joined apart';
  readonly xMm: number;
  readonly yMm: number;
  readonly names: readonly string[];
}

/** More than the polygons are off (ARC_MM and rounding), less than anything a drawing means. */
const SURE_MM = 4e-4;

const COARSE_MM = 5e-3;

export function etchedFaults(network: Network, findings: readonly Finding[]): EtchedFault[] {
  const etched = new Etched(network);
  return [...etched.overlapFaults(findings), ...etched.partFaults(findings), ...etched.joinedApart()];
}

/** A place of a node on a centreline. */
interface Place {
  readonly node: number;
  readonly s: number;
  readonly x: number;
  readonly y: number;
}

/** Blockers that say that an overlap is in no network. */
const HOLDS_A_PLACE = new Set(['merged-walls', 'double-stroke', 'near-miss', 'filled-outline']);

class Etched {
  private readonly network: Network;
  private readonly pieces: Pieces;
  private readonly grown: Paths64[];
  private readonly shrunk: Paths64[];
  private readonly box: Rect64[];
  private readonly places: Place[][];
  private readonly wells: Area[];
  private readonly plane: number[];
  private readonly grownCommon = new Map<string, readonly Area[]>();
  private readonly grow: number;

  constructor(network: Network) {
    this.network = network;
    const { pieces } = network.trace.near;
    this.pieces = pieces;
    this.grow = network.chip.joinWithinMm + SURE_MM;
    this.grown = this.strips(this.grow);
    this.shrunk = this.strips(-SURE_MM);
    this.box = this.grown.map((paths) => boxOf(paths));
    this.places = toPlaces(network);
    this.wells = network.chip.ports.map(({ xMm, yMm, radiusMm }) => {
      const paths = [discPath(xMm, yMm, radiusMm + this.grow, true)];
      return { paths, box: boxOf(paths) };
    });
    this.plane = Array.from({ length: pieces.centrelineCount }, (_, c) => pieces.plane[pieces.firstPiece[c]]);
  }

  /** Each connected common area of two strips, or of two far stretches of one. */
  overlapFaults(findings: readonly Finding[]): EtchedFault[] {
    const faults: EtchedFault[] = [];
    const n = this.pieces.centrelineCount;
    for (let a = 0; a < n; a++) {
      for (let b = a; b < n; b++) {
        if (this.plane[a] !== this.plane[b]) continue;
        if (a === b) {
          for (const area of this.ownCommon(a, -SURE_MM)) {
            if (!this.isJoined(a, a, area) && !this.isHeld(a, a, area, findings))
              faults.push(this.fault('not joined', a, a, area));
          }
          continue;
        }
        if (!boxesMeet(this.box[a], this.box[b])) continue;
        const sure = commonAreas(this.shrunk[a], this.shrunk[b]);
        for (const area of sure) {
          if (this.isJoined(a, b, area)) continue;
          if (!this.isHeld(a, b, area, findings)) faults.push(this.fault('not joined', a, b, area));
        }
        const merged = findings.find(
          ({ rule, names }) =>
            rule === 'merged-walls' && this.namesOf(a, b).every((name) => names.includes(name)),
        );
        if (merged !== undefined && this.isSurelyClean(a, b)) {
          faults.push({ what: 'blocked', xMm: merged.xMm ?? 0, yMm: merged.yMm ?? 0, names: merged.names });
        }
      }
    }
    return faults;
  }

  /** Connected parts of the union of strips, with the wells that open them, against those of the network. */
  partFaults(findings: readonly Finding[]): EtchedFault[] {
    if (findings.some(({ severity, rule }) => severity === 'blocker' && HOLDS_A_PLACE.has(rule))) return [];
    const etched = this.partsOfUnion();
    const network = this.partsOfNetwork();
    const faults: EtchedFault[] = [];
    const first = new Map<number, number>();
    etched.forEach((part, c) => {
      if (part < 0) return;
      const known = first.get(part);
      if (known === undefined) first.set(part, c);
      else if (network[known] !== network[c]) faults.push(this.fault('parts', known, c, null));
    });
    return faults;
  }

  /** Nodes of strips that do not hang together there. */
  joinedApart(): EtchedFault[] {
    const byNode = new Map<number, Set<number>>();
    this.places.forEach((places, c) => {
      for (const { node } of places) byNode.set(node, (byNode.get(node) ?? new Set()).add(c));
    });
    const faults: EtchedFault[] = [];
    for (const [node, set] of byNode) {
      const list = [...set];
      // A stroke that lies wholly in wells makes them one node.
      const wells = this.wells
        .filter((_, p) => this.network.portNode[p] === node)
        .flatMap(({ paths }) => paths);
      const union = new Union(list.length + 1);
      list.forEach((c, k) => {
        if (wells.length > 0 && commonAreas(this.grown[c], wells).length > 0) union.unite(k, list.length);
        for (let m = 0; m < k; m++) if (this.commonOf(c, list[m]).length > 0) union.unite(k, m);
      });
      const bad = list.findIndex((_, k) => union.find(k) !== union.find(0));
      if (bad >= 0) faults.push(this.fault('joined apart', list[0], list[bad], null));
    }
    return faults;
  }

  /** `depth`: how many third strips may pass a joint on from one to the next. */
  private isJoined(a: number, b: number, sure: Area, depth = 2): boolean {
    const common = a === b ? this.ownCommon(a, this.grow) : this.commonOf(a, b);
    const area = common.find((candidate) => holds(candidate, ...pointOf(sure))) ?? sure;
    if (this.wells.some((well) => meet(well, area))) return true;
    if (a === b ? this.meetsItself(a, area) || this.isBend(a, area) : this.holdsNode(a, b, area)) return true;
    if (depth === 0) return false;
    // Strips that reach into the area, and which of them are joined there.
    const local = [a];
    for (let c = 0; c < this.pieces.centrelineCount; c++) {
      if (c === a || (c === b && a !== b) || this.plane[c] !== this.plane[a]) continue;
      if (boxesMeet(this.box[c], area.box) && commonAreas(this.grown[c], area.paths).length > 0)
        local.push(c);
    }
    if (a !== b) local.push(b);
    const union = new Union(local.length);
    for (let k = 0; k < local.length; k++)
      for (let m = 0; m < k; m++) {
        const [c, d] = [local[k], local[m]];
        if ((c === a && d === b) || (c === b && d === a)) continue;
        if (this.commonOf(c, d).some((one) => meet(one, area) && this.isJoined(c, d, one, depth - 1)))
          union.unite(k, m);
      }
    if (a !== b) return union.find(0) === union.find(local.length - 1);
    return local.some((_, k) => k > 0 && union.find(k) === union.find(0));
  }

  /** Whether an area holds a node of both: one place of it is enough, for an end may be carried on into the other. */
  private holdsNode(a: number, b: number, area: Area): boolean {
    for (const one of this.places[a]) {
      const other = this.places[b].find(({ node }) => node === one.node);
      if (other === undefined) continue;
      if (holds(area, one.x, one.y)) return true;
      if (this.places[b].some(({ node, x, y }) => node === one.node && holds(area, x, y))) return true;
    }
    return false;
  }

  /**
   * Whether the stretches that overlap lead to each other round a bend without ever parting: each piece on the way
   * overlaps the next and what faces them.
   */
  private isBend(c: number, area: Area): boolean {
    const { pieces } = this;
    const first = pieces.firstPiece[c];
    const n = pieces.firstPiece[c + 1] - first;
    const closed = pieces.centrelineClosed[c] === 1;
    const strip = Array.from({ length: n }, (_, k) => {
      const paths = unionAreas(pieceParts(pieces, first + k, this.grow)).flatMap((one) => one.paths);
      return { paths, box: boxOf(paths) };
    });
    const near = strip.flatMap((one, k) => (meet(one, area) ? [k] : []));
    const seen = new Set<number>();
    const waiting = near.flatMap((i) => near.filter((j) => j > i + 1).map((j) => i * n + j));
    for (const pair of waiting) {
      const [i, j] = [Math.floor(pair / n), pair % n];
      if (seen.has(pair) || !meet(strip[i], strip[j])) continue;
      seen.add(pair);
      const around = [
        [i, i + 1, j],
        [i, j - 1, j],
        ...(closed
          ? [
              [i, (i + n - 1) % n, j],
              [i, (j + 1) % n, j],
            ]
          : []),
      ];
      for (const [p, q, r] of around) {
        if (!allMeet(strip[p], strip[q], strip[r])) continue;
        const [k, m] = q === (p + 1) % n || q === (p + n - 1) % n ? [q, r] : [p, q];
        if (Math.abs(k - m) <= 1 || (closed && Math.abs(k - m) === n - 1)) return true;
        waiting.push(Math.min(k, m) * n + Math.max(k, m));
      }
    }
    return false;
  }

  private meetsItself(c: number, area: Area): boolean {
    return this.places[c].some(
      (one, k) =>
        holds(area, one.x, one.y) &&
        this.places[c].some(
          (other, m) => m !== k && other.node === one.node && Math.abs(other.s - one.s) > 1e-6,
        ),
    );
  }

  /**
   * Every common area, as generously as can be, is of one straight piece of each and hardly longer than the narrower is
   * wide, and holds a node of both, as strictly as can be; or lies in a third strip. And neither folds over itself.
   */
  private isSurelyClean(a: number, b: number): boolean {
    const { half, firstPiece } = this.pieces;
    const most = 3 * Math.min(half[firstPiece[a]], half[firstPiece[b]]);
    if (this.ownCommon(a, this.grow).length > 0 || this.ownCommon(b, this.grow).length > 0) return false;
    return this.commonOf(a, b).every(
      (area) =>
        this.piecesIn(a, area) === 1 &&
        this.piecesIn(b, area) === 1 &&
        ((sizeMm(area) < most && this.holdsOneNode(a, b, area)) || this.liesInThird(a, b, area)),
    );
  }

  private holdsOneNode(a: number, b: number, area: Area): boolean {
    return this.places[a].some(
      (one) =>
        holds(area, one.x, one.y) &&
        this.places[b].some(
          (other) => other.node === one.node && Math.hypot(other.x - one.x, other.y - one.y) < 1e-6,
        ),
    );
  }

  /** Whether all of an area lies in one third strip of a single piece in which both end. */
  private liesInThird(a: number, b: number, area: Area): boolean {
    return this.shrunk.some(
      (paths, c) =>
        c !== a &&
        c !== b &&
        this.plane[c] === this.plane[a] &&
        paths.length === 1 &&
        this.commonOf(a, c).every((one) => this.holdsNode(a, c, one)) &&
        this.commonOf(b, c).every((one) => this.holdsNode(b, c, one)) &&
        isWithin(area, paths),
    );
  }

  private piecesIn(c: number, area: Area): number {
    let count = 0;
    for (let i = this.pieces.firstPiece[c]; i < this.pieces.firstPiece[c + 1]; i++) {
      if (commonAreas(pieceParts(this.pieces, i, this.grow), area.paths).length > 0) count++;
    }
    return count;
  }

  private isHeld(a: number, b: number, area: Area, findings: readonly Finding[]): boolean {
    const both = this.namesOf(a, b);
    const { half, firstPiece } = this.pieces;
    // Overlaps that follow each other along both strips are one place.
    const within = 4 * (half[firstPiece[a]] + half[firstPiece[b]]);
    return findings.some(
      ({ rule, severity, names, xMm, yMm }) =>
        severity === 'blocker' &&
        HOLDS_A_PLACE.has(rule) &&
        both.every((name) => names.includes(name)) &&
        (rule !== 'merged-walls' || isNearBox(area, xMm ?? Number.NaN, yMm ?? Number.NaN, within)),
    );
  }

  private namesOf(a: number, b: number): string[] {
    const { channels } = this.network.chip;
    return [channels[this.pieces.centrelineChannel[a]].name, channels[this.pieces.centrelineChannel[b]].name];
  }

  private fault(what: EtchedFault['what'], a: number, b: number, area: Area | null): EtchedFault {
    const at = area === null ? pointOn(this.network, a, 0) : null;
    const middle = area === null ? { x: at?.[0] ?? 0, y: at?.[1] ?? 0 } : middleOf(area);
    return { what, xMm: middle.x, yMm: middle.y, names: this.namesOf(a, b) };
  }

  private commonOf(a: number, b: number): readonly Area[] {
    const key = a < b ? `${a} ${b}` : `${b} ${a}`;
    let common = this.grownCommon.get(key);
    if (common === undefined) {
      common = boxesMeet(this.box[a], this.box[b]) ? commonAreas(this.grown[a], this.grown[b]) : [];
      this.grownCommon.set(key, common);
    }
    return common;
  }

  /** Common area of stretches of one centreline more than four widths apart along it; what turns at one vertex is one stretch. */
  private ownCommon(c: number, growMm: number): Area[] {
    const { pieces } = this;
    const chunks = chunksOf(pieces, c).sort((p, q) => p.left - q.left);
    const fourWidths = 8 * pieces.half[pieces.firstPiece[c]];
    const common: Paths64 = [];
    for (let k = 0; k < chunks.length; k++) {
      for (let m = k + 1; m < chunks.length && chunks[m].left <= chunks[k].right; m++) {
        const [one, two] = chunks[k].from < chunks[m].from ? [chunks[k], chunks[m]] : [chunks[m], chunks[k]];
        if (this.areOneStretch(c, one, two, fourWidths)) continue;
        for (const area of commonAreas(partPaths(one.part, growMm), partPaths(two.part, growMm)))
          common.push(...area.paths);
      }
    }
    return common.length === 0 ? [] : unionAreas(common);
  }

  private areOneStretch(c: number, one: Chunk, two: Chunk, fourWidths: number): boolean {
    const { pieces } = this;
    if (one.bottom < two.top || two.bottom < one.top) return true;
    if (two.piece - one.piece <= 1 || two.from - one.to <= fourWidths) return true;
    if (pieces.centrelineClosed[c] === 0) return false;
    if (one.piece === pieces.firstPiece[c] && two.piece === pieces.firstPiece[c + 1] - 1) return true;
    return pieces.centrelineLength[c] - two.to + one.from <= fourWidths;
  }

  private strips(growMm: number): Paths64[] {
    return Array.from({ length: this.pieces.centrelineCount }, (_, c) => stripPaths(this.pieces, c, growMm));
  }

  private partsOfUnion(): number[] {
    // Rounds as coarse as this are well within them: strips that only just touch are the overlaps' affair.
    const strips = this.plane.map((_, c) => stripPaths(this.pieces, c, -SURE_MM, COARSE_MM));
    const n = strips.length;
    const ports = this.network.chip.ports;
    const union = new Union(n + ports.length);
    const first = new Map<string, number>();
    const planes = [...new Set(this.plane)];
    for (const plane of planes) {
      const wells = ports.map(({ xMm, yMm, radiusMm }) =>
        discPath(xMm, yMm, radiusMm - SURE_MM, false, COARSE_MM),
      );
      const own = strips.flatMap((paths, c) => (this.plane[c] === plane ? paths : []));
      // Not the wells: two of them that overlap are the port rules' affair.
      const areas = unionAreas(own);
      strips.forEach((paths, c) => {
        if (this.plane[c] !== plane || paths.length === 0) return;
        const i = this.pieces.firstPiece[c];
        const { x1, y1, x2, y2 } = lineOf(this.pieces, i);
        join(`${plane} ${areas.findIndex((area) => holds(area, (x1 + x2) / 2, (y1 + y2) / 2))}`, c);
      });
      wells.forEach((well, p) => {
        areas.forEach((area, k) => {
          if (commonAreas([well], area.paths).length > 0) join(`${plane} ${k}`, n + p);
        });
      });
    }
    return strips.map((paths, c) => (paths.length === 0 ? -1 : union.find(c)));

    function join(key: string, item: number): void {
      const known = first.get(key);
      if (known === undefined) first.set(key, item);
      else union.unite(known, item);
    }
  }

  private partsOfNetwork(): number[] {
    const { network } = this;
    const n = this.pieces.centrelineCount;
    const { vertexCount, sideVertex } = channelPaths({
      chip: network.chip,
      run: runOf(network.chip),
      network,
      flow: null,
    });
    const union = new Union(n + vertexCount + 2 * network.trace.arcCount + network.nodeCount + 2 * n);
    for (let a = 0; a < network.trace.arcCount; a++) {
      union.unite(network.trace.arcCentreline[a], n + sideVertex[2 * a]);
      union.unite(network.trace.arcCentreline[a], n + sideVertex[2 * a + 1]);
    }
    this.places.forEach((places, c) => {
      for (const { node } of places) union.unite(c, n + node);
    });
    return Array.from({ length: n }, (_, c) => union.find(c));
  }
}

/** Where nodes, and the places where two arcs of one reach go on in each other, lie on each centreline. */
function toPlaces(network: Network): Place[][] {
  const { trace } = network;
  const { pieces } = trace.near;
  const places: Place[][] = Array.from({ length: pieces.centrelineCount }, () => []);
  const add = (c: number, s: number, node: number): void => {
    // An end that was carried on is looked for where it was drawn: it stands in the other strip there.
    const drawn = Math.min(pieces.centrelineLength[c], Math.max(0, s));
    const [x, y] = pointOn(network, c, drawn);
    places[c].push({ node, s, x, y });
  };
  for (let node = 0; node < network.nodeCount; node++) {
    for (let k = trace.firstPlace[node]; k < trace.firstPlace[node + 1]; k++) {
      add(trace.placeCentreline[k], trace.placeFrom[k], node);
      if (trace.placeTo[k] > trace.placeFrom[k]) add(trace.placeCentreline[k], trace.placeTo[k], node);
    }
  }
  const { sideVertex } = channelPaths({ chip: network.chip, run: runOf(network.chip), network, flow: null });
  for (let a = 0; a < trace.arcCount; a++) {
    if (sideVertex[2 * a] >= network.nodeCount)
      add(trace.arcCentreline[a], trace.arcFrom[a], sideVertex[2 * a]);
    if (sideVertex[2 * a + 1] >= network.nodeCount)
      add(trace.arcCentreline[a], trace.arcTo[a], sideVertex[2 * a + 1]);
  }
  // A stroke that the joining rules left out whole has no node of its own: it is joined where it was to be carried on.
  let left = network.nodeCount + trace.arcCount * 2;
  for (let c = 0; c < pieces.centrelineCount; c++) {
    if (trace.firstArc[c + 1] > trace.firstArc[c]) continue;
    for (const end of [2 * c, 2 * c + 1]) {
      const other = trace.endJoinedTo[end];
      if (other < 0) continue;
      add(c, end === 2 * c ? 0 : pieces.centrelineLength[c], left);
      const { x, y } = places[c][places[c].length - 1];
      places[other].push({ node: left++, s: Number.NaN, x, y });
    }
  }
  return places;
}

/** Rectangles and rounds of a whole strip. The round is a sector: the rectangles hold the rest, and nothing reaches beyond a square end. */
function stripPaths(pieces: Pieces, c: number, growMm: number, arcMm?: number): Paths64 {
  const first = pieces.firstPiece[c];
  const last = pieces.firstPiece[c + 1] - 1;
  const paths: Paths64 = [];
  const half = pieces.half[first] + growMm;
  if (half <= 0) return paths;
  for (let i = first; i <= last; i++) {
    const bare = { ...lineOf(pieces, i), half: pieces.half[i] };
    paths.push(...rectanglePaths(bare, growMm, startsAtVertex(pieces, i), endsAtVertex(pieces, i)));
    if (!endsAtVertex(pieces, i)) continue;
    paths.push(...sectorPaths(bare, lineOf(pieces, i < last ? i + 1 : first), half, growMm > 0, arcMm));
  }
  return paths;
}

function lineOf(pieces: Pieces, i: number) {
  return { x1: pieces.x1[i], y1: pieces.y1[i], x2: pieces.x2[i], y2: pieces.y2[i] };
}

function pieceParts(pieces: Pieces, i: number, growMm: number): Paths64 {
  return partPaths(
    {
      x1: pieces.x1[i],
      y1: pieces.y1[i],
      x2: pieces.x2[i],
      y2: pieces.y2[i],
      half: pieces.half[i],
      roundStart: startsAtVertex(pieces, i),
      roundEnd: endsAtVertex(pieces, i),
    },
    growMm,
  );
}

interface Chunk {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
  readonly piece: number;
  readonly from: number;
  readonly to: number;
  readonly part: StripPart;
}

/** A centreline cut into parts no longer than half its width. */
function chunksOf(pieces: Pieces, c: number): Chunk[] {
  const chunks: Chunk[] = [];
  for (let i = pieces.firstPiece[c]; i < pieces.firstPiece[c + 1]; i++) {
    const count = Math.min(400, Math.max(1, Math.ceil(pieces.length[i] / pieces.half[i])));
    for (let k = 0; k < count; k++) {
      const [t, u] = [k / count, (k + 1) / count];
      const dx = pieces.x2[i] - pieces.x1[i];
      const dy = pieces.y2[i] - pieces.y1[i];
      const [ax, ay] = [pieces.x1[i] + t * dx, pieces.y1[i] + t * dy];
      const [bx, by] = [pieces.x1[i] + u * dx, pieces.y1[i] + u * dy];
      // More than any growth.
      const margin = pieces.half[i] + 0.01;
      chunks.push({
        left: Math.min(ax, bx) - margin,
        right: Math.max(ax, bx) + margin,
        top: Math.min(ay, by) - margin,
        bottom: Math.max(ay, by) + margin,
        piece: i,
        from: pieces.start[i] + t * pieces.length[i],
        to: pieces.start[i] + u * pieces.length[i],
        part: {
          x1: ax,
          y1: ay,
          x2: bx,
          y2: by,
          half: pieces.half[i],
          roundStart: k === 0 && startsAtVertex(pieces, i) && !isNearEnd(pieces, c, pieces.start[i]),
          roundEnd:
            k === count - 1 &&
            endsAtVertex(pieces, i) &&
            !isNearEnd(pieces, c, pieces.start[i] + pieces.length[i]),
        },
      });
    }
  }
  return chunks;
}

/** Whether a disc at a position would reach beyond an end that is square; without it the strip lacks a sliver at most. */
function isNearEnd(pieces: Pieces, c: number, s: number): boolean {
  const half = pieces.half[pieces.firstPiece[c]];
  return pieces.centrelineClosed[c] === 0 && (s < half || pieces.centrelineLength[c] - s < half);
}

function pointOf({ paths }: Area): [number, number] {
  return [paths[0][0].x / 1e6, paths[0][0].y / 1e6];
}

class Union {
  private readonly parent: Int32Array;

  constructor(count: number) {
    this.parent = Int32Array.from({ length: count }, (_, k) => k);
  }

  find(k: number): number {
    let root = k;
    while (this.parent[root] !== root) root = this.parent[root];
    this.parent[k] = root;
    return root;
  }

  unite(a: number, b: number): void {
    this.parent[this.find(a)] = this.find(b);
  }
}
