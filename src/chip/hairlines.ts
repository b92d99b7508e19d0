import { remembered } from '../by-key.ts';
import type { Centreline } from '../layout/types.ts';
import { DEFAULT_HAIRLINE_MM } from './defaults.ts';
import { indexRings, type RingIndex } from './rings.ts';
import type { Channel, Port } from './types.ts';

/**
 * Closed hairlines that are drawn round what is to be etched, not along its middle: no channel joins their centreline, and they
 * hold a port or another such line. Where there is one, all that no channel joins are taken for such.
 *
 * A line holds a port that lies within it; and one whose well it touches where the area within the line is narrower than the
 * well is wide, for then the area leads into the well (a ring of channel through wells is far wider than they are).
 * @returns each such line with the ports that it holds or whose wells it touches
 * Cost: n log n in the corners of all centrelines where there is any such line, linear where there is none.
 */
export function findHairlines(
  channels: readonly Channel[],
  ports: readonly Port[],
  slackMm: number,
): ReadonlyMap<Channel, readonly Port[]> {
  const lines: Line[] = [];
  for (const channel of channels) {
    if (channel.dataChannel || !(channel.drawnWidthMm <= DEFAULT_HAIRLINE_MM)) continue;
    for (const line of channel.centrelines) {
      if (closes(line, slackMm)) lines.push({ channel, points: line.points });
    }
  }
  if (lines.length === 0) return new Map();
  const index = indexRings(lines.map(({ points }) => [points]));
  const meets = lines.map(({ points }, i) => linesMet(points, index).filter((other) => other !== i));
  const joined = joinedLines(lines, channels, meets, index, slackMm);
  const found = new Set<number>();
  const inside = lines.map(({ points }) => index.groupsRound(points[0], points[1]));
  for (const [i, others] of inside.entries()) {
    if (joined.has(i)) continue;
    for (const other of others) if (other !== i && !joined.has(other)) found.add(other);
  }
  const held = lines.map((): Port[] => []);
  for (const port of ports) {
    const { xMm, yMm, radiusMm } = port;
    const at = new Set(index.groupsWithin(xMm, yMm, slackMm));
    const round = index.groupsRound(xMm, yMm);
    const touched = index.groupsWithin(xMm, yMm, radiusMm + slackMm);
    for (const line of new Set([...round, ...touched])) {
      held[line].push(port);
      const isWithin = round.includes(line) && !at.has(line);
      const isNarrow = touched.includes(line) && widthWithin(lines[line].points) < 2 * radiusMm;
      if (!joined.has(line) && (isWithin || isNarrow)) found.add(line);
    }
  }
  // Where one line is an outline, so are all that nothing joins.
  if (found.size > 0) for (let line = 0; line < lines.length; line++) if (!joined.has(line)) found.add(line);
  const outlines = new Map<Channel, Port[]>();
  for (const line of [...found].sort((a, b) => a - b))
    remembered(outlines, lines[line].channel, () => []).push(...held[line]);
  return outlines;
}

interface Line {
  readonly channel: Channel;
  readonly points: Float64Array;
}

/** Drawn closed, or drawn back to where it began. */
function closes({ points, closed }: Centreline, slackMm: number): boolean {
  const n = points.length;
  if (n < 8) return false;
  return closed || Math.hypot(points[n - 2] - points[0], points[n - 1] - points[1]) <= slackMm;
}

function linesMet(points: Float64Array, index: RingIndex): readonly number[] {
  const met = new Set<number>();
  for (let i = 0; i + 3 < points.length; i += 2) {
    for (const line of index.groupsCrossed(points[i], points[i + 1], points[i + 2], points[i + 3]))
      met.add(line);
  }
  return [...met];
}

/** Lines that a channel crosses, meets or ends on; and those that such a line meets, for it is a channel then. */
function joinedLines(
  lines: readonly Line[],
  channels: readonly Channel[],
  meets: readonly (readonly number[])[],
  index: RingIndex,
  slackMm: number,
): ReadonlySet<number> {
  const own = new Set(lines.map(({ points }) => points));
  const joined = new Set<number>();
  for (const channel of channels) {
    for (const { points } of channel.centrelines) {
      if (own.has(points)) continue;
      for (const line of linesMet(points, index))
        if (lines[line].channel.plane === channel.plane) joined.add(line);
      for (const [x, y] of [points.subarray(0, 2), points.subarray(-2)]) {
        // Half the widest hairline; the strip of a narrower one is asked for by itself.
        for (const line of index.groupsWithin(x, y, DEFAULT_HAIRLINE_MM / 2 + slackMm)) {
          const { channel: other, points: ring } = lines[line];
          if (other.plane !== channel.plane || joined.has(line)) continue;
          const reach = other.stripHalfWidthMm + slackMm;
          if (indexRings([[ring]]).groupsWithin(x, y, reach).length > 0) joined.add(line);
        }
      }
    }
  }
  // What such a line meets is joined by a channel too.
  const pending = [...joined];
  for (let line = pending.pop(); line !== undefined; line = pending.pop()) {
    for (const next of meets[line]) {
      if (joined.has(next)) continue;
      joined.add(next);
      pending.push(next);
    }
  }
  return joined;
}

/** Width of a band of the same area and the same length of wall: 2 A / P. */
function widthWithin(points: Float64Array): number {
  let doubleArea = 0;
  let length = 0;
  for (let i = 0; i + 3 < points.length; i += 2) {
    const [dx, dy] = [points[i + 2] - points[i], points[i + 3] - points[i + 1]];
    // About the first point, so that a drawing far from the origin keeps its digits.
    doubleArea += (points[i] - points[0]) * dy - (points[i + 1] - points[1]) * dx;
    length += Math.hypot(dx, dy);
  }
  return Math.abs(doubleArea) / length;
}
