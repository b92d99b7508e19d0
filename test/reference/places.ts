import type { Line } from './line.ts';
import type { Point } from './points.ts';

export interface Hole {
  readonly name: string;
  readonly at: Point;
  readonly radius: number;
}

export interface Place {
  readonly line: number;
  readonly from: number;
  readonly to: number;
  /** Bundle whose carried-on member reached this place: such places stay nodes of their own. */
  readonly bundle?: number | undefined;
}

export interface End {
  readonly line: number;
  readonly atStart: boolean;
  readonly at: Point;
  readonly s: number;
}

/** A line with what became of it. */
export interface Kept {
  readonly line: Line;
  readonly length: number;
  /** Carried on before the start and beyond the end. */
  before: Point | null;
  after: Point | null;
  /** What is left of it, as positions. */
  least: number;
  most: number;
}

/** A node: the places on lines that are one. */
export interface Node {
  readonly places: Place[];
  readonly hole: number | null;
}

/** Places on a line in order, overlapping ones of a node as one. */
export function placesOn(
  nodes: readonly Node[],
  line: number,
): { readonly node: number; readonly place: Place }[] {
  const all = nodes
    .flatMap(({ places }, node) =>
      places.filter((place) => place.line === line).map((place) => ({ node, place })),
    )
    .sort((a, b) => a.place.from - b.place.from);
  const merged: { node: number; place: Place }[] = [];
  for (const { node, place } of all) {
    const last = merged.findLast((other) => other.node === node);
    const isNext = last !== undefined && last === merged[merged.length - 1];
    if (isNext && place.from - last.place.to < 3e-3) {
      last.place = { ...last.place, to: Math.max(last.place.to, place.to) };
    } else merged.push({ node, place });
  }
  return merged;
}

export const areEqual = (a: number, b: number) => Math.abs(a - b) <= 1e-6 * Math.max(a, b);
export const isSameDuct = (a: Line, b: Line) =>
  areEqual(a.widthMm, b.widthMm) && areEqual(a.depthMm, b.depthMm);
