import { isBelow } from '../asked/within.ts';
import type { Port } from '../chip/types.ts';
import { type FindingContext, oncePerContext } from './context.ts';

/** Ports whose rim comes within a distance of a point: a sweep over the ports sorted by x. */
export function portsNear(context: FindingContext, x: number, y: number, withinMm: number): number[] {
  const { order, largest } = portsByX(context);
  const { ports } = context.chip;
  const reach = withinMm + largest;
  let low = 0;
  let high = order.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (ports[order[middle]].xMm < x - reach) low = middle + 1;
    else high = middle;
  }
  const found: number[] = [];
  for (let k = low; k < order.length && ports[order[k]].xMm <= x + reach; k++) {
    const port = ports[order[k]];
    if (Math.hypot(port.xMm - x, port.yMm - y) - port.radiusMm <= withinMm) found.push(order[k]);
  }
  return found;
}

/** Pairs of ports whose rims are nearer than a limit, and how near. */
export function closePorts(context: FindingContext, limitMm: number): [number, number, number][] {
  const { ports } = context.chip;
  return ports.flatMap(({ xMm, yMm, radiusMm }, p) =>
    portsNear(context, xMm, yMm, radiusMm + limitMm)
      .filter((q) => q > p)
      .sort((q, r) => q - r)
      .map((q): [number, number, number] => [p, q, gapOfPorts(ports[p], ports[q])])
      .filter(([, , gapMm]) => isBelow(gapMm, limitMm)),
  );
}

function gapOfPorts(p: Port, q: Port): number {
  const [one, two] = p.xMm <= q.xMm ? [p, q] : [q, p];
  return Math.hypot(two.xMm - one.xMm, two.yMm - one.yMm) - one.radiusMm - two.radiusMm;
}

const portsByX = oncePerContext(({ chip }) => ({
  order: chip.ports.map((_, p) => p).sort((p, q) => chip.ports[p].xMm - chip.ports[q].xMm || p - q),
  largest: chip.ports.reduce((most, { radiusMm }) => Math.max(most, radiusMm), 0),
}));
