import { describe, expect, it } from 'vitest';
import * as table from '../../src/physics/joint-table.ts';
import type { RatioPoint } from '../../src/physics/joints.ts';
import {
  aspectPlace,
  bendK,
  crossK,
  MITRE_MAX_TURN_RAD,
  mitreK,
  STEP_POINTS,
  stepK,
  stepThrough,
  TEE_STRAIGHT_POINTS,
  TEE_TO_WALL_POINTS,
  teeEqualK,
  teeIntoWideK,
  teeStraightThrough,
  teeToWallThrough,
} from '../../src/physics/joints.ts';
import { interpolate, rationalNodes } from '../../src/physics/rational-interpolation.ts';

const QUARTER = Math.PI / 2;
const ASPECTS = table.JOINT_ASPECTS;

/** Every k of a joint by aspect. */
const BY_ASPECT: Readonly<Record<string, (aspect: number) => number>> = {
  'mitre 90°': (a) => mitreK(a, QUARTER).k,
  'mitre 45°': (a) => mitreK(a, QUARTER / 2).k,
  'bend R = w': (a) => bendK(a, 1, QUARTER).k,
  'bend R = 2w': (a) => bendK(a, 2, QUARTER).k,
  'T main': (a) => teeEqualK(a).main,
  'T side': (a) => teeEqualK(a).side,
  'T into 2w side': (a) => teeIntoWideK(a, 2).side,
  'T into 3w side': (a) => teeIntoWideK(a, 3).side,
  'T into 10w main': (a) => teeIntoWideK(a, 10).mainHalf,
  'step 1.2w': (a) => stepK(a, 1.2).k,
  'step 4w': (a) => stepK(a, 4).k,
  'cross straight': (a) => crossK(a).straight,
  'cross turn': (a) => crossK(a).turn,
};

describe('by aspect', () => {
  it.each(Object.entries(BY_ASPECT))(
    '%s runs from its deep to its shallow limit without a jump over 0.004 in a step of 2 %%',
    (_, k) => {
      let last = k(0);
      for (let a = 1e-6; a < 1e6; a *= 1.02) {
        const next = k(a);
        expect(Math.abs(next - last)).toBeLessThan(0.004);
        last = next;
      }
      expect(Math.abs(k(Infinity) - last)).toBeLessThan(1e-4);
      expect(Math.abs(k(1e-300) - k(0))).toBeLessThan(1e-12);
      expect(Math.abs(k(1e300) - k(Infinity))).toBeLessThan(1e-12);
    },
  );

  it('mitres, bends and the side of a T fall all the way, as their computed values do', () => {
    for (const name of ['mitre 90°', 'mitre 45°', 'bend R = w', 'bend R = 2w', 'T side', 'cross turn']) {
      const k = BY_ASPECT[name];
      let last = k(0);
      for (let a = 1e-3; a < 1e3; a *= 1.05) {
        // The deep end is level: there the interpolant may stray by less than the table's uncertainty.
        expect(k(a), `${name} at ${a}`).toBeLessThan(last + 5e-5);
        last = k(a);
      }
    }
  });

  it.each([
    ['MITRE_90', table.MITRE_90, 0.0015],
    ['MITRE_45', table.MITRE_45, 0.0015],
    ['ARC_RADIUS_1', table.ARC_RADIUS_1, 0.002],
    ['ARC_RADIUS_2', table.ARC_RADIUS_2, 0.002],
    ['T side', table.TEE_SYMMETRIC.map((k, i) => k - table.TEE_STRAIGHT[i] / 4), 0.003],
    ['T main', table.TEE_STRAIGHT.map((k) => k / 2), 0.003],
    ['CROSS_STRAIGHT', table.CROSS_STRAIGHT, 0.005],
    ['CROSS_TURN', table.CROSS_TURN, 0.005],
    ...table.STEP.map((row, i) => [`step ${i}`, row, 0.0016] as const),
    ...table.TEE_WIDE_TO_WALL.map((row, i) => [`T to wall ${i}`, row, 0.002] as const),
    ...table.TEE_WIDE_STRAIGHT.map((row, i) => [`T main ${i}`, row.map((k) => k / 2), 0.0023] as const),
  ] as const)('%s, with any one aspect between the limits left out, is found to %d', (_, row, stated) => {
    for (let out = 1; out < ASPECTS.length - 1; out++) {
      const without = <T>(list: readonly T[]) => list.filter((__, i) => i !== out);
      const nodes = rationalNodes(without(ASPECTS).map(aspectPlace), 3);
      const found = interpolate(nodes, without(row), aspectPlace(ASPECTS[out]));
      expect(Math.abs(found - row[out]), `aspect ${ASPECTS[out]}`).toBeLessThan(stated);
    }
  });
});

describe('by width ratio', () => {
  const ratios: number[] = [];
  for (let w = 1; w < 1000; w *= 1.005) ratios.push(w);

  it.each([0, 0.1, 0.5, 1, 3, 30, Infinity])(
    'step and T grow from W = w on without a jump, at aspect %d',
    (aspect) => {
      let last = {
        step: 0,
        symmetric: teeIntoWideK(aspect, 1).symmetric,
        main: teeIntoWideK(aspect, 1).mainHalf,
      };
      for (const ratio of ratios) {
        const tee = teeIntoWideK(aspect, ratio);
        const next = { step: stepK(aspect, ratio).k, symmetric: tee.symmetric, main: tee.mainHalf };
        expect(next.step).toBeGreaterThanOrEqual(last.step);
        expect(next.symmetric).toBeGreaterThan(last.symmetric - 1e-9);
        expect(next.main).toBeGreaterThan(last.main - 1e-9);
        expect(next.main).toBeLessThan(0);
        for (const what of ['step', 'symmetric', 'main'] as const) {
          expect(Math.abs(next[what] - last[what])).toBeLessThan(0.004);
        }
        last = next;
      }
    },
  );

  it('at W = w the T is that of equal ducts, half a width of side to the wall, and a step is nothing', () => {
    for (const aspect of [0, 0.2, 1, 7, Infinity]) {
      const wide = teeIntoWideK(aspect, 1);
      expect(wide.side).toBeCloseTo(teeEqualK(aspect).side + 0.5, 12);
      expect(wide.mainHalf).toBeCloseTo(teeEqualK(aspect).main, 12);
      expect(stepK(aspect, 1)).toEqual({ k: 0, error: 0 });
      expect(stepK(aspect, 1 + 1e-9).k).toBeLessThan(1e-12);
    }
  });

  it('the star of a T gives back the symmetric passage: side + half of one main leg, in one unit', () => {
    // Deep slots: r_W/r_w = (w/W)³; shallow ones: w/W.
    const deep = teeIntoWideK(0, 4);
    expect(deep.side + deep.mainHalf / 2 / 64).toBeCloseTo(0.4124, 12);
    const shallow = teeIntoWideK(Infinity, 4);
    expect(shallow.side + shallow.mainHalf / 2 / 4).toBeCloseTo(0.53729, 12);
  });

  it('with the width of 2 w or 4 w left out the step is found to 0.0012, the T to 0.0029, its main to 0.0017', () => {
    const without = (points: readonly RatioPoint[], ratio: number) =>
      points.filter((point) => point.ratio !== ratio);
    const worst = (through: typeof stepThrough, points: readonly RatioPoint[]) => {
      let largest = 0;
      for (const ratio of [2, 4]) {
        for (const aspect of ASPECTS) {
          const missed = through(without(points, ratio), aspect, ratio) - through(points, aspect, ratio);
          largest = Math.max(largest, Math.abs(missed));
        }
      }
      return largest;
    };
    expect(worst(stepThrough, STEP_POINTS)).toBeLessThan(0.0012);
    expect(worst(teeToWallThrough, TEE_TO_WALL_POINTS)).toBeLessThan(0.0029);
    expect(worst(teeStraightThrough, TEE_STRAIGHT_POINTS)).toBeLessThan(0.0017);
  });

  it('states an error that covers what leaving out a point in aspect and in width ratio costs together', () => {
    expect(stepK(1, 3).error).toBeGreaterThan(0.0016 + 0.0012);
    expect(teeIntoWideK(1, 3).error).toBeGreaterThan(0.002 + 0.0029 + (2 * 0.0023) / 4 / 3);
  });

  it('beyond 10 w it grows by the logarithm of radial spreading and states 0.02 more per factor 2.5', () => {
    for (const of of [
      (a: number, w: number) => stepK(a, w).k,
      (a: number, w: number) => teeIntoWideK(a, w).symmetric,
    ]) {
      expect(of(Infinity, 40) - of(Infinity, 10)).toBeCloseTo(Math.log(4) / Math.PI, 12);
      expect(of(0, 40) - of(0, 10)).toBeCloseTo(0, 12);
      // Square narrow duct: 12/28.4541537695623 of a flat one.
      expect(of(1, 40) - of(1, 10)).toBeCloseTo(((12 / 28.4541537695623) * Math.log(4)) / Math.PI, 12);
    }
    expect(stepK(1, 25).error - stepK(1, 10).error).toBeCloseTo(0.02, 12);
    expect(teeIntoWideK(1, 62.5).error - teeIntoWideK(1, 10).error).toBeCloseTo(0.04, 12);
  });
});

describe('by angle and radius', () => {
  it('a mitre is c₁θ² + c₂θ⁴ at every turn up to 120°, either way round, and states how far that is from the shallow closed form', () => {
    for (const aspect of [0, 1, Infinity]) {
      expect(mitreK(aspect, 0)).toMatchObject({ k: 0 });
      expect(mitreK(aspect, -1)).toEqual(mitreK(aspect, 1));
      const [c45, c90, c120] = [45, 90, 120].map((d) => mitreK(aspect, (d * Math.PI) / 180).k);
      // Through 45° and 90° the quartic at 120° is fixed: x = 4/3.
      const [a, b] = [(16 * c45 - c90) / 3, (4 * c90 - 16 * c45) / 3];
      expect(c120).toBeCloseTo((16 / 9) * a + (256 / 81) * b, 12);
    }
    expect(mitreK(1, (95 * Math.PI) / 180).error).toBeLessThan(0.007);
    expect(mitreK(1, MITRE_MAX_TURN_RAD).error).toBeGreaterThan(0.1);
    expect(() => mitreK(1, 2.2)).toThrow(/up to a turn of 120°, not 126\.05°/);
  });

  it('a bend is proportional to its angle, through both computed radii, and vanishes as it straightens', () => {
    for (const aspect of [0, 1, Infinity]) {
      expect(bendK(aspect, 1.5, Math.PI).k).toBeCloseTo(2 * bendK(aspect, 1.5, QUARTER).k, 14);
      expect(Math.abs(bendK(aspect, 1e6, QUARTER).k)).toBeLessThan(1e-6);
      let last = bendK(aspect, 1, QUARTER).k;
      for (let radius = 1; radius < 200; radius *= 1.02) {
        const { k } = bendK(aspect, radius, QUARTER);
        expect(Math.abs(k - last)).toBeLessThan(0.003);
        last = k;
      }
    }
    expect(bendK(1, 1, QUARTER).error).toBeLessThan(0.01);
    expect(bendK(1, 1, Math.PI).error).toBeGreaterThanOrEqual(0.03);
    expect(() => bendK(1, 0.9, 1)).toThrow(/radius of one width upwards, not 0\.9/);
  });

  it('a bend states 0.0025, up to 0.005 more as it tightens to 2 w, and up to 0.03 more from 5° off the computed angle on', () => {
    const error = (radius: number, degrees: number): number =>
      bendK(1, radius, (degrees * Math.PI) / 180).error;
    expect(error(1, 90)).toBeCloseTo(0.0075, 12);
    expect(error(2, 90)).toBeCloseTo(0.0075, 12);
    expect(error(8, 90)).toBeCloseTo(0.0025 + 0.005 / 4, 12);
    for (const off of [-1, 1]) {
      const own = (degrees: number): number => 0.0075 * Math.min(1, degrees / 90);
      expect(error(1, 90 + 2.5 * off)).toBeCloseTo(own(90 + 2.5 * off) + 0.015, 12);
      expect(error(1, 90 + 5 * off)).toBeCloseTo(own(90 + 5 * off) + 0.03, 12);
      expect(error(1, 90 + 40 * off)).toBeCloseTo(own(90 + 40 * off) + 0.03, 12);
    }
    // vanishes with the bend
    expect(error(1, 9)).toBeCloseTo(0.00075 + 0.006, 12);
    expect(error(1, 0)).toBe(0);
  });
});

it('an aspect or ratio outside what was computed is refused', () => {
  for (const bad of [-1, Number.NaN]) {
    expect(() => teeEqualK(bad)).toThrow(/aspect w\/h lies between 0 and Infinity/);
    expect(() => stepK(bad, 2)).toThrow(RangeError);
  }
  for (const bad of [0.99, Infinity, Number.NaN]) {
    expect(() => stepK(1, bad)).toThrow(/W\/w ≥ 1, finite/);
    expect(() => teeIntoWideK(1, bad)).toThrow(/W\/w ≥ 1, finite/);
  }
});
