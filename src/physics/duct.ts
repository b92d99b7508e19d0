/**
 * Fully developed laminar flow in a straight rectangular duct, exactly.
 *
 * Source: the Fourier solution of Poisson's equation on a rectangle; R. K. Shah & A. L. London, Laminar Flow Forced
 * Convection in Ducts, Academic Press 1978, ch. VII. With s the shorter side, l the longer, G = Δp/L and sums over odd n:
 *
 *   R = 12 µ L / (l s³ F),  F = 1 − (192/π⁵)(s/l) Σ tanh(nπl/2s)/n⁵
 *   u_max = (G s²/8µ)[1 − (32/π³) Σ (−1)^((n−1)/2) sech(nπl/2s)/n³]
 *   long wall:  mean (G s/2)[1 − (16 s/π³ l) Σ tanh(nπl/2s)/n³],  peak (G s/2)[1 − (8/π²) Σ sech(nπl/2s)/n²]
 *   short wall: mean (8 G s/π³) Σ tanh(nπl/2s)/n³,  peak (4 G s/π²) Σ (−1)^((n−1)/2) tanh(nπl/2s)/n²
 *
 * Every Σ tanh is its closed limit (31ζ(5)/32, 7ζ(3)/8, Catalan's constant) minus Σ (1 − tanh), so all sums converge like
 * e^(−nπl/2s) or faster: at most 13 terms, and the last bit or two at any aspect ratio.
 * Assumes a Newtonian fluid, no slip, rigid walls, no entrance effects. Cost: about a microsecond for one form.
 */
import { longWallProfile, shareAbove, shortWallProfile } from './wall-profile.ts';

/** Six numbers of one duct, or their logarithmic derivatives. */
export interface DuctFactors {
  /** Resistance per length at viscosity 1, R/(µL), 1/m⁴. */
  readonly resistance: number;
  /** Fastest over mean velocity. */
  readonly peakOverMean: number;
  /** Wall shear per pressure gradient, τ/G, m: mean and peak over the floor (wall of the width) … */
  readonly floorMean: number;
  readonly floorPeak: number;
  /** … and over the side (wall of the depth). */
  readonly sideMean: number;
  readonly sidePeak: number;
}

/** Everything about a cross-section that does not depend on fluid or flow. A chip keeps one of each (`Chip.sections`). */
export interface DuctForm extends DuctFactors {
  readonly widthM: number;
  readonly depthM: number;
  readonly areaM2: number;
  /** Width of the floor that means and shares are taken over: the duct's, or an etched section's true floor. */
  readonly floorWidthM: number;
  /** 2wh/(w + h). */
  readonly hydraulicDiameterM: number;
  /** d ln(factor)/d ln(width), depth held. */
  readonly byWidth: DuctFactors;
  /** d ln(factor)/d ln(depth), width held. */
  readonly byDepth: DuctFactors;
}

/** Wall shear that counts as inside: at least minPa and at most maxPa; null leaves an end open. */
export interface ShearRange {
  readonly minPa: number | null;
  readonly maxPa: number | null;
}

/**
 * Shape factors of a duct of one width and depth (m), with their exact derivatives.
 * The floor is the long wall when width ≥ depth, else the short one.
 * @throws RangeError when a side is not a positive finite number.
 */
export function ductForm(widthM: number, depthM: number): DuctForm {
  refuseSides(widthM, depthM);
  const floorIsLong = widthM >= depthM;
  const shortSide = floorIsLong ? depthM : widthM;
  const longSide = floorIsLong ? widthM : depthM;
  const sums = seriesOf(longSide / shortSide);
  const factors = factorsOf(sums, longSide, shortSide);
  const byLong = logByLongSide(sums);
  const byShort = logByShortSide(byLong);
  return {
    widthM,
    depthM,
    areaM2: widthM * depthM,
    floorWidthM: widthM,
    hydraulicDiameterM: (2 * shortSide) / (1 + shortSide / longSide),
    ...onWalls(factors, floorIsLong),
    byWidth: onWalls(floorIsLong ? byLong : byShort, floorIsLong),
    byDepth: onWalls(floorIsLong ? byShort : byLong, floorIsLong),
  };
}

function refuseSides(widthM: number, depthM: number): void {
  for (const [name, side] of Object.entries({ width: widthM, depth: depthM })) {
    if (!(side > 0 && side < Infinity))
      throw new RangeError(`a duct's ${name} must be above 0 m and finite, not ${side}`);
  }
}

/** The dimensionless brackets of the formulas above, and their derivatives by ln(l/s). */
interface Series {
  /** F of the resistance. */
  readonly flow: number;
  /** Bracket of u_max. */
  readonly velocity: number;
  readonly longMean: number;
  readonly longPeak: number;
  /** Σ tanh/n³ and Σ ± tanh/n². */
  readonly shortMean: number;
  readonly shortPeak: number;
  readonly flowByLog: number;
  readonly velocityByLog: number;
  readonly longMeanByLog: number;
  readonly longPeakByLog: number;
  readonly shortMeanByLog: number;
  readonly shortPeakByLog: number;
}

// To the last digit of a double, from 40-digit values.
const ODD_ZETA_5 = 1.0045237627951396; // 31ζ(5)/32 = Σ 1/n⁵
const ODD_ZETA_3 = 1.051799790264645; // 7ζ(3)/8 = Σ 1/n³
const CATALAN = 0.915965594177219; // Σ (−1)^((n−1)/2)/n²
const C_192_PI5 = 0.6274106194662501; // 192/π⁵
const C_32_PI3 = 1.0320491018623836; // 32/π³
const C_16_PI3 = 0.5160245509311919; // 16/π³
const C_8_PI3 = 0.2580122754655959; // 8/π³
const C_8_PI2 = 0.8105694691387022; // 8/π²
const C_4_PI2 = 0.4052847345693511; // 4/π²

function seriesOf(aspect: number): Series {
  let lag5 = 0; // Σ (1 − tanh)/n⁵
  let lag3 = 0;
  let lag2 = 0; // alternating
  let sech3 = 0; // alternating
  let sech2 = 0;
  // With x = nπl/2s: d tanh(x)/d ln(l/s) = x sech²(x), d sech(x)/d ln(l/s) = −x sech(x) tanh(x).
  let tanh5ByLog = 0;
  let tanh3ByLog = 0;
  let tanh2ByLog = 0;
  let sech3ByLog = 0;
  let sech2ByLog = 0;
  let sign = 1;
  for (let n = 1; ; n += 2) {
    const x = (n * Math.PI * aspect) / 2;
    const q = Math.exp(-x);
    if (q < 1e-18) break;
    const sech = (2 * q) / (1 + q * q);
    const lag = q * sech; // 1 − tanh(x) = 2q²/(1 + q²)
    const tanhByLog = x * sech * sech;
    const sechByLog = -x * sech * (1 - lag);
    const n2 = n * n;
    const n3 = n2 * n;
    const n5 = n3 * n2;
    lag5 += lag / n5;
    lag3 += lag / n3;
    lag2 += (sign * lag) / n2;
    sech3 += (sign * sech) / n3;
    sech2 += sech / n2;
    tanh5ByLog += tanhByLog / n5;
    tanh3ByLog += tanhByLog / n3;
    tanh2ByLog += (sign * tanhByLog) / n2;
    sech3ByLog += (sign * sechByLog) / n3;
    sech2ByLog += sechByLog / n2;
    sign = -sign;
  }
  const flowGap = (C_192_PI5 * (ODD_ZETA_5 - lag5)) / aspect;
  const meanGap = (C_16_PI3 * (ODD_ZETA_3 - lag3)) / aspect;
  return {
    flow: 1 - flowGap,
    velocity: 1 - C_32_PI3 * sech3,
    longMean: 1 - meanGap,
    longPeak: 1 - C_8_PI2 * sech2,
    shortMean: ODD_ZETA_3 - lag3,
    shortPeak: CATALAN - lag2,
    flowByLog: flowGap - (C_192_PI5 * tanh5ByLog) / aspect,
    velocityByLog: -C_32_PI3 * sech3ByLog,
    longMeanByLog: meanGap - (C_16_PI3 * tanh3ByLog) / aspect,
    longPeakByLog: -C_8_PI2 * sech2ByLog,
    shortMeanByLog: tanh3ByLog,
    shortPeakByLog: tanh2ByLog,
  };
}

/** Factors by wall length; `onWalls` says which wall is the floor. */
interface ShapeFactors extends Pick<Series, 'longMean' | 'longPeak' | 'shortMean' | 'shortPeak'> {
  readonly resistance: number;
  readonly peakOverMean: number;
}

function factorsOf(sums: Series, l: number, s: number): ShapeFactors {
  return {
    resistance: 12 / (l * s * s * s * sums.flow),
    // u_mean = G s² F/(12 µ)
    peakOverMean: (1.5 * sums.velocity) / sums.flow,
    longMean: (s / 2) * sums.longMean,
    longPeak: (s / 2) * sums.longPeak,
    shortMean: C_8_PI3 * s * sums.shortMean,
    shortPeak: C_4_PI2 * s * sums.shortPeak,
  };
}

function logByLongSide(sums: Series): ShapeFactors {
  const flow = sums.flowByLog / sums.flow;
  return {
    resistance: -1 - flow,
    peakOverMean: sums.velocityByLog / sums.velocity - flow,
    longMean: sums.longMeanByLog / sums.longMean,
    longPeak: sums.longPeakByLog / sums.longPeak,
    shortMean: sums.shortMeanByLog / sums.shortMean,
    shortPeak: sums.shortPeakByLog / sums.shortPeak,
  };
}

/** Scaling both sides together scales R/(µL) by the power −4, shear per gradient by 1, a ratio of velocities by 0. */
function logByShortSide(byLong: ShapeFactors): ShapeFactors {
  return {
    resistance: -4 - byLong.resistance,
    peakOverMean: -byLong.peakOverMean,
    longMean: 1 - byLong.longMean,
    longPeak: 1 - byLong.longPeak,
    shortMean: 1 - byLong.shortMean,
    shortPeak: 1 - byLong.shortPeak,
  };
}

function onWalls(of: ShapeFactors, floorIsLong: boolean): DuctFactors {
  return {
    resistance: of.resistance,
    peakOverMean: of.peakOverMean,
    floorMean: floorIsLong ? of.longMean : of.shortMean,
    floorPeak: floorIsLong ? of.longPeak : of.shortPeak,
    sideMean: floorIsLong ? of.shortMean : of.longMean,
    sidePeak: floorIsLong ? of.shortPeak : of.longPeak,
  };
}

const SLACK = 1e-12;

/**
 * Share (0 … 1) of the middle of a wall (as wide as the duct, or as it is deep), `spanM` of it, whose shear, without regard
 * to sign, lies in the range; error below 1e-12. Both ends carry a relative slack of 1e-12: in a flat duct the shear is the
 * same to the last bits over most of the floor, and a limit equal to it must not be decided by rounding.
 * @throws RangeError for a span that is not above 0 m and within the wall.
 */
export function wallShareInside(
  form: DuctForm,
  wallM: number,
  spanM: number,
  gradientPaM: number,
  range: ShearRange,
): number {
  if (!(spanM > 0 && spanM <= wallM)) {
    throw new RangeError(`a span of a wall lies above 0 m and within ${wallM} m, not ${spanM}`);
  }
  const shortSide = Math.min(form.widthM, form.depthM);
  const scale = C_4_PI2 * Math.abs(gradientPaM) * shortSide;
  if (!(scale < Infinity))
    throw new RangeError(`a pressure gradient must be finite, not ${gradientPaM} Pa/m`);
  const min = (range.minPa ?? 0) * (1 - SLACK);
  const max = (range.maxPa ?? Infinity) * (1 + SLACK);
  if (Number.isNaN(min) || Number.isNaN(max)) throw new RangeError('a shear limit is not a number');
  if (max < 0) return 0;
  if (scale === 0) return min <= 0 ? 1 : 0;
  const aspect = Math.max(form.widthM, form.depthM) / shortSide;
  const profile = wallM === shortSide && aspect > 1 ? shortWallProfile(aspect) : longWallProfile(aspect);
  // The shear falls from the middle outwards, so what exceeds a limit is the middle of the wall.
  const above = (limit: number) => Math.min(1, (shareAbove(profile, limit / scale) * wallM) / spanM);
  return Math.max(0, above(min) - above(max));
}
