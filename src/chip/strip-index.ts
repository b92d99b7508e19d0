import { indexBoxes } from '../geometry/box-index.ts';
import { pieceBoxes } from '../geometry/near.ts';
import { toPieces } from '../geometry/pieces.ts';
import { segmentDistance } from '../geometry/segment.ts';
import { addStripStretches, isInPieceStrip, lineTo } from '../geometry/strip.ts';
import type { Channel } from './types.ts';

/** Questions about the etched areas of channels, before they are joined to a network. */
export interface StripIndex {
  /** Channels (indices) whose strip holds the point. */
  readonly channelsAt: (xMm: number, yMm: number) => readonly number[];
  /** Channels with a straight piece whose strip holds the whole disc. */
  readonly channelsRoundDisc: (xMm: number, yMm: number, radiusMm: number) => readonly number[];
  /** Adds the stretches [from, to] of the line, as distances from its first point, that lie in a strip. */
  readonly addStretches: (into: number[], x1Mm: number, y1Mm: number, x2Mm: number, y2Mm: number) => void;
  /** Channels whose strip the line enters. */
  readonly channelsAlong: (x1Mm: number, y1Mm: number, x2Mm: number, y2Mm: number) => readonly number[];
}

/** The widest of some channels (indices), the first of several as wide. */
export function widestOf(channels: readonly Channel[], some: readonly number[]): number {
  return some.reduce((best, one) =>
    channels[one].stripHalfWidthMm > channels[best].stripHalfWidthMm ? one : best,
  );
}

/** One index over all straight pieces; each question costs about the logarithm of their number. */
export function indexStrips(channels: readonly Channel[], slackMm: number): StripIndex {
  const pieces = toPieces(channels);
  const index = indexBoxes(pieceBoxes(pieces, (i) => pieces.half[i] + slackMm));
  const piecesAlong = (x1: number, y1: number, x2: number, y2: number): readonly number[] =>
    index.search(Math.min(x1, x2), Math.min(y1, y2), Math.max(x1, x2), Math.max(y1, y2));
  const channelsOf = (found: readonly number[]): readonly number[] => [
    ...new Set(found.map((i) => pieces.channel[i])),
  ];
  return {
    channelsAt: (x, y) =>
      channelsOf(index.search(x, y, x, y).filter((i) => isInPieceStrip(pieces, i, x, y, slackMm, null))),
    channelsRoundDisc: (x, y, radius) =>
      channelsOf(
        index.search(x, y, x, y).filter((i) => {
          const length = pieces.length[i];
          const ux = (pieces.x2[i] - pieces.x1[i]) / length;
          const uy = (pieces.y2[i] - pieces.y1[i]) / length;
          const along = (x - pieces.x1[i]) * ux + (y - pieces.y1[i]) * uy;
          const across = (y - pieces.y1[i]) * ux - (x - pieces.x1[i]) * uy;
          const room = slackMm - radius;
          return Math.abs(across) <= pieces.half[i] + room && along >= -room && along <= length + room;
        }),
      ),
    addStretches: (into, ...line) => {
      const straight = lineTo(...line);
      for (const i of piecesAlong(...line)) addStripStretches(into, pieces, i, straight, slackMm, null);
    },
    channelsAlong: (...line) =>
      channelsOf(
        piecesAlong(...line).filter((i) => {
          const { x1, y1, x2, y2, half } = pieces;
          return segmentDistance(...line, x1[i], y1[i], x2[i], y2[i]) < half[i] - slackMm;
        }),
      ),
  };
}
