/** The upright rectangle round all that was added to it; left > right before anything is. */
export class Bounds {
  left = Infinity;
  top = Infinity;
  right = -Infinity;
  bottom = -Infinity;

  /** A place, and what reaches so far from it along the axes. */
  add(x: number, y: number, reach = 0): void {
    this.left = Math.min(this.left, x - reach);
    this.top = Math.min(this.top, y - reach);
    this.right = Math.max(this.right, x + reach);
    this.bottom = Math.max(this.bottom, y + reach);
  }

  /** The same for each of x0 y0 x1 y1 … */
  addLine(points: ArrayLike<number>, reach = 0): void {
    for (let i = 0; i < points.length; i += 2) this.add(points[i], points[i + 1], reach);
  }
}
