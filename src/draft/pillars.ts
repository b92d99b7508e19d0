import Flatbush from 'flatbush';
import { indexStrips } from '../chip/strip-index.ts';
import type { Channel, Chip, Port } from '../chip/types.ts';

/** Circles of port size that look like pillars in a channel. */
export interface PillarField {
  readonly channel: Channel;
  readonly pillars: readonly Port[];
}

/** Fewer alike in one channel may be ports. */
const FEWEST = 3;

/**
 * Circles that lie wholly in one channel, beside each other and alike (to a per cent), with no channel's end in them. Ports may
 * look so too, but then few: where fewer than two other ports would be left, they are ports.
 */
export function pillarFields(chip: Chip): readonly PillarField[] {
  const { channels, ports, joinWithinMm } = chip;
  if (channels.length === 0 || ports.length < FEWEST + 2) return [];
  const strips = indexStrips(channels, joinWithinMm);
  const holdsEnd = endFinder(channels);
  const groups = new Map<string, { channel: Channel; pillars: Port[] }>();
  for (const port of ports) {
    const { xMm, yMm, radiusMm } = port;
    const round = strips.channelsRoundDisc(xMm, yMm, radiusMm);
    if (round.length === 0 || holdsEnd(port)) continue;
    const widest = round.reduce((best, one) =>
      channels[one].stripHalfWidthMm > channels[best].stripHalfWidthMm ? one : best,
    );
    const key = `${widest} ${Math.round(Math.log(radiusMm) / 0.01)}`;
    const group = groups.get(key);
    if (group === undefined) groups.set(key, { channel: channels[widest], pillars: [port] });
    else group.pillars.push(port);
  }
  const fields = [...groups.values()].filter(({ pillars }) => pillars.length >= FEWEST);
  const count = fields.reduce((sum, { pillars }) => sum + pillars.length, 0);
  return ports.length - count < 2 ? [] : fields;
}

/** Whether a channel ends within a circle. */
function endFinder(channels: readonly Channel[]): (port: Port) => boolean {
  const ends: [number, number][] = [];
  for (const { centrelines } of channels) {
    for (const { points, closed } of centrelines) {
      if (!closed) ends.push([points[0], points[1]], [points[points.length - 2], points[points.length - 1]]);
    }
  }
  if (ends.length === 0) return () => false;
  const index = new Flatbush(ends.length);
  for (const [x, y] of ends) index.add(x, y, x, y);
  index.finish();
  return ({ xMm, yMm, radiusMm: r }) =>
    index
      .search(xMm - r, yMm - r, xMm + r, yMm + r)
      .some((i) => Math.hypot(ends[i][0] - xMm, ends[i][1] - yMm) <= r);
}
