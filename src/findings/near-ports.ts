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

const portsByX = oncePerContext(({ chip }) => ({
  order: chip.ports.map((_, p) => p).sort((p, q) => chip.ports[p].xMm - chip.ports[q].xMm || p - q),
  largest: chip.ports.reduce((most, { radiusMm }) => Math.max(most, radiusMm), 0),
}));
