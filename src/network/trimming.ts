import { pieceAt } from '../geometry/pieces.ts';
import type { StripEnds } from '../geometry/strip.ts';
import { type Draft, endPiece } from './draft.ts';
import { isEqualDuct, isEqualSize } from './equal-ducts.ts';
import type { Kept } from './kept.ts';
import { KeptStrips } from './kept-strips.ts';
import { TRIM_BY_RULE, TRIM_TO_WALL } from './node-joints.ts';
import { type NodeStops, type Stops, stopsByNode } from './stops.ts';
import { reachInStrip, StripNeighbours } from './strips.ts';

/** Stretches of centreline that count only in part: columns, sorted by centreline and position; stretches may overlap. */
export interface Trims {
  /** Trims of centreline c are first[c] … first[c + 1] − 1. */
  readonly first: Int32Array;
  readonly from: Float64Array;
  readonly to: Float64Array;
  /** min(1, w/W) · min(1, h/H)³ of the strip that the stretch lies in: rule 5 as written. */
  readonly factorByRule: Float64Array;
  /** With resolved joints: the same, but at a computed joint 1, or 0 for a narrow arm whose length runs to the wall (rule 8). */
  readonly factorResolved: Float64Array;
}

/**
 * Rule 5: at a node, the piece of a channel (w, h) from the node to where its centreline first leaves the strip of
 * another channel that meets there (W, H) counts only as p · min(1, w/W) · min(1, h/H)³. Strips of equal width and depth
 * that meet end to end are one strip.
 *
 * Only strips near the piece at the node are asked, so a node where many channels meet costs no more than their pairs.
 */
export function findTrims(
  draft: Draft,
  stops: Stops,
  kept: Kept,
  trimming: Uint8Array,
): { readonly trims: Trims; readonly strips: StripEnds } {
  const { pieces, near } = draft;
  const byNode = stopsByNode(draft, stops, kept.from, kept.to);
  const strips = uniteEqualStrips(draft, stops, kept, byNode);
  const found: Trim[] = [];
  const memberStamp = new Int32Array(pieces.centrelineCount).fill(-1);
  const triedStamp = new Int32Array(pieces.centrelineCount).fill(-1);
  const neighbours = new StripNeighbours(draft, (c) => strips.group[c]);
  const keptStrips = new KeptStrips(draft, kept, strips.ends);
  let arm = 0;

  for (let node = 0; node + 1 < byNode.first.length; node++) {
    const begin = byNode.first[node];
    const end = byNode.first[node + 1];
    if (end - begin < 2 || allEqual(draft, stops, byNode, begin, end)) continue;
    const grown = grownEnds(draft, stops, byNode, begin, end);
    for (let m = begin; m < end; m++) memberStamp[strips.group[stops.centreline[byNode.stop[m]]]] = node;
    for (let m = begin; m < end; m++) {
      const stop = byNode.stop[m];
      const c = stops.centreline[stop];
      const closed = pieces.centrelineClosed[c] === 1;
      if (closed || stops.from[stop] > kept.from[c])
        trimArm(c, stops.from[stop], -1, node, begin, end, grown);
      if (closed || stops.to[stop] < kept.to[c]) trimArm(c, stops.to[stop], 1, node, begin, end, grown);
    }
  }
  return { trims: toColumns(pieces.centrelineCount, found), strips: strips.ends };

  function trimArm(
    c: number,
    position: number,
    direction: 1 | -1,
    node: number,
    begin: number,
    end: number,
    grown: readonly number[],
  ): void {
    arm++;
    const own = strips.group[c];
    const tryStrip = (group: number): void => {
      if (group === own || memberStamp[group] !== node || triedStamp[group] === arm) return;
      // Channels of two planes meet in a well alone, and share no etched area.
      if (pieces.plane[pieces.firstPiece[group]] !== pieces.plane[pieces.firstPiece[c]]) return;
      triedStamp[group] = arm;
      const factor = trimFactor(draft, c, group);
      if (factor >= 1) return;
      trimAlong(c, position, direction, group, factor, resolved(node, factor), grown);
    };
    if (end - begin <= FEW_MEMBERS) {
      for (let m = begin; m < end; m++) tryStrip(strips.group[stops.centreline[byNode.stop[m]]]);
      return;
    }
    // Where many meet, only those near the arm can hold it.
    const onExtension = position < 0 ? 2 * c : position > pieces.centrelineLength[c] ? 2 * c + 1 : -1;
    if (onExtension >= 0 && draft.ends.joinedTo[onExtension] >= 0) {
      tryStrip(strips.group[draft.ends.joinedTo[onExtension]]);
    }
    for (const piece of piecesAt(c, position, direction)) {
      for (let k = near.firstPair[piece]; k < near.firstPair[piece + 1]; k++) {
        const pair = near.pairOf[k];
        const other = near.pairA[pair] === piece ? near.pairB[pair] : near.pairA[pair];
        tryStrip(strips.group[pieces.centreline[other]]);
      }
    }
  }

  /** Trims from a position on until the strip is left; where the stroke ends at a seam the walk goes on in its other half. */
  function trimAlong(
    c: number,
    position: number,
    direction: 1 | -1,
    group: number,
    factorByRule: number,
    factorResolved: number,
    grown: readonly number[],
  ): void {
    let line = c;
    let from = position;
    let way = direction;
    for (;;) {
      const length = reachInStrip(draft, line, from, way, neighbours, group, keptStrips, grown);
      if (length > 0) addTrim(line, from, way, length, factorByRule, factorResolved);
      if (pieces.centrelineClosed[line] === 1) return;
      const end = way === 1 ? kept.to[line] : kept.from[line];
      const next = strips.ends.seamWith[2 * line + (way === 1 ? 1 : 0)];
      if (next < 0 || Math.abs(from + way * length - end) > draft.slackMm || length <= 0) return;
      line = next >> 1;
      if (line === c) return;
      way = (next & 1) === 0 ? 1 : -1;
      from = way === 1 ? kept.from[line] : kept.to[line];
    }
  }

  /** The piece that an arm starts on; at a vertex both that meet there, since either may see the strip first. */
  function piecesAt(c: number, position: number, direction: 1 | -1): number[] {
    const piece = pieceAt(pieces, c, position);
    if (direction === -1 && position === pieces.start[piece]) {
      if (piece > pieces.firstPiece[c]) return [piece - 1];
      return pieces.centrelineClosed[c] === 1 ? [pieces.firstPiece[c + 1] - 1] : [piece];
    }
    const isPastEnd = direction === 1 && position >= pieces.centrelineLength[c];
    return isPastEnd && pieces.centrelineClosed[c] === 1 ? [pieces.firstPiece[c]] : [piece];
  }

  /** The factor with resolved joints. */
  function resolved(node: number, factor: number): number {
    if (trimming[node] === TRIM_BY_RULE) return factor;
    return trimming[node] === TRIM_TO_WALL ? 0 : 1;
  }

  function addTrim(
    c: number,
    position: number,
    direction: 1 | -1,
    length: number,
    factorByRule: number,
    factorResolved: number,
  ): void {
    const from = direction === 1 ? position : position - length;
    const to = direction === 1 ? position + length : position;
    const total = pieces.centrelineLength[c];
    if (pieces.centrelineClosed[c] === 0) {
      found.push({ c, from, to, factorByRule, factorResolved });
      return;
    }
    found.push({ c, from: Math.max(0, from), to: Math.min(total, to), factorByRule, factorResolved });
    if (from < 0) found.push({ c, from: from + total, to: total, factorByRule, factorResolved });
    if (to > total) found.push({ c, from: 0, to: to - total, factorByRule, factorResolved });
  }
}

/** The end pieces that were carried on to a node: the list of near pairs knows them as drawn. */
function grownEnds(draft: Draft, stops: Stops, byNode: NodeStops, begin: number, end: number): number[] {
  const { pieces } = draft;
  const grown: number[] = [];
  for (let m = begin; m < end; m++) {
    const stop = byNode.stop[m];
    const c = stops.centreline[stop];
    if (stops.from[stop] < 0) grown.push(endPiece(pieces, 2 * c));
    else if (stops.to[stop] > pieces.centrelineLength[c]) grown.push(endPiece(pieces, 2 * c + 1));
  }
  return grown;
}

/** Up to so many stops at a node each is asked. */
const FEW_MEMBERS = 16;

function allEqual(draft: Draft, stops: Stops, byNode: NodeStops, begin: number, end: number): boolean {
  const first = channelAt(draft, stops, byNode.stop[begin]);
  for (let m = begin + 1; m < end; m++) {
    const other = channelAt(draft, stops, byNode.stop[m]);
    if (other !== first && !isEqualDuct(draft.chip.channels[other], draft.chip.channels[first])) return false;
  }
  return true;
}

function channelAt(draft: Draft, stops: Stops, stop: number): number {
  return draft.pieces.centrelineChannel[stops.centreline[stop]];
}

/** min(1, w/W) · min(1, h/H)³; a depth that is not known counts as equal. */
function trimFactor(draft: Draft, c: number, group: number): number {
  const own = draft.chip.channels[draft.pieces.centrelineChannel[c]];
  const other = draft.chip.channels[draft.pieces.centrelineChannel[group]];
  return shareOf(own.ductWidthMm, other.ductWidthMm) * shareOf(own.depthMm, other.depthMm) ** 3;
}

/** min(1, a/b); 1 where the two are equal or one is not known. */
function shareOf(a: number, b: number): number {
  return Number.isNaN(a / b) || isEqualSize(a, b) ? 1 : Math.min(1, a / b);
}

interface UnitedStrips {
  /** A centreline that stands for all centrelines of one strip. */
  readonly group: Int32Array;
  readonly ends: StripEnds;
}

/** Strips of equal width and depth that meet end to end are one strip, and the seam between them is an inner vertex. */
function uniteEqualStrips(draft: Draft, stops: Stops, kept: Kept, byNode: NodeStops): UnitedStrips {
  const { pieces } = draft;
  const group = new Int32Array(pieces.centrelineCount);
  // All centrelines of one channel are one strip.
  for (let c = 0; c < pieces.centrelineCount; c++) {
    group[c] = c > 0 && pieces.centrelineChannel[c] === pieces.centrelineChannel[c - 1] ? group[c - 1] : c;
  }
  const seam = new Uint8Array(2 * pieces.centrelineCount);
  const seamWith = new Int32Array(2 * pieces.centrelineCount).fill(-1);
  const find = (c: number): number => {
    while (group[c] !== c) {
      group[c] = group[group[c]];
      c = group[c];
    }
    return c;
  };
  for (let node = draft.portCount; node + 1 < byNode.first.length; node++) {
    const begin = byNode.first[node];
    const end = byNode.first[node + 1];
    if (end - begin < 2 || countEnds(draft, stops, kept, byNode, begin, end) < 2) continue;
    const heads: number[] = [];
    for (let m = begin; m < end; m++) {
      const e = endAtStop(draft, stops, kept, byNode.stop[m]);
      if (e < 0) continue;
      const channel = draft.chip.channels[pieces.centrelineChannel[e >> 1]];
      const head = heads.find((h) => {
        const other = draft.chip.channels[pieces.centrelineChannel[h >> 1]];
        return other.plane === channel.plane && isEqualDuct(other, channel);
      });
      if (head === undefined) {
        heads.push(e);
        continue;
      }
      // Of three equal ends none goes on in just one other.
      const isThird = seam[head] === 1;
      seamWith[e] = isThird ? -1 : head;
      if (isThird && seamWith[head] >= 0) seamWith[seamWith[head]] = -1;
      seamWith[head] = isThird ? -1 : e;
      seam[head] = 1;
      seam[e] = 1;
      const a = find(head >> 1);
      const b = find(e >> 1);
      if (a < b) group[b] = a;
      else group[a] = b;
    }
  }
  for (let c = 0; c < pieces.centrelineCount; c++) group[c] = find(c);
  return { group, ends: { seam, seamWith } };
}

function countEnds(
  draft: Draft,
  stops: Stops,
  kept: Kept,
  byNode: NodeStops,
  begin: number,
  end: number,
): number {
  let count = 0;
  for (let m = begin; m < end; m++) if (endAtStop(draft, stops, kept, byNode.stop[m]) >= 0) count++;
  return count;
}

/** The end of its centreline that a stop stands at, −1 for an inner stop. */
function endAtStop(draft: Draft, stops: Stops, kept: Kept, stop: number): number {
  const c = stops.centreline[stop];
  if (draft.pieces.centrelineClosed[c] === 1) return -1;
  if (stops.from[stop] - kept.from[c] <= draft.slackMm) return 2 * c;
  if (kept.to[c] - stops.to[stop] <= draft.slackMm) return 2 * c + 1;
  return -1;
}

interface Trim {
  readonly c: number;
  readonly from: number;
  readonly to: number;
  readonly factorByRule: number;
  readonly factorResolved: number;
}

function toColumns(centrelines: number, found: Trim[]): Trims {
  found.sort((a, b) => a.c - b.c || a.from - b.from || a.to - b.to);
  const first = new Int32Array(centrelines + 1);
  for (const trim of found) first[trim.c + 1]++;
  for (let c = 0; c < centrelines; c++) first[c + 1] += first[c];
  return {
    first,
    from: Float64Array.from(found, (trim) => trim.from),
    to: Float64Array.from(found, (trim) => trim.to),
    factorByRule: Float64Array.from(found, (trim) => trim.factorByRule),
    factorResolved: Float64Array.from(found, (trim) => trim.factorResolved),
  };
}

/** Length that counts of the stretch a…b of a centreline: every bit once, with the smallest factor that applies to it. */
export function countedLength(trims: Trims, factors: Float64Array, c: number, a: number, b: number): number {
  const begin = trims.first[c];
  const end = trims.first[c + 1];
  if (begin === end) return b - a;
  const edges = [a, b];
  for (let k = begin; k < end && trims.from[k] < b; k++) {
    if (trims.to[k] <= a) continue;
    if (trims.from[k] > a) edges.push(trims.from[k]);
    if (trims.to[k] < b) edges.push(trims.to[k]);
  }
  if (edges.length > 2) edges.sort((x, y) => x - y);
  let length = 0;
  for (let e = 0; e + 1 < edges.length; e++) {
    const low = edges[e];
    const high = edges[e + 1];
    let factor = 1;
    for (let k = begin; k < end && trims.from[k] < high; k++) {
      if (trims.to[k] > low) factor = Math.min(factor, factors[k]);
    }
    length += (high - low) * factor;
  }
  return length;
}
