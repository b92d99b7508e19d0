import { expect, it } from 'vitest';
import { interpolate, rationalNodes } from '../../src/physics/rational-interpolation.ts';

it('goes through every point and gives back any polynomial of its degree', () => {
  const x = [0, 0.3, 0.5, 0.9, 1.7, 2];
  const nodes = rationalNodes(x, 3);
  const cubic = (t: number) => 2 - t + 3 * t * t - 0.7 * t ** 3;
  for (let t = 0; t <= 2; t += 0.01) expect(interpolate(nodes, x.map(cubic), t)).toBeCloseTo(cubic(t), 11);
  x.forEach((t, k) => {
    expect(interpolate(nodes, [5, 1, 4, 1, 5, 9], t)).toBe([5, 1, 4, 1, 5, 9][k]);
  });
});

it('has no pole between its points, where a polynomial would swing', () => {
  const x = Array.from({ length: 11 }, (_, i) => -5 + i);
  const runge = (t: number) => 1 / (1 + t * t);
  const nodes = rationalNodes(x, 3);
  for (let t = -5; t <= 5; t += 0.01)
    expect(Math.abs(interpolate(nodes, x.map(runge), t) - runge(t))).toBeLessThan(0.07);
});
