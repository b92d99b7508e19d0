import { firstOfGroups } from '../groups.ts';

/** At a node rule 5 is applied as written; not at all (lengths run to the meeting point); or up to the wider strip's wall. */
export const TRIM_BY_RULE = 0;
export const TRIM_NOTHING = 1;
export const TRIM_TO_WALL = 2;

/** A stretch of centreline that counts only in part. */
export interface Trim {
  readonly centreline: number;
  readonly from: number;
  readonly to: number;
  /** min(1, w/W) · min(1, h/H)³ of the strip that the stretch lies in: rule 5 as written. */
  readonly factorByRule: number;
  /** With resolved joints: the same, but at a computed joint 1, or 0 for a narrow arm whose length runs to the wall (rule 8). */
  readonly factorResolved: number;
}

/** Trims as columns, sorted by centreline and position; they may overlap. */
export interface Trims {
  /** Trims of centreline c are first[c] … first[c + 1] − 1. */
  readonly first: Int32Array;
  readonly from: Float64Array;
  readonly to: Float64Array;
  readonly factorByRule: Float64Array;
  readonly factorResolved: Float64Array;
}

/** Sorts trims into columns. */
export function toTrims(centrelineCount: number, found: Trim[]): Trims {
  found.sort((a, b) => a.centreline - b.centreline || a.from - b.from || a.to - b.to);
  return {
    first: firstOfGroups(
      centrelineCount,
      found.map((trim) => trim.centreline),
    ),
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
