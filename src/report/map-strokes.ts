import { COLOUR_STEPS, type ColourScale, NO_VALUE_COLOUR, PALETTE } from './colour-scale.ts';
import type { PaperFrame } from './map-frame.ts';
import { type ChipGeometry, stripHalfWidthMm } from './map-geometry.ts';
import type { MapReach, MapStroke } from './map-types.ts';
import type { MapQuantity } from './reach-values.ts';
import type { ReportedCase } from './report.ts';

/** Least width that a strip is painted with, paper mm. */
const LEAST_MM = 0.3;
export const RIM_COLOUR = '#303030';

/** Width that a channel's strip is painted with, paper mm. */
export function paintedWidthMm(channel: Parameters<typeof stripHalfWidthMm>[0], scale: number): number {
  return Math.max(2 * stripHalfWidthMm(channel) * scale, LEAST_MM);
}

/** The channels as drawn, under the colours, each with a dark rim. */
export function groundStrokes({ chip }: ChipGeometry, frame: PaperFrame): MapStroke[] {
  const rim = 0.18;
  return chip.channels.flatMap((channel) =>
    channel.centrelines.map(({ points }) => ({
      points: thinned(frame.points(points)),
      widthMm: paintedWidthMm(channel, frame.scale) + rim,
      colour: RIM_COLOUR,
      cap: channel.linecap,
    })),
  );
}

/** Each reach in its colour; by pressure in as many as it runs through. */
export function reachStrokes(
  one: ReportedCase,
  frame: PaperFrame,
  values: Float64Array,
  scale: ColourScale | null,
  quantity: MapQuantity,
): MapReach[] {
  const { network } = one;
  const reaches: MapReach[] = [];
  // gradients along a reach only while they can be seen and paid for
  const graded = quantity === 'pressure' && network.segmentCount <= 20_000;
  for (let reach = 0; reach < network.reachCount; reach++) {
    const channel = network.chip.channels[network.reachChannel[reach]];
    const widthMm = paintedWidthMm(channel, frame.scale);
    const pieces = graded
      ? gradedPieces(one, reach, frame, scale)
      : [wholePiece(one, reach, frame, values, scale)];
    reaches.push({
      reach,
      strokes: pieces.map(({ step, points }) => ({
        points: thinned(points),
        widthMm,
        colour: step < 0 ? NO_VALUE_COLOUR : PALETTE[step],
        cap: 'butt',
      })),
    });
  }
  return reaches;
}

interface Piece {
  readonly step: number;
  readonly points: number[];
}

function wholePiece(
  { network }: ReportedCase,
  reach: number,
  frame: PaperFrame,
  values: Float64Array,
  scale: ColourScale | null,
): Piece {
  const points: number[] = [];
  for (let segment = network.firstSegment[reach]; segment < network.firstSegment[reach + 1]; segment++) {
    addPoint(points, frame.x(network.segmentX1[segment]), frame.y(network.segmentY1[segment]));
    addPoint(points, frame.x(network.segmentX2[segment]), frame.y(network.segmentY2[segment]));
  }
  return { step: scale?.step(values[reach]) ?? -1, points };
}

/** The reach cut where its colour steps, pressure falling evenly with duct length. */
function gradedPieces(
  { network, flow }: ReportedCase,
  reach: number,
  frame: PaperFrame,
  scale: ColourScale | null,
): Piece[] {
  const startPa = flow.nodePressure[network.reachFrom[reach]];
  const dropPa = startPa - flow.nodePressure[network.reachTo[reach]];
  const [first, end] = [network.firstSegment[reach], network.firstSegment[reach + 1]];
  let totalMm = 0;
  for (let segment = first; segment < end; segment++) totalMm += network.segmentDuctMm[segment];
  const pieces: Piece[] = [];
  let doneMm = 0;
  for (let segment = first; segment < end; segment++) {
    const lengthMm = network.segmentDuctMm[segment];
    const at = (share: number): number => startPa - dropPa * ((doneMm + share * lengthMm) / totalMm);
    const steps = scale === null ? 1 : Math.abs(scale.step(at(0)) - scale.step(at(1))) + 1;
    const [x1, y1] = [frame.x(network.segmentX1[segment]), frame.y(network.segmentY1[segment])];
    const [x2, y2] = [frame.x(network.segmentX2[segment]), frame.y(network.segmentY2[segment])];
    const parts = Math.max(1, Math.min(COLOUR_STEPS, steps));
    for (let part = 0; part < parts; part++) {
      const [from, to] = [part / parts, (part + 1) / parts];
      const step = scale?.step(at((from + to) / 2)) ?? -1;
      const ends = [x1 + (x2 - x1) * from, y1 + (y2 - y1) * from, x1 + (x2 - x1) * to, y1 + (y2 - y1) * to];
      let last = pieces.at(-1);
      if (last === undefined || last.step !== step) {
        // the earlier colour runs on under the next, so that no seam shows between them
        if (last !== undefined) addPiece(last.points, ends);
        last = { step, points: [] };
        pieces.push(last);
      }
      addPiece(last.points, ends);
    }
    doneMm += lengthMm;
  }
  return pieces;
}

function addPiece(points: number[], [x1, y1, x2, y2]: readonly number[]): void {
  addPoint(points, x1, y1);
  addPoint(points, x2, y2);
}

function addPoint(points: number[], x: number, y: number): void {
  const n = points.length;
  if (n >= 2 && points[n - 2] === x && points[n - 1] === y) return;
  points.push(x, y);
}

/** Leaves out points nearer than 0.04 mm to the last kept one; keeps both ends. */
export function thinned(points: readonly number[]): number[] {
  if (points.length <= 4) return [...points];
  const kept = [points[0], points[1]];
  for (let i = 2; i < points.length - 2; i += 2) {
    const far = Math.hypot(points[i] - kept[kept.length - 2], points[i + 1] - kept[kept.length - 1]) >= 0.04;
    if (far) kept.push(points[i], points[i + 1]);
  }
  kept.push(points[points.length - 2], points[points.length - 1]);
  return kept;
}
