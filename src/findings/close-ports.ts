import type { Port } from '../chip/types.ts';
import { isBelow } from './rule.ts';

/** Pairs of ports whose rims are nearer than a limit, by a sweep over x. */
export function closePorts(ports: readonly Port[], limitMm: number): [number, number, number][] {
  const order = ports.map((_, p) => p).sort((p, q) => ports[p].xMm - ports[q].xMm || p - q);
  const largest = ports.reduce((most, { radiusMm }) => Math.max(most, radiusMm), 0);
  const close: [number, number, number][] = [];
  for (let k = 0; k < order.length; k++) {
    const one = ports[order[k]];
    for (let m = k + 1; m < order.length; m++) {
      const two = ports[order[m]];
      if (two.xMm - one.xMm > one.radiusMm + largest + limitMm) break;
      const gapMm = Math.hypot(two.xMm - one.xMm, two.yMm - one.yMm) - one.radiusMm - two.radiusMm;
      if (isBelow(gapMm, limitMm))
        close.push([Math.min(order[k], order[m]), Math.max(order[k], order[m]), gapMm]);
    }
  }
  return close.sort((a, b) => a[0] - b[0] || a[1] - b[1]);
}
