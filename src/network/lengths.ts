import type { Network } from './types.ts';

/** Length of a reach with room for fluid (m): the duct length without what joints add, which is resistance alone. */
export function roomLengthM(
  { reachDuctMm, reachJointMm }: Pick<Network, 'reachDuctMm' | 'reachJointMm'>,
  reach: number,
): number {
  return reachDuctMm[reach] / 1000 - reachJointMm[reach] / 1000;
}
