/** A soft roof under pressure: how far it rises, and what that does to the duct. */

/**
 * Mean rise (m, downwards negative) of the roof of a channel (width m) in an elastomer of Young's modulus E (Pa) at gauge
 * pressure p (Pa): 0.6 p w/E.
 *
 * One face of a flat slit in an incompressible body much thicker than the slit is wide opens by
 * (2(1 − ν²)p/E) √(w²/4 − x²) (Griffith's crack in plane strain, ν = ½), on average (3π/16) p w/E = 0.589 p w/E.
 * A thin roof rises more.
 */
export function meanRoofRise(pressurePa: number, widthM: number, stiffnessPa: number): number {
  return (0.6 * pressurePa * widthM) / stiffnessPa;
}

/**
 * Factor on the duct's resistance when its depth h grows by a mean rise: (h/(h + rise))³, the law of a flat duct.
 * Infinity when the roof touches the floor (rise ≤ −h).
 */
export function risenResistanceFactor(depthM: number, riseM: number): number {
  const openM = depthM + riseM;
  return openM > 0 ? (depthM / openM) ** 3 : Infinity;
}
