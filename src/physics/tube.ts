/** Round tubing: Hagen–Poiseuille flow (exact; Newtonian, developed, rigid walls). */

/**
 * Resistance (Pa s/m³) of a round tube: R = 128 µ L/(π d⁴).
 * @throws RangeError when the bore is not above 0 m or the length is negative.
 */
export function tubeResistance(boreM: number, lengthM: number, viscosityPaS: number): number {
  refuseTube(boreM, lengthM);
  return (128 * viscosityPaS * lengthM) / (Math.PI * boreM ** 4);
}

/** Volume (m³) of a round tube: π d² L/4. */
export function tubeVolume(boreM: number, lengthM: number): number {
  refuseTube(boreM, lengthM);
  return (Math.PI * boreM * boreM * lengthM) / 4;
}

function refuseTube(boreM: number, lengthM: number): void {
  if (!(boreM > 0 && boreM < Infinity))
    throw new RangeError(`a tube's bore must be above 0 m and finite, not ${boreM}`);
  if (!(lengthM >= 0 && lengthM < Infinity)) {
    throw new RangeError(`a tube's length must be 0 m or more and finite, not ${lengthM}`);
  }
}
