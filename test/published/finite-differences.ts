/**
 * Finite-difference solutions of ∇²u = −1 (flow at G/µ = 1) with u = 0 on the wall: independent of any series.
 * Distances in units of the section's depth.
 */

export interface RectangleSolution {
  /** ∫u dA, u in the middle, and mid-wall shears ∂u/∂n (second order from inside). */
  readonly flow: number;
  readonly peak: number;
  readonly longMid: number;
  readonly shortMid: number;
  /** Shear a quarter of the long wall from its corner, and the mean over the long wall. */
  readonly longQuarter: number;
  readonly longMean: number;
}

/** Five-point solution on l × 1 with n cells across the short side (n a multiple of 4), by conjugate gradients. */
export function solveRectangle(l: number, n: number): RectangleSolution {
  const h = 1 / n;
  const nx = Math.round(l * n); // cells along the long side
  const stride = nx + 1;
  const u = conjugateGradients(nx, n, h * h);
  const at = (i: number, j: number) => u[j * stride + i];
  const fromFloor = (i: number) => (4 * at(i, 1) - at(i, 2)) / (2 * h);
  let sum = 0;
  for (const value of u) sum += value;
  let wall = 0;
  for (let i = 1; i < nx; i++) wall += fromFloor(i);
  return {
    flow: sum * h * h,
    peak: at(nx / 2, n / 2),
    longMid: fromFloor(nx / 2),
    shortMid: (4 * at(1, n / 2) - at(2, n / 2)) / (2 * h),
    longQuarter: fromFloor(nx / 4),
    longMean: wall / nx,
  };
}

function conjugateGradients(nx: number, ny: number, rhs: number): Float64Array {
  const stride = nx + 1;
  const size = stride * (ny + 1);
  const u = new Float64Array(size);
  const r = new Float64Array(size);
  const p = new Float64Array(size);
  const ap = new Float64Array(size);
  const inner = (visit: (k: number) => void) => {
    for (let j = 1; j < ny; j++) for (let i = 1; i < nx; i++) visit(j * stride + i);
  };
  let rr = 0;
  inner((k) => {
    r[k] = rhs;
    p[k] = rhs;
    rr += rhs * rhs;
  });
  const enough = rr * 1e-26;
  while (rr > enough) {
    let pap = 0;
    inner((k) => {
      const v = 4 * p[k] - p[k - 1] - p[k + 1] - p[k - stride] - p[k + stride];
      ap[k] = v;
      pap += p[k] * v;
    });
    const alpha = rr / pap;
    let next = 0;
    inner((k) => {
      u[k] += alpha * p[k];
      r[k] -= alpha * ap[k];
      next += r[k] * r[k];
    });
    const beta = next / rr;
    rr = next;
    inner((k) => {
      p[k] = r[k] + beta * p[k];
    });
  }
  return u;
}

export interface EtchedSolution {
  readonly area: number;
  readonly flow: number;
  /** Shear ∂u/∂n on the flat floor (as wide as the mask): in its middle, and its mean. */
  readonly floorMid: number;
  readonly floorMean: number;
}

/**
 * Section of an isotropic etch of depth 1 through a mask of the given width: floor as wide as the mask, sides quarter
 * circles of radius 1 about the mask's edges, lid mask + 2 wide. Shortley–Weller differences on the right half (symmetric
 * in x = 0), n cells over the depth (mask·n/2 whole), by over-relaxation.
 */
export function solveEtched(mask: number, n: number): EtchedSolution {
  const h = 1 / n;
  const flat = Math.round((mask / 2) * n); // cells of half the floor
  const nx = flat + n;
  const stride = nx + 1;
  const u = new Float64Array(stride * (n + 1));
  // Centre of the quarter circle: x = mask/2, y = 1 (the lid); y = 0 is the floor. All in cells of h.
  const sideAt = (j: number) => flat + Math.sqrt(n * n - (n - j) * (n - j));
  const floorAt = (i: number) => (i <= flat ? 0 : n - Math.sqrt(n * n - (i - flat) * (i - flat)));
  const nodes: { k: number; west: number; east: number; south: number; e: number; s: number }[] = [];
  for (let j = 1; j < n; j++) {
    for (let i = 0; i < nx; i++) {
      const e = Math.min(1, sideAt(j) - i);
      const s = Math.min(1, j - floorAt(i));
      if (e <= 1e-12 || s <= 1e-12) continue;
      const k = j * stride + i;
      // A neighbour beyond the wall is the wall itself, where u = 0; index 0 (a floor node) always is 0.
      nodes.push({
        k,
        west: i === 0 ? k + 1 : k - 1,
        east: e < 1 ? 0 : k + 1,
        south: s < 1 ? 0 : k - stride,
        e,
        s,
      });
    }
  }
  const omega = 2 / (1 + Math.sin(Math.PI / (n + 1)));
  for (let sweep = 0; sweep < 40 * n; sweep++) {
    let worst = 0;
    for (const { k, west, east, south, e, s } of nodes) {
      const diagonal = 2 / e + 2 / s;
      const around =
        (2 * u[east]) / (e * (1 + e)) +
        (2 * u[west]) / (1 + e) +
        (2 * u[south]) / (s * (1 + s)) +
        (2 * u[k + stride]) / (1 + s);
      const change = omega * ((around + h * h) / diagonal - u[k]);
      u[k] += change;
      worst = Math.max(worst, Math.abs(change));
    }
    if (worst < 1e-13) break;
  }
  let sum = 0;
  for (let j = 1; j < n; j++) {
    sum += u[j * stride] / 2;
    for (let i = 1; i < nx; i++) sum += u[j * stride + i];
  }
  const shear = (i: number) => (4 * u[stride + i] - u[2 * stride + i]) / (2 * h);
  let floor = (shear(0) + shear(flat)) / 2;
  for (let i = 1; i < flat; i++) floor += shear(i);
  return { area: mask + Math.PI / 2, flow: 2 * sum * h * h, floorMid: shear(0), floorMean: floor / flat };
}
