/**
 * Entrance length: how far from an inlet the profile is developed to 99 % on the axis.
 *
 * Source: R.-Y. Chen, J. Fluids Eng. 95 (1973) 153. It tends to a constant as Re → 0, never to nought.
 */

/**
 * Entrance length (m) of a duct by the tube form, D_h (0.6/(1 + 0.035 Re) + 0.056 Re). For a rectangle on its hydraulic
 * diameter this is longer, so safer, than his form for parallel plates.
 */
export function entranceLength(reynolds: number, hydraulicDiameterM: number): number {
  return hydraulicDiameterM * (0.6 / (1 + 0.035 * reynolds) + 0.056 * reynolds);
}

/**
 * Length (m) over which flow spreads after a feeder opens into a wider channel at creeping flow:
 * half the wide channel's width when the feeder opens on its axis, the whole when at its edge.
 */
export function spreadingLength(wideChannelM: number, feeder: 'axis' | 'edge'): number {
  return feeder === 'axis' ? wideChannelM / 2 : wideChannelM;
}
