import type { Chip } from '../chip/types.ts';
import type { Box } from './map-geometry.ts';
import type { MapHole } from './map-types.ts';

/** From the drawing to paper, both in mm: paper = (drawing − origin) × scale + offset. */
export interface PaperFrame {
  /** Paper mm per drawing mm. */
  readonly scale: number;
  readonly x: (xMm: number) => number;
  readonly y: (yMm: number) => number;
  /** A polyline, x0 y0 x1 y1 … */
  readonly points: (points: ArrayLike<number>) => number[];
  readonly toDrawing: (box: Box) => Box;
}

interface Point {
  readonly x: number;
  readonly y: number;
}

export function paperFrame(origin: Point, scale: number, offset: Point = { x: 0, y: 0 }): PaperFrame {
  const x = (xMm: number): number => (xMm - origin.x) * scale + offset.x;
  const y = (yMm: number): number => (yMm - origin.y) * scale + offset.y;
  return {
    scale,
    x,
    y,
    points: (points) => Array.from(points, (value, i) => (i % 2 === 0 ? x(value) : y(value))),
    toDrawing: (box) => ({
      x: (box.x - offset.x) / scale + origin.x,
      y: (box.y - offset.y) / scale + origin.y,
      width: box.width / scale,
      height: box.height / scale,
    }),
  };
}

/** The chip edge's rings. */
export function edgeOn(frame: PaperFrame, { edge }: Chip): number[][] {
  return (edge?.rings ?? []).map((ring) => frame.points(ring));
}

export function holesOn(frame: PaperFrame, ports: Chip['ports']): MapHole[] {
  return ports.map(({ name, xMm, yMm, radiusMm }) => ({
    name,
    x: frame.x(xMm),
    y: frame.y(yMm),
    radiusMm: radiusMm * frame.scale,
  }));
}
