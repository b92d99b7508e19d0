import Flatbush from 'flatbush';
import { toPieces } from '../geometry/pieces.ts';
import { segmentDistance } from '../geometry/segment.ts';
import { addStripStretches, isInPieceStrip } from '../geometry/strip.ts';
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

/** One index over all straight pieces; each question costs about the logarithm of their number. */
export function indexStrips(channels: readonly Channel[], slackMm: number): StripIndex {
  const pieces = toPieces(channels);
  const index = new Flatbush(Math.max(1, pieces.count));
  for (let i = 0; i < pieces.count; i++) {
    const reach = pieces.half[i] + slackMm;
    index.add(
      Math.min(pieces.x1[i], pieces.x2[i]) - reach,
      Math.min(pieces.y1[i], pieces.y2[i]) - reach,
      Math.max(pieces.x1[i], pieces.x2[i]) + reach,
      Math.max(pieces.y1[i], pieces.y2[i]) + reach,
    );
  }
  if (pieces.count === 0) index.add(0, 0, 0, 0);
  index.finish();
  const search = (x1: number, y1: number, x2: number, y2: number): readonly number[] =>
    pieces.count === 0 ? [] : index.search(x1, y1, x2, y2);
  const channelsOf = (found: readonly number[]): readonly number[] => [
    ...new Set(found.map((i) => pieces.channel[i])),
  ];
  return {
    channelsAt: (x, y) =>
      channelsOf(search(x, y, x, y).filter((i) => isInPieceStrip(pieces, i, x, y, slackMm, null))),
    channelsRoundDisc: (x, y, radius) =>
      channelsOf(
        search(x, y, x, y).filter((i) => {
          const length = pieces.length[i];
          const ux = (pieces.x2[i] - pieces.x1[i]) / length;
          const uy = (pieces.y2[i] - pieces.y1[i]) / length;
          const along = (x - pieces.x1[i]) * ux + (y - pieces.y1[i]) * uy;
          const across = (y - pieces.y1[i]) * ux - (x - pieces.x1[i]) * uy;
          const room = slackMm - radius;
          return Math.abs(across) <= pieces.half[i] + room && along >= -room && along <= length + room;
        }),
      ),
    addStretches: (into, x1, y1, x2, y2) => {
      const box = [Math.min(x1, x2), Math.min(y1, y2), Math.max(x1, x2), Math.max(y1, y2)] as const;
      for (const i of search(...box)) addStripStretches(into, pieces, i, x1, y1, x2, y2, slackMm, null);
    },
    channelsAlong: (x1, y1, x2, y2) =>
      channelsOf(
        search(Math.min(x1, x2), Math.min(y1, y2), Math.max(x1, x2), Math.max(y1, y2)).filter((i) => {
          const distance = segmentDistance(
            x1,
            y1,
            x2,
            y2,
            pieces.x1[i],
            pieces.y1[i],
            pieces.x2[i],
            pieces.y2[i],
          );
          return distance < pieces.half[i] - slackMm;
        }),
      ),
  };
}
