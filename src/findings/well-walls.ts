import { LIMIT_SLACK } from '../chip/limits.ts';
import { FINE_MM } from '../geometry/curve.ts';
import { type Closest, type Line, stretchWithin } from './closest.ts';
import type { FindingContext } from './context.ts';
import { nearMisses } from './misses.ts';
import { gapToHole, lineOf } from './painted.ts';
import { channelPaths } from './paths.ts';

/** Too little material between a channel and a well that it does not meet there. */
export interface WellWall {
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
  const { chip, network } = context;
  const { near } = network.trace;
  const { pieces, index } = near;
  const walls: WellWall[] = [];
  if (chip.ports.length === 0) return walls;
  const limits = chip.channels.map((_, channel) => limitOf(channel) ?? 0);
  const widest = limits.reduce((most, limit) => Math.max(most, limit), 0);
  if (widest === 0) return walls;
  const missed = new Set(
    nearMisses(context)
      .filter(({ port }) => port >= 0)
      .flatMap(({ tip, port }) => tip.ends.map((end) => `${end >> 1} ${port}`)),
  );
  chip.ports.forEach((port, p) => {
    const r = port.radiusMm + widest;
    const close: { piece: number; gap: Closest; from: number; to: number }[] = [];
    for (const i of index.search(port.xMm - r, port.yMm - r, port.xMm + r, port.yMm + r)) {
      // A curve may lie beside its pieces: round a well exactly at the limit it is not below it.
      const limit = limits[pieces.channel[i]] * (1 - LIMIT_SLACK) - Math.min(pieces.bulge[i], FINE_MM);
      const gap = gapToHole(chip, pieces, i, port);
      if (gap.distanceMm >= limit) continue;
      const within = stretchWithin(
        lineOf(pieces, i),
        [port.xMm, port.yMm, port.xMm, port.yMm],
        port.radiusMm + pieces.half[i] + limit + pieces.bulge[i],
      ) ?? [0, 0];
      close.push({
        piece: i,
        gap,
        from: pieces.start[i] + within[0],
        to: pieces.start[i] + within[1],
      });
    }
    close.sort((one, two) => one.piece - two.piece);
    for (let k = 0; k < close.length; ) {
      const c = pieces.centreline[close[k].piece];
      const channel = pieces.channel[close[k].piece];
      const limitMm = limits[channel];
      const apartMm = 4 * (2 * pieces.half[close[k].piece] + limitMm);
      let thinnest = close[k].gap;
      let { from, to } = close[k];
      let next = k + 1;
      for (; next < close.length && pieces.centreline[close[next].piece] === c; next++) {
        if (close[next].from > to + apartMm / 2) break;
        if (close[next].gap.distanceMm < thinnest.distanceMm) thinnest = close[next].gap;
        from = Math.min(from, close[next].from);
        to = Math.max(to, close[next].to);
      }
      k = next;
      if (meetsThere(c, p, from, to) || isNearAlong(c, p, from, to, apartMm)) continue;
      if (missed.has(`${c} ${p}`)) continue;
      const { distanceMm, x1, y1, x2, y2 } = thinnest;
      walls.push({ channel, port: p, gapMm: distanceMm, limitMm, mark: [x1, y1, x2, y2] });
    }
  });
  return walls;

  /** Whether the centreline comes to the port's node within the stretch. */
  function meetsThere(c: number, p: number, from: number, to: number): boolean {
    const { firstPlace, placeCentreline, placeFrom, placeTo } = network.trace;
    const node = network.portNode[p];
    for (let k = firstPlace[node]; k < firstPlace[node + 1]; k++) {
      if (placeCentreline[k] === c && placeFrom[k] <= to && placeTo[k] >= from) return true;
    }
    return false;
  }

  /** Whether all of the stretch is near the well along the channels too. */
  function isNearAlong(c: number, p: number, from: number, to: number, apartMm: number): boolean {
    const paths = channelPaths(context);
    const { arcFrom, arcTo } = network.trace;
    return [from, (from + to) / 2, to].every((s) => {
      const arc = paths.arcAt(c, s);
      if (arc < 0) return true;
      const start = paths.between(network.portNode[p], paths.sideVertex[2 * arc], apartMm);
      const end = paths.between(network.portNode[p], paths.sideVertex[2 * arc + 1], apartMm);
      return Math.min(start + Math.abs(s - arcFrom[arc]), end + Math.abs(s - arcTo[arc])) <= apartMm;
    });
  }
}
