import { grouped } from '../by-key.ts';
import { indexStrips, widestOf } from '../chip/strip-index.ts';
import type { Channel, Chip, Port } from '../chip/types.ts';
import { indexBoxes } from '../geometry/box-index.ts';

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
  const inChannel = ports.flatMap((port) => {
    const round = strips.channelsRoundDisc(port.xMm, port.yMm, port.radiusMm);
    return round.length === 0 || holdsEnd(port) ? [] : [{ port, widest: widestOf(channels, round) }];
  });
  const groups = grouped(
    inChannel,
    ({ port, widest }) => `${widest} ${Math.round(Math.log(port.radiusMm) / 0.01)}`,
  );
  const fields = [...groups.values()]
    .filter(({ length }) => length >= FEWEST)
    .map((group) => ({
      channel: channels[group[0].widest],
      pillars: group.map(({ port }) => port),
    }));
  const count = fields.reduce((sum, { pillars }) => sum + pillars.length, 0);
  return ports.length - count < 2 ? [] : fields;
}

/** Whether a channel ends within a circle. */
function endFinder(channels: readonly Channel[]): (port: Port) => boolean {
  const ends = channels
    .flatMap(({ centrelines }) => centrelines)
    .flatMap(({ points, closed }) => (closed ? [] : [points.subarray(0, 2), points.subarray(-2)]));
  const index = indexBoxes(ends.flatMap(([x, y]) => [x, y, x, y]));
  return ({ xMm, yMm, radiusMm: r }) =>
    index
      .search(xMm - r, yMm - r, xMm + r, yMm + r)
      .some((i) => Math.hypot(ends[i][0] - xMm, ends[i][1] - yMm) <= r);
}
