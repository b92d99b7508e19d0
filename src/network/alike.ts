import type { Channel, Chip, Port } from '../chip/types.ts';

/**
 * Whether two chips of one layout have the same network: the same strokes and wells, as wide and deep, joined by the same
 * rules. Cases of a run sheet mostly change only fluid, ports and windows. Cost: linear in channels and ports.
 */
export function isDrawnAlike(a: Chip, b: Chip): boolean {
  return (
    a.layoutSha256 === b.layoutSha256 &&
    a.unitMm === b.unitMm &&
    a.joints === b.joints &&
    a.joinWithinMm === b.joinWithinMm &&
    a.process === b.process &&
    a.channels.length === b.channels.length &&
    a.ports.length === b.ports.length &&
    a.channels.every((channel, i) => isSameChannel(channel, b.channels[i])) &&
    a.ports.every((port, i) => isSamePort(port, b.ports[i])) &&
    a.layers.every(({ depthM }) => sameLimit(a, b, depthM))
  );
}

/** One ordinal is one stroke of the layout, so its centrelines need no comparison. */
function isSameChannel(a: Channel, b: Channel): boolean {
  return (
    a.ordinal === b.ordinal &&
    a.name === b.name &&
    a.plane === b.plane &&
    a.layer === b.layer &&
    Object.is(a.ductWidthMm, b.ductWidthMm) &&
    Object.is(a.stripHalfWidthMm, b.stripHalfWidthMm) &&
    Object.is(a.depthMm, b.depthMm)
  );
}

function isSamePort(a: Port, b: Port): boolean {
  return a.ordinal === b.ordinal && a.name === b.name && a.radiusMm === b.radiusMm;
}

/** The least wall decides which near pairs are listed. */
function sameLimit(a: Chip, b: Chip, depthM: number): boolean {
  const depth = Number.isNaN(depthM) ? 0 : depthM;
  return a.limits.minWallM(depth)?.value === b.limits.minWallM(depth)?.value;
}
