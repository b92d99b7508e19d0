/** Dean number De = Re √(D_h/(2 R_c)), R_c the centreline's bend radius. */
export function deanNumber(reynolds: number, hydraulicDiameterM: number, bendRadiusM: number): number {
  return reynolds * Math.sqrt(hydraulicDiameterM / (2 * bendRadiusM));
}

/**
 * Dean number below which curvature does not show in the friction of a coiled tube: the 11.6 in the law of C. M. White,
 * Proc. R. Soc. A 123 (1929) 645. For round tubes; only indicative for rectangles.
 */
export const CURVED_FLOW_DEAN = 11.6;
