/**
 * End corrections of joints as functions of aspect and width ratio: joint-table.ts, interpolated.
 *
 * Aspect a = w/h of the narrow duct, from 0 (deep slot) to Infinity (shallow): Floater–Hormann of degree 3 in
 * a/(a + 1.5), in which every k is regular at both ends (edge layers at floor and lid weigh with a, those at the sides with
 * 1/a). Exact at the computed aspects and in both limits.
 *
 * Width ratio, α = w/W: the closed form of the shallow limit times the share of it that the aspect leaves,
 * c(a) = 12µ/(h³ r_w w), plus a smooth rest through the computed ratios. Beyond W = 10w the logarithm of radial spreading:
 * k(W) = k(10w) + (c/π) ln(W/10w).
 *
 * Every result states an `error`: the interpolation's own, found by leaving out one computed point at a time (that of
 * leaving out a point is larger than that of using it), plus what the table's source states for extrapolation.
 * It is in the unit of the k beside it. Inertia, unequal depths, a side wider than its main: not computed, refused or for
 * the caller to bound.
 */
import { ductForm } from './duct.ts';
import {
  ARC_RADIUS_1,
  ARC_RADIUS_2,
  CROSS_STRAIGHT,
  CROSS_TURN,
  JOINT_ASPECTS,
  type JointRow,
  MITRE_45,
  MITRE_90,
  STEP,
  TEE_STRAIGHT,
  TEE_SYMMETRIC,
  TEE_WIDE_STRAIGHT,
  TEE_WIDE_TO_WALL,
  WIDTH_RATIOS,
} from './joint-table.ts';
import { interpolate, rationalNodes } from './rational-interpolation.ts';

export interface JointK {
  /** Length to add, in widths of the (narrow) duct. */
  readonly k: number;
  readonly error: number;
}

/** Widest turn of a mitred corner for which k is given. */
export const MITRE_MAX_TURN_RAD = (2 * Math.PI) / 3;

/**
 * Mitred corner of equal ducts by its turn (0 = straight on), lengths to the corner point: k = c₁θ² + c₂θ⁴ through 45°
 * and 90°. `error` holds how far that form is from the closed form of the shallow limit at this turn, taken for every
 * aspect: below 0.0045 up to 95°, 0.023 at 105°, 0.11 at 120°.
 * @throws RangeError for a turn beyond 120°, or an aspect that is not 0 … Infinity.
 */
export function mitreK(aspect: number, turnRad: number): JointK {
  const turn = Math.abs(turnRad);
  if (!(turn <= MITRE_MAX_TURN_RAD + 1e-9)) {
    throw new RangeError(`a mitred corner is computed up to a turn of 120°, not ${degrees(turn)}`);
  }
  const k = mitreForm(atAspect(MITRE_45, aspect), atAspect(MITRE_90, aspect), turn);
  const shallow = mitreForm(MITRE_45[SHALLOW], MITRE_90[SHALLOW], turn);
  return { k, error: MITRE_ERROR * Math.min(1, turn) + Math.abs(shallow - shallowMitreK(turn)) };
}

/**
 * Bend by the radius of its centreline and its angle, lengths along the arc: k = k90·angle/90°, k90 quadratic in w/R
 * through nought and the two computed radii. Angles other than 90° are an estimate (0.03).
 * @throws RangeError for a radius below one width, or an aspect that is not 0 … Infinity.
 */
export function bendK(aspect: number, radiusOverWidth: number, turnRad: number): JointK {
  if (!(radiusOverWidth >= 1 - 1e-9)) {
    throw new RangeError(`a bend is computed from a radius of one width upwards, not ${radiusOverWidth}`);
  }
  const curvature = 1 / radiusOverWidth;
  const one = atAspect(ARC_RADIUS_1, aspect);
  const two = atAspect(ARC_RADIUS_2, aspect);
  // α u + β u² through (1, one) and (½, two).
  const k90 = curvature * (4 * two - one + (2 * one - 4 * two) * curvature);
  const quarters = Math.abs(turnRad) / (Math.PI / 2);
  const offQuarter = Math.abs(quarters - 1);
  return {
    k: k90 * quarters,
    error:
      (BEND_ERROR + BEND_RADIUS_ERROR * Math.min(1, 2 * curvature)) * Math.min(1, quarters) +
      // Grows from nought within 5° of the computed angle, and vanishes with the bend.
      BEND_ANGLE_ERROR * Math.min(1, 18 * offQuarter, 2 * quarters),
  };
}

/**
 * T of equal ducts as a star, exact for any split of flow: length to add to each half of the main and to the side, in
 * widths, from the meeting point: k_main = k_straight/2, k_side = k_symmetric − k_straight/4.
 * @throws RangeError for an aspect that is not 0 … Infinity.
 */
export function teeEqualK(aspect: number): {
  readonly main: number;
  readonly side: number;
  readonly error: number;
} {
  const straight = atAspect(TEE_STRAIGHT, aspect);
  return { main: straight / 2, side: atAspect(TEE_SYMMETRIC, aspect) - straight / 4, error: TEE_EQUAL_ERROR };
}

/**
 * T of a narrow side (w) into a wide main (W) as a star, exact for any split of flow.
 * `side`: to add to the side, measured to the main's wall, in w of the side's resistance per length.
 * `mainHalf`: to add to each half of the main, measured to the meeting point, in w of the main's resistance per length.
 * `symmetric`: the side when it feeds both halves alike, before the star takes its part (side + mainHalf·r_W/2r_w).
 * At W = w this is the T of equal ducts with the side measured to the wall, half a width more.
 * @throws RangeError for a ratio W/w below 1 or infinite, or an aspect that is not 0 … Infinity.
 */
export function teeIntoWideK(
  aspect: number,
  widthRatio: number,
): {
  readonly side: number;
  readonly mainHalf: number;
  readonly symmetric: number;
  readonly error: number;
} {
  refuseWidthRatio(widthRatio);
  const symmetric = teeToWallThrough(TEE_TO_WALL_POINTS, aspect, widthRatio);
  const straight = teeStraightThrough(TEE_STRAIGHT_POINTS, aspect, widthRatio);
  return {
    side: symmetric - (resistanceRatio(aspect, widthRatio) * straight) / 4,
    mainHalf: straight / 2,
    symmetric,
    error: TEE_WIDE_ERROR + extrapolationError(aspect, widthRatio),
  };
}

/**
 * Collinear step from w to W, lengths to the step: in w of the narrow duct's resistance per length; 0 at W = w.
 * @throws RangeError for a ratio W/w below 1 or infinite, or an aspect that is not 0 … Infinity.
 */
export function stepK(aspect: number, widthRatio: number): JointK {
  refuseWidthRatio(widthRatio);
  // A step that vanishes has no correction to be wrong about.
  const opening = Math.min(1, 2 * (1 - 1 / widthRatio));
  return {
    k: stepThrough(STEP_POINTS, aspect, widthRatio),
    error: STEP_ERROR * opening + extrapolationError(aspect, widthRatio),
  };
}

/**
 * Cross of equal ducts, lengths to the meeting point. It is no exact star: `arm` = (straight + turn)/4 for every arm is
 * within `bound` = |turn − straight|/2 of both; `straight` and `turn` are the two computed passages (sum of both legs).
 * @throws RangeError for an aspect that is not 0 … Infinity.
 */
export function crossK(aspect: number): {
  readonly arm: number;
  readonly bound: number;
  readonly straight: number;
  readonly turn: number;
  readonly error: number;
} {
  const straight = atAspect(CROSS_STRAIGHT, aspect);
  const turn = atAspect(CROSS_TURN, aspect);
  return {
    arm: (straight + turn) / 4,
    bound: Math.abs(turn - straight) / 2,
    straight,
    turn,
    error: CROSS_ERROR,
  };
}

/** Mitred corner in the shallow limit, exact by conformal mapping: (2/π)[2 ln 2 + γ + ψ((1 + θ/π)/2)] − tan(θ/2). */
export function shallowMitreK(turnRad: number): number {
  return (
    (2 / Math.PI) * (2 * Math.LN2 + EULER + digamma((1 + turnRad / Math.PI) / 2)) - Math.tan(turnRad / 2)
  );
}

/** One computed width ratio W/w with its row of k by aspect. */
export interface RatioPoint {
  readonly ratio: number;
  readonly row: JointRow;
}

/** k of a step through the points given (the leave-one-out tests give fewer). */
export function stepThrough(points: readonly RatioPoint[], aspect: number, widthRatio: number): number {
  const spread = spreadingShare(aspect);
  const rest = points.map(({ ratio, row }) => {
    return (atAspect(row, aspect) - spread * shallowStep(1 / ratio)) / smallStep(1 / ratio);
  });
  const places = points.map(({ ratio }) => 1 / ratio);
  const alpha = 1 / Math.min(widthRatio, LAST_RATIO);
  const within = spread * shallowStep(alpha) + smallStep(alpha) * polynomialThrough(places, rest, alpha);
  return within + beyondLast(spread, widthRatio);
}

/** k of a T to the main's wall, the side feeding both halves alike, through the points given. */
export function teeToWallThrough(points: readonly RatioPoint[], aspect: number, widthRatio: number): number {
  const spread = spreadingShare(aspect);
  const rest = points.map(({ ratio, row }) => atAspect(row, aspect) - spread * shallowTeeToWall(1 / ratio));
  const places = points.map(({ ratio }) => teePlace(1 / ratio));
  const alpha = 1 / Math.min(widthRatio, LAST_RATIO);
  const within = spread * shallowTeeToWall(alpha) + polynomialThrough(places, rest, teePlace(alpha));
  return within + beyondLast(spread, widthRatio);
}

/** k of the main of a T straight through, through the points given; beyond 10 widths as w/W. */
export function teeStraightThrough(
  points: readonly RatioPoint[],
  aspect: number,
  widthRatio: number,
): number {
  const rest = points.map(({ ratio, row }) => atAspect(row, aspect) * ratio - shallowTeeStraight(1 / ratio));
  const places = points.map(({ ratio }) => teePlace(1 / ratio));
  const place = teePlace(1 / Math.min(widthRatio, LAST_RATIO));
  return (shallowTeeStraight(1 / widthRatio) + polynomialThrough(places, rest, place)) / widthRatio;
}

// Largest leave-one-out errors (the tests repeat the leaving out), raised where other fair interpolants of the same points
// differ by more: that is between aspect 0 and 0.5, where nothing was computed.
const MITRE_ERROR = 0.002;
const BEND_ERROR = 0.0025;
const TEE_EQUAL_ERROR = 0.0035;
const CROSS_ERROR = 0.005;
/** Side to the wall: 0.002 to 0.005 from aspect, 0.0028 from width ratio, and at W = w a quarter of the main's 0.0044. */
const TEE_WIDE_ERROR = 0.008;
/** 0.0015 to 0.003 from aspect; 0.0011 from width ratio, but other fair forms of a small step differ by 0.005. */
const STEP_ERROR = 0.008;
/** How far a straight line through R = w is from the computed R = 2w. */
const BEND_RADIUS_ERROR = 0.005;
/** As stated with the table. */
const BEND_ANGLE_ERROR = 0.03;
const EXTRAPOLATION_ERROR = 0.02; // per factor 2.5 beyond W = 10w
const SHALLOW_EXTRAPOLATION_ERROR = 0.0012; // 0.00105 against the closed form at 100w

const SHALLOW = JOINT_ASPECTS.length - 1;
const LAST_RATIO = WIDTH_RATIOS[WIDTH_RATIOS.length - 1];
export const STEP_POINTS: readonly RatioPoint[] = pointsOf(STEP);
/** At W = w the T of equal ducts, its side measured to the wall: half a width more. */
export const TEE_TO_WALL_POINTS: readonly RatioPoint[] = [
  { ratio: 1, row: TEE_SYMMETRIC.map((k) => k + 0.5) },
  ...pointsOf(TEE_WIDE_TO_WALL),
];
export const TEE_STRAIGHT_POINTS: readonly RatioPoint[] = [
  { ratio: 1, row: TEE_STRAIGHT },
  ...pointsOf(TEE_WIDE_STRAIGHT),
];
const ASPECT_NODES = rationalNodes(JOINT_ASPECTS.map(aspectPlace), 3);
const EULER = 0.5772156649015329;

function pointsOf(rows: readonly JointRow[]): readonly RatioPoint[] {
  return rows.map((row, i) => ({ ratio: WIDTH_RATIOS[i], row }));
}

function atAspect(row: JointRow, aspect: number): number {
  refuseAspect(aspect);
  // A chip has few aspects and many joints: the last value of each row is nearly always the one asked for.
  const last = LAST_ASKED.get(row);
  if (last?.aspect === aspect) return last.k;
  const k = interpolate(ASPECT_NODES, row, aspectPlace(aspect));
  LAST_ASKED.set(row, { aspect, k });
  return k;
}

const LAST_ASKED = new Map<JointRow, { readonly aspect: number; readonly k: number }>();

/** 0 … Infinity on 0 … 1. */
export function aspectPlace(aspect: number): number {
  return aspect === Infinity ? 1 : aspect / (aspect + 1.5);
}

function mitreForm(k45: number, k90: number, turn: number): number {
  const square = (turn / (Math.PI / 2)) ** 2;
  // A + B = k90, A/4 + B/16 = k45.
  return (square * (16 * k45 - k90)) / 3 + (square * square * (4 * k90 - 16 * k45)) / 3 + 0; // never −0
}

/** c = 12µ/(h³ r_w w): what a flat duct of this width would resist over what this one does; 0 deep, 1 shallow. */
function spreadingShare(aspect: number): number {
  refuseAspect(aspect);
  if (aspect === 0) return 0;
  if (aspect === Infinity) return 1;
  const { w, h } = sidesOf(aspect);
  return 12 / (h ** 3 * w * ductForm(w, h).resistance);
}

/** r_W/r_w of the main and the side of a T, equal depths. */
function resistanceRatio(aspect: number, widthRatio: number): number {
  if (aspect === 0) return widthRatio ** -3;
  if (aspect === Infinity) return 1 / widthRatio;
  const { w, h } = sidesOf(aspect);
  return ductForm(w * widthRatio, h).resistance / ductForm(w, h).resistance;
}

/** The shorter side is 1, so that no cube runs out of a double's range. */
function sidesOf(aspect: number): { readonly w: number; readonly h: number } {
  return aspect < 1 ? { w: 1, h: 1 / aspect } : { w: aspect, h: 1 };
}

/** Growth beyond the widest computed main or step: radial spreading over half a plane. */
function beyondLast(spread: number, widthRatio: number): number {
  return widthRatio > LAST_RATIO ? (spread / Math.PI) * Math.log(widthRatio / LAST_RATIO) : 0;
}

function extrapolationError(aspect: number, widthRatio: number): number {
  if (!(widthRatio > LAST_RATIO)) return 0;
  if (aspect === Infinity) return SHALLOW_EXTRAPOLATION_ERROR;
  return (EXTRAPOLATION_ERROR * Math.log(widthRatio / LAST_RATIO)) / Math.log(2.5);
}

/**
 * Shallow step, exact: [((α² + 1)/α) ln((1 + α)/(1 − α)) − 2 ln(4α/(1 − α²))]/2π, gathered in (1 − α)²/α so that nothing
 * cancels as the step vanishes.
 */
function shallowStep(alpha: number): number {
  const rise = 1 - alpha;
  if (rise <= 0) return 0;
  const square = (rise * rise) / alpha;
  return (square * Math.log((1 + alpha) / rise) + 2 * Math.log1p(square / 4)) / (2 * Math.PI);
}

/** How any small step begins: (1 − α)² with a logarithm, from the wall's square-cut displacement. */
function smallStep(alpha: number): number {
  const rise = 1 - alpha;
  return rise <= 0 ? 0 : rise * rise * Math.log1p(2 / rise);
}

/**
 * Shallow T to the main's wall, the side feeding both halves, exact: half of it is a square elbow from w/2 to W, mapped
 * on the half plane (q = α²/4): −[ln(16q/(1 + q)²) − 2√q arctan(1/√q) − (2/√q) arctan √q]/2π − α/4.
 */
function shallowTeeToWall(alpha: number): number {
  const root = alpha / 2;
  const q = root * root;
  const bracket =
    Math.log((16 * q) / (1 + q) ** 2) - 2 * root * Math.atan(1 / root) - (2 / root) * Math.atan(root);
  return -bracket / (2 * Math.PI) - alpha / 4;
}

/** Shallow main straight through with the side closed, times W/w, exact by the same map: 2[ln(1 + α²/4) − α arctan(α/2)]/(πα²). */
function shallowTeeStraight(alpha: number): number {
  return (2 * (Math.log1p((alpha * alpha) / 4) - alpha * Math.atan(alpha / 2))) / (Math.PI * alpha * alpha);
}

/** Place of a width ratio on which the rest is nearly a straight line: α/(2 − α), 1 at W = w and 0 for an endless main. */
function teePlace(alpha: number): number {
  return alpha / (2 - alpha);
}

/** Lagrange's polynomial through all points. */
function polynomialThrough(x: readonly number[], y: readonly number[], at: number): number {
  let sum = 0;
  for (let i = 0; i < x.length; i++) {
    let basis = y[i];
    for (let j = 0; j < x.length; j++) if (j !== i) basis *= (at - x[j]) / (x[i] - x[j]);
    sum += basis;
  }
  return sum;
}

/** ψ(x), x > 0: recurrence up to 10, then the asymptotic series (14 digits). */
function digamma(x: number): number {
  let shift = 0;
  let at = x;
  for (; at < 10; at++) shift -= 1 / at;
  const u = 1 / (at * at);
  const tail = u * (1 / 12 - u * (1 / 120 - u * (1 / 252 - u * (1 / 240 - u * (1 / 132)))));
  return shift + Math.log(at) - 1 / (2 * at) - tail;
}

function refuseAspect(aspect: number): void {
  if (!(aspect >= 0)) throw new RangeError(`an aspect w/h lies between 0 and Infinity, not ${aspect}`);
}

function refuseWidthRatio(widthRatio: number): void {
  if (widthRatio >= 1 && widthRatio < Infinity) return;
  throw new RangeError(
    `a main or step is at least as wide as the narrow duct (W/w ≥ 1, finite), not ${widthRatio}`,
  );
}

function degrees(rad: number): string {
  return `${Number(((rad * 180) / Math.PI).toFixed(2))}°`;
}
