import Flatbush from 'flatbush';
import type { Chip } from '../chip/types.ts';

/** A rectangle, mm; in the drawing's frame or on paper, as the holder says. y down. */
export interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

/** A straight line, x1 y1 x2 y2, mm; in the drawing's frame or on paper, as the holder says. */
export type Line = readonly [number, number, number, number];

/**
 * The straight pieces of all channels' centrelines with one index over their strips, in drawing millimetres. Built once per chip and
 * shared by all its maps and close-ups.
 */
export interface ChipGeometry {
  readonly chip: Chip;
  /** What the maps must hold: strips, holes and the chip edge; all that is drawn where no channel was read. */
  readonly bounds: Box;
  /** Channel of each piece. */
  readonly pieceChannel: Int32Array;
  /** Calls back with pieces whose strip touches the box; stops at the first `true`. Answers whether one did. */
  readonly anyPiece: (box: Box, accept: (piece: number) => boolean) => boolean;
  readonly piecesIn: (box: Box) => readonly number[];
  /** A piece from end to end. */
  readonly pieceLine: (piece: number) => Line;
}

export function chipGeometry(chip: Chip): ChipGeometry {
  const pieceCount = chip.channels.reduce(
    (sum, channel) =>
      sum +
      channel.centrelines.reduce((pieces, { points }) => pieces + Math.max(0, points.length / 2 - 1), 0),
    0,
  );
  const pieces = new Float64Array(4 * pieceCount);
  const pieceChannel = new Int32Array(pieceCount);
  const index = pieceCount === 0 ? null : new Flatbush(pieceCount);
  const bounds = new Bounds();
  let piece = 0;
  chip.channels.forEach((channel, channelIndex) => {
    const reach = stripHalfWidthMm(channel);
    for (const { points } of channel.centrelines) {
      for (let i = 0; i + 3 < points.length; i += 2) {
        const [x1, y1, x2, y2] = [points[i], points[i + 1], points[i + 2], points[i + 3]];
        pieces.set([x1, y1, x2, y2], 4 * piece);
        pieceChannel[piece] = channelIndex;
        piece++;
        const [left, top] = [Math.min(x1, x2) - reach, Math.min(y1, y2) - reach];
        const [right, bottom] = [Math.max(x1, x2) + reach, Math.max(y1, y2) + reach];
        index?.add(left, top, right, bottom);
        bounds.add(left, top, right, bottom);
      }
    }
  });
  index?.finish();
  for (const { xMm, yMm, radiusMm } of chip.ports) {
    bounds.add(xMm - radiusMm, yMm - radiusMm, xMm + radiusMm, yMm + radiusMm);
  }
  const unread = chip.channels.length > 0 ? [] : chip.unreadLines;
  for (const line of [...(chip.edge?.rings ?? []), ...unread]) {
    for (let i = 0; i < line.length; i += 2) bounds.add(line[i], line[i + 1], line[i], line[i + 1]);
  }
  return {
    chip,
    bounds: bounds.box(),
    pieceLine: (piece) => [
      pieces[4 * piece],
      pieces[4 * piece + 1],
      pieces[4 * piece + 2],
      pieces[4 * piece + 3],
    ],
    pieceChannel,
    anyPiece: (box, accept) =>
      index?.collides(box.x, box.y, box.x + box.width, box.y + box.height, accept) ?? false,
    piecesIn: (box) => index?.search(box.x, box.y, box.x + box.width, box.y + box.height) ?? [],
  };
}

/** Half the strip's width; half the drawn width where the depth of an isotropic profile is unknown. */
export function stripHalfWidthMm(channel: {
  readonly stripHalfWidthMm: number;
  readonly drawnWidthMm: number;
}): number {
  if (Number.isFinite(channel.stripHalfWidthMm)) return channel.stripHalfWidthMm;
  return Number.isFinite(channel.drawnWidthMm) ? channel.drawnWidthMm / 2 : 0;
}

class Bounds {
  private left = Number.POSITIVE_INFINITY;
  private top = Number.POSITIVE_INFINITY;
  private right = Number.NEGATIVE_INFINITY;
  private bottom = Number.NEGATIVE_INFINITY;

  add(left: number, top: number, right: number, bottom: number): void {
    this.left = Math.min(this.left, left);
    this.top = Math.min(this.top, top);
    this.right = Math.max(this.right, right);
    this.bottom = Math.max(this.bottom, bottom);
  }

  /** 1 mm × 1 mm when nothing was drawn; never without extent. */
  box(): Box {
    if (this.left > this.right) return { x: 0, y: 0, width: 1, height: 1 };
    const least = 1e-3 * Math.max(this.right - this.left, this.bottom - this.top, 1e-6);
    return {
      x: this.left,
      y: this.top,
      width: Math.max(this.right - this.left, least),
      height: Math.max(this.bottom - this.top, least),
    };
  }
}

/** Whether a line, `reach` wide to each side, touches the box (its bevelled corners taken as square). */
export function lineTouchesBox([x1, y1, x2, y2]: Line, reach: number, box: Box): boolean {
  // Separating axes: the box's own two (the index has tested them, but not for callers without one) and the line's normal.
  const [cx, cy] = [box.x + box.width / 2, box.y + box.height / 2];
  const [hx, hy] = [box.width / 2, box.height / 2];
  if (Math.min(x1, x2) - reach > cx + hx || Math.max(x1, x2) + reach < cx - hx) return false;
  if (Math.min(y1, y2) - reach > cy + hy || Math.max(y1, y2) + reach < cy - hy) return false;
  const [dx, dy] = [x2 - x1, y2 - y1];
  const length = Math.hypot(dx, dy);
  if (length === 0) return true;
  const distance = Math.abs((cx - x1) * dy - (cy - y1) * dx) / length;
  return distance <= reach + (hx * Math.abs(dy) + hy * Math.abs(dx)) / length;
}
