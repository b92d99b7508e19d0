/**
 * Barycentric rational interpolation without poles: M. S. Floater & K. Hormann, Numer. Math. 107 (2007) 315.
 * Through every point, infinitely smooth, error of order h^(degree + 1).
 */
export interface RationalNodes {
  /** Ascending, distinct. */
  readonly x: readonly number[];
  readonly weights: readonly number[];
}

/** Weights for nodes x (ascending) that blend polynomials of the degree: w_k = Σ_i (−1)^i Π_{j≠k} 1/(x_k − x_j). */
export function rationalNodes(x: readonly number[], degree: number): RationalNodes {
  const last = x.length - 1;
  const weights = x.map((xk, k) => {
    let weight = 0;
    for (let i = Math.max(0, k - degree); i <= Math.min(k, last - degree); i++) {
      let product = 1;
      for (let j = i; j <= i + degree; j++) if (j !== k) product /= Math.abs(xk - x[j]);
      weight += product;
    }
    return (k - degree) % 2 === 0 ? weight : -weight;
  });
  return { x, weights };
}

/** Value at `at` of the interpolant of y over the nodes; the computed value itself at a node. */
export function interpolate(nodes: RationalNodes, y: readonly number[], at: number): number {
  let above = 0;
  let below = 0;
  for (let k = 0; k < nodes.x.length; k++) {
    const distance = at - nodes.x[k];
    if (distance === 0) return y[k];
    const term = nodes.weights[k] / distance;
    above += term * y[k];
    below += term;
  }
  return above / below;
}
