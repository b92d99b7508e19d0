/**
 * Wall shear across the two walls of a rectangular duct, from the corner to the middle, exactly.
 *
 * Distances from the corner, d, are measured as x = πd/s, shear as v = π²τ/(4Gs); r = l/s, sums over odd n.
 *
 * Long wall (y = l/2 − d from the middle), with T = πr:
 *   v = Σ [1 − cosh(nπy/s)/cosh(nπl/2s)]/n² = π²/8 − χ(e^(−x)) − Σ (e^(−n(T−x)) − e^(−n(T+x)))/(1 + e^(−nT))/n²
 * Legendre's χ(q) = Σ qⁿ/n² converges slowly only near the corner, where
 *   π²/8 − χ(e^(−x)) = χ(tanh(x/2)) + (x/2) ln coth(x/2).
 *
 * Short wall (z = s/2 − d from the middle): the normal derivative at y = l/2 of the same Fourier solution,
 *   v = Σ (−1)^((n−1)/2) tanh(nπr/2) cos(nπz/s)/n² = Σ tanh(nπr/2) sin(nx)/n²
 *     = Σ sin(nx)/n² − Σ (1 − tanh(nπr/2)) sin(nx)/n²,
 *   Σ sin(nx)/n² = ½∫₀ˣ t/sin(t) dt − (x/2) ln tan(x/2).
 *
 * Both rise from nought at the corner to their peak in the middle and are concave (v″ < 0). About 25 terms at most.
 */

/** Shear v and its slope dv/dx at x from the corner; x runs from 0 to `half`, the middle of the wall. */
export interface WallProfile {
  readonly half: number;
  readonly at: (x: number) => { readonly value: number; readonly slope: number };
}

/** Profile of the long wall of a duct with l/s = aspect ≥ 1. */
export function longWallProfile(aspect: number): WallProfile {
  const period = Math.PI * aspect;
  return risingTo(period / 2, (x) => {
    let value = singleWall(x);
    let slope = 0.5 * lnCoth(x / 2);
    for (let n = 1; ; n += 2) {
      const far = Math.exp(-n * (period - x));
      if (far < 1e-18) break;
      const scale = 1 + Math.exp(-n * period);
      const drop = Math.expm1(-2 * n * x);
      value += (far * drop) / (scale * n * n);
      slope -= (far * (2 + drop)) / (scale * n);
    }
    return { value, slope };
  });
}

/** Profile of the short wall of a duct with l/s = aspect ≥ 1. */
export function shortWallProfile(aspect: number): WallProfile {
  return risingTo(Math.PI / 2, (x) => {
    const lnTan = Math.log(Math.tan(x / 2));
    let value = halfIntegralOfXOverSin(x) - (x / 2) * lnTan;
    let slope = -0.5 * lnTan;
    for (let n = 1; ; n += 2) {
      const q = Math.exp(-n * Math.PI * aspect);
      if (q < 1e-18) break;
      const lag = (2 * q) / (1 + q); // 1 − tanh(nπr/2)
      value -= (lag * Math.sin(n * x)) / (n * n);
      slope -= (lag * Math.cos(n * x)) / n;
    }
    return { value, slope };
  });
}

/** Nought at the corner, where it rises without bound, and no further than the middle. */
function risingTo(half: number, inside: WallProfile['at']): WallProfile {
  const at: WallProfile['at'] = (x) => (x > 0 ? inside(Math.min(x, half)) : { value: 0, slope: Infinity });
  return { half, at };
}

/**
 * Share (0 … 1) of the wall whose shear v exceeds the target: the profile is concave, so Newton from the corner's side
 * creeps up on the root; a bracket halves the step where the slope vanishes (the middle).
 */
export function shareAbove(profile: WallProfile, target: number): number {
  const { half } = profile;
  if (target <= 0) return 1;
  const peak = profile.at(half).value;
  if (!(target < peak)) return 0;
  // On the long wall v ≤ π²/8 − e^(−x), so the root is not before this x; on the short wall it is only a start.
  const floor = Math.PI ** 2 / 8 - target;
  let x = Math.max(floor > 0 ? -Math.log(floor) : 0, (0.1 * half * target) / peak);
  let before = 0;
  let after = half;
  for (let step = 0; step < 200; step++) {
    if (!(x > before && x < after)) x = (before + after) / 2;
    const { value, slope } = profile.at(x);
    if (value < target) before = x;
    else after = x;
    const next = x + (target - value) / slope;
    const within = next > before && next < after ? next : (before + after) / 2;
    if (Math.abs(within - x) <= 1e-15 * half || after - before <= 1e-15 * half) return 1 - within / half;
    x = within;
  }
  return 1 - x / half;
}

/** π²/8 − χ(e^(−x)), x > 0: the profile of a wall whose far corner is out of sight. */
function singleWall(x: number): number {
  // Both series run in a number below √2 − 1, which is where the two arguments meet.
  if (x > 0.881373587019543) return Math.PI ** 2 / 8 - chi(Math.exp(-x));
  return chi(Math.tanh(x / 2)) + (x / 2) * lnCoth(x / 2);
}

function chi(q: number): number {
  const q2 = q * q;
  let sum = 0;
  let power = q;
  for (let n = 1; power > 1e-18 * q; n += 2) {
    sum += power / (n * n);
    power *= q2;
  }
  return sum;
}

/** ln coth(x), without the loss of ln(1 + tiny) for large x. */
function lnCoth(x: number): number {
  const q = Math.exp(-2 * x);
  return x < 0.5 ? -Math.log(Math.tanh(x)) : Math.log1p(q) - Math.log1p(-q);
}

// η(2k) − 1 for k = 1, 2 …, η(m) = Σ (−1)^(j+1)/j^m.
const ETA_MINUS_ONE = [
  -0.17753296657588677, -0.05296717050275408, -0.014448908702564895, -0.0037669981473521007,
  -0.0009604924017284343, -0.00024231485614180915, -6.082965402028183e-5, -1.5235785093893558e-5,
  -3.8121303898865203e-6, -9.533884184778849e-7, -2.383867691774521e-7, -5.960110760537164e-8,
  -1.4900768003431212e-8, -3.7252465998912724e-9,
];

/**
 * ½∫₀ˣ t/sin(t) dt for 0 ≤ x ≤ π/2. From t/sin t = 1 + 2 Σ η(2k)(t/π)^(2k), with the nearest pole summed by itself:
 * π artanh(x/π) − x/2 + x Σ (η(2k) − 1)(x/π)^(2k)/(2k + 1), whose terms fall by 16.
 */
function halfIntegralOfXOverSin(x: number): number {
  const u = (x / Math.PI) ** 2;
  let sum = 0;
  let power = u;
  for (let k = 1; k <= ETA_MINUS_ONE.length; k++) {
    sum += (ETA_MINUS_ONE[k - 1] * power) / (2 * k + 1);
    power *= u;
  }
  return Math.PI * Math.atanh(x / Math.PI) - x / 2 + x * sum;
}
