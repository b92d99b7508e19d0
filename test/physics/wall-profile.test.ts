import { describe, expect, it } from 'vitest';
import type { WallProfile } from '../../src/physics/wall-profile.ts';
import { longWallProfile, shareAbove, shortWallProfile } from '../../src/physics/wall-profile.ts';

const PROFILES: readonly (readonly [string, WallProfile])[] = [1, 1.3, 2, 5, 10, 1000].flatMap((aspect) => [
  [`long wall of ${aspect}:1`, longWallProfile(aspect)] as const,
  [`short wall of ${aspect}:1`, shortWallProfile(aspect)] as const,
]);

describe.each(PROFILES)('the %s', (_, profile) => {
  it('has a slope that is the derivative of its value', () => {
    for (const fraction of [0.01, 0.1, 0.3, 0.6, 0.9]) {
      const x = fraction * Math.min(profile.half, 4);
      const d = 1e-5 * x;
      const difference = (profile.at(x + d).value - profile.at(x - d).value) / (2 * d);
      expect(profile.at(x).slope).toBeCloseTo(difference, 8);
    }
    expect(Math.abs(profile.at(profile.half).slope)).toBeLessThan(1e-15);
  });

  it('rises like ½ x ln(1/x) out of the corner', () => {
    for (const x of [1e-3, 1e-6, 1e-9]) {
      const { value } = profile.at(x);
      // The next term is of order x; both walls share the logarithm.
      expect(Math.abs(value / x - 0.5 * Math.log(1 / x))).toBeLessThan(1.3);
    }
    expect(profile.at(0).value).toBe(0);
  });

  it('gives back the share whose shear was asked, to 1e-12 or to what a double of that shear can tell', () => {
    for (const share of [0, 1e-6, 0.01, 0.2, 0.5, 0.8, 0.99, 1 - 1e-9]) {
      const x = (1 - share) * profile.half;
      const { value, slope } = profile.at(x);
      const readable = (8 * Number.EPSILON * value) / (slope * profile.half);
      // Next to the middle the slope is nought, and the share is known to the root of a double's precision.
      const tolerance = share < 0.01 || readable > 1e-9 ? 1 : Math.max(1e-12, readable);
      expect(Math.abs(shareAbove(profile, value) - share)).toBeLessThan(tolerance);
      const found = profile.at((1 - shareAbove(profile, value)) * profile.half).value;
      expect(Math.abs(found / value - 1)).toBeLessThan(share > 0.999 ? 1e-6 : 1e-12);
    }
  });

  it('is wholly above nought and nowhere above its peak', () => {
    expect(shareAbove(profile, 0)).toBe(1);
    expect(shareAbove(profile, -1)).toBe(1);
    expect(shareAbove(profile, profile.at(profile.half).value)).toBe(0);
    expect(shareAbove(profile, Infinity)).toBe(0);
  });
});

it('both series of the two walls meet where they change over', () => {
  // The long wall changes series at x = ln(1 + √2).
  const profile = longWallProfile(1000);
  const at = Math.log(1 + Math.SQRT2);
  const [before, after] = [profile.at(at - 1e-9), profile.at(at + 1e-9)];
  expect(after.value - before.value).toBeCloseTo(2e-9 * before.slope, 15);
});
