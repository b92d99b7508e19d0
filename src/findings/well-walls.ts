import { LIMIT_SLACK } from '../chip/limits.ts';
import { FINE_MM } from '../geometry/curve.ts';
import { type Closest, type Line, lineBetween, nearer, pointLine, stretchWithin } from './closest.ts';
import type { FindingContext } from './context.ts';
import { hasPlaceOn } from './meets.ts';
import { nearMisses } from './misses.ts';
import { gapToHole, lineOf } from './painted.ts';
import { isNearPort } from './paths.ts';

/** Too little material between a channel and a well that it does not meet there. */
interface WellWall {
  readonly channel: number;
  readonly port: number;
  readonly gapMm: number;
  readonly limitMm: number;
  readonly mark: Line;
}

/**
 * Looks round every well for channels nearer than their limit (mm, null for none) that do not lead to it by a way shorter
 * than 4 × (width + limit). Cost: one index query per port.
 */
export function findWellWalls(
  context: FindingContext,
  limitOf: (channel: number) => number | null,
): WellWall[] {
  const { chip } = context;
  const limits = chip.channels.map((_, channel) => limitOf(channel) ?? 0);
  const widest = limits.reduce((most, limit) => Math.max(most, limit), 0);
  if (widest === 0) return [];
  const missed = new Set(
    nearMisses(context).flatMap(({ tip, port }) => tip.ends.map((end) => `${end >> 1} ${port}`)),
  );
  return chip.ports.flatMap((_, port) =>
    stretchesNear(context, port, limits, widest)
      .filter((stretch) => !isMeant(context, port, stretch) && !missed.has(`${stretch.centreline} ${port}`))
      .map(({ channel, limitMm, gap }) => {
        return { channel, port, gapMm: gap.distanceMm, limitMm, mark: lineBetween(gap) };
      }),
  );
}

/** A stretch of a centreline that is nearer to a well than its limit, and where it is nearest. */
interface Stretch {
  readonly centreline: number;
  readonly channel: number;
  readonly limitMm: number;
  /** What leads to the well by a shorter way is meant to be near, mm. */
  readonly apartMm: number;
  gap: Closest;
  from: number;
  to: number;
}

/** Pieces that follow each other on a centreline are one stretch. */
function stretchesNear(
  { chip, network }: FindingContext,
  p: number,
  limits: readonly number[],
  widest: number,
): Stretch[] {
  const { pieces, index } = network.trace.near;
  const port = chip.ports[p];
  const { xMm, yMm, radiusMm } = port;
  const r = radiusMm + widest;
  const stretches: Stretch[] = [];
  for (const i of index.search(xMm - r, yMm - r, xMm + r, yMm + r).sort((one, two) => one - two)) {
    const channel = pieces.channel[i];
    const limitMm = limits[channel];
    // A curve may lie beside its pieces: round a well exactly at the limit it is not below it.
    const limit = limitMm * (1 - LIMIT_SLACK) - Math.min(pieces.bulge[i], FINE_MM);
    const gap = gapToHole(chip, pieces, i, port);
    if (gap.distanceMm >= limit) continue;
    const within = radiusMm + pieces.half[i] + limit + pieces.bulge[i];
    const [low, high] = stretchWithin(lineOf(pieces, i), pointLine(xMm, yMm), within) ?? [0, 0];
    const [from, to] = [pieces.start[i] + low, pieces.start[i] + high];
    const centreline = pieces.centreline[i];
    const last = stretches.at(-1);
    if (last !== undefined && last.centreline === centreline && from <= last.to + last.apartMm / 2) {
      last.gap = nearer(last.gap, gap);
      last.from = Math.min(last.from, from);
      last.to = Math.max(last.to, to);
    } else {
      const apartMm = 4 * (2 * pieces.half[i] + limitMm);
      stretches.push({ centreline, channel, limitMm, apartMm, gap, from, to });
    }
  }
  return stretches;
}

/** Whether the centreline comes to the well within the stretch, or all of that is near the well along the channels too. */
function isMeant(context: FindingContext, port: number, { centreline, from, to, apartMm }: Stretch): boolean {
  const { network } = context;
  return (
    hasPlaceOn(network, network.portNode[port], centreline, from, to) ||
    [from, (from + to) / 2, to].every((s) => isNearPort(context, { c: centreline, s }, port, apartMm))
  );
}
