/**
 * End corrections k of corners, bends and junctions in creeping flow.
 *
 * Computed for this project by three-dimensional finite elements: Stokes flow at Re = 0, rigid walls, sharp corners,
 * hexahedral Q3–Q2 elements on half the depth, three meshes graded towards the sharp edges and extrapolated. A second,
 * independent code on tetrahedra (P2–P1) agrees to 0.0005; the shallow limit agrees with conformal mapping to 7 digits.
 * Uncertainty 0.0006 or better, except the main of 10 widths at aspect 0 (0.001).
 *
 * k is in widths w of the narrow duct, of its own resistance per length r: Δp/Q = Σ r L + r w k, with L run to the point
 * named; k < 0 means that L alone over-estimates. One column per aspect w/h of the narrow duct: 0 is a deep slot (plane
 * Stokes flow), Infinity a shallow one (Hele-Shaw flow). Equal depths throughout.
 */
export const JOINT_ASPECTS: readonly number[] = [0, 0.5, 1, 2, 4, 10, Infinity];

export type JointRow = readonly number[];

/** Mitred corner of equal ducts turning by 90° or 45°, to the corner point. */
export const MITRE_90: JointRow = [-0.2401, -0.2699, -0.3078, -0.3551, -0.3917, -0.4192, -0.441271];
export const MITRE_45: JointRow = [-0.0326, -0.0416, -0.053, -0.0667, -0.0767, -0.0838, -0.089027];

/** Arc of 90° with a centreline radius of one or two widths, along the arc. */
export const ARC_RADIUS_1: JointRow = [0.0417, 0.0162, -0.0163, -0.0544, -0.0803, -0.0978, -0.110379];
export const ARC_RADIUS_2: JointRow = [0.0231, 0.0095, -0.008, -0.0287, -0.043, -0.0527, -0.059761];

/** T of equal ducts, to the meeting point: straight through with the side closed; the side feeding both halves alike. */
export const TEE_STRAIGHT: JointRow = [-0.2378, -0.2101, -0.1761, -0.1489, -0.1445, -0.1477, -0.15311];
export const TEE_SYMMETRIC: JointRow = [-0.2194, -0.2513, -0.2915, -0.3415, -0.379, -0.4065, -0.428231];

/** Width ratios W/w at which the T into a wide main and the step were computed, besides W = w. */
export const WIDTH_RATIOS: readonly number[] = [2, 4, 10];

/** T of a side w into a main W, one row per width ratio: the side feeding both halves alike, to the main's wall. */
export const TEE_WIDE_TO_WALL: readonly JointRow[] = [
  [0.396, 0.3978, 0.3935, 0.374, 0.3498, 0.3291, 0.311719],
  [0.4124, 0.462, 0.5147, 0.5478, 0.5508, 0.5451, 0.53729],
  [0.4157, 0.5242, 0.6519, 0.7594, 0.804, 0.8224, 0.830345],
];

/** The same T straight through the main with the side closed, to the meeting point, in w of the main's resistance. */
export const TEE_WIDE_STRAIGHT: readonly JointRow[] = [
  [-0.1129, -0.0803, -0.0649, -0.0635, -0.0683, -0.0736, -0.078769],
  [-0.0541, -0.0289, -0.0268, -0.0293, -0.033, -0.0365, -0.039686],
  [-0.021, -0.0091, -0.0097, -0.0112, -0.0129, -0.0145, -0.015909],
];

/** Collinear step from w to W, one row per width ratio, to the step. */
export const STEP: readonly JointRow[] = [
  [0.2589, 0.2381, 0.2093, 0.177, 0.154, 0.1377, 0.124916],
  [0.3741, 0.3801, 0.3817, 0.3708, 0.3536, 0.3382, 0.324984],
  [0.4094, 0.4732, 0.5446, 0.5974, 0.6123, 0.6139, 0.611036],
];

/** Cross of equal ducts, to the meeting point: straight through, or round one corner, the other ports closed. */
export const CROSS_STRAIGHT: JointRow = [-0.403, -0.3592, -0.3056, -0.2655, -0.2616, -0.269, -0.279364];
export const CROSS_TURN: JointRow = [-0.33, -0.3492, -0.3732, -0.4108, -0.4466, -0.4757, -0.5];
