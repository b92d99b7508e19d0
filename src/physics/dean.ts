/** Curvature: the Dean number, and how much secondary flow raises friction in a coiled tube. */

/** Dean number De = Re √(D_h/(2 R_c)), R_c the centreline's bend radius. */
export function deanNumber(reynolds: number, hydraulicDiameterM: number, bendRadiusM: number): number {
  return reynolds * Math.sqrt(hydraulicDiameterM / (2 * bendRadiusM));
}

/** Dean number below which curvature does not show in the friction (White 1929). */
export const CURVED_FLOW_DEAN = 11.6;

/**
 * Friction of a curved tube over that of a straight one: 1/{1 − [1 − (11.6/De)^0.45]^(1/0.45)} for De > 11.6, else 1.
 * Source: C. M. White, Proc. R. Soc. A 123 (1929) 645. For round tubes; only indicative for rectangles.
 */
export function curvedFrictionFactor(dean: number): number {
  // At and below 11.6 the inner bracket is nought or negative and has no real power.
  if (!(dean > CURVED_FLOW_DEAN)) return 1;
  return 1 / (1 - (1 - (CURVED_FLOW_DEAN / dean) ** 0.45) ** (1 / 0.45));
}
