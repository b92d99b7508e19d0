/** Reynolds number ρ u D_h/µ on the hydraulic diameter, of the mean velocity without regard to sign. */
export function reynoldsNumber(
  densityKgM3: number,
  meanVelocityMs: number,
  hydraulicDiameterM: number,
  viscosityPaS: number,
): number {
  return (densityKgM3 * Math.abs(meanVelocityMs) * hydraulicDiameterM) / viscosityPaS;
}
