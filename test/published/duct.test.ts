import { describe, expect, it } from 'vitest';
import type { DuctForm } from '../../src/physics/duct.ts';
import { ductForm } from '../../src/physics/duct.ts';
import { resistancePerLength } from '../../src/physics/duct-state.ts';
import { floorShearAt } from '../physics/wall-shear.ts';

/** Fanning friction factor × Reynolds on the hydraulic diameter: G D_h²/(2 µ u_mean). */
function frictionReynolds(form: DuctForm): number {
  return (form.resistance * form.areaM2 * form.hydraulicDiameterM ** 2) / 2;
}

/** Wall shear in units of τ_p = 6µQ/(w h²), the shear of plates, from shear per gradient. */
function overPlates(form: DuctForm, shearPerGradientM: number): number {
  return (shearPerGradientM * form.resistance * form.widthM * form.depthM ** 2) / 6;
}

function perimeterMean(form: DuctForm): number {
  return (form.floorMean * form.widthM + form.sideMean * form.depthM) / (form.widthM + form.depthM);
}

// R. K. Shah & A. L. London, Laminar Flow Forced Convection in Ducts, Academic Press 1978, ch. VII: f Re to 5 decimals
// (from memory). The other columns are computed to 40 digits from the series. Column a is short side/long side.
const SHAH_LONDON = [
  [1, 14.22708, 14.2270768848, 2.09625601468, 1.6012918459, 1.6012918459, 1.1855897404],
  [0.5, 15.54806, 15.5480561466, 1.99179634436, 1.3556839964, 1.077818469, 0.9717535092],
  [0.25, 18.23278, 18.2327768307, 1.77368137631, 1.1834361577, 0.8813079668, 0.9496237933],
  [0.2, 19.0705, 19.0704979226, 1.71496952411, 1.1435097757, 0.849537477, 0.9535248961],
  [0.125, 20.58464, 20.5846440615, 1.62826578807, 1.0855122022, null, null],
  [0.1, 21.16888, 21.168876827, 1.60089581207, 1.067263946, 0.7923943076, 0.9702401879],
] as const;

describe.each(SHAH_LONDON)(
  'Shah & London, sides %d : 1',
  (a, printed, fRe, peak, longMid, shortMid, perimeter) => {
    const form = ductForm(1 / a, 1);

    it('f Re is the printed one to 5 decimals and the 40-digit one to 12 figures', () => {
      expect(Math.abs(frictionReynolds(form) - printed)).toBeLessThan(0.5001e-5);
      expect(frictionReynolds(form)).toBeCloseTo(fRe, 9);
    });

    it('velocity and shear are the 40-digit ones', () => {
      expect(form.peakOverMean).toBeCloseTo(peak, 10);
      expect(overPlates(form, form.floorPeak)).toBeCloseTo(longMid, 9);
      if (shortMid !== null) expect(overPlates(form, form.sidePeak)).toBeCloseTo(shortMid, 9);
      if (perimeter !== null) expect(overPlates(form, perimeterMean(form))).toBeCloseTo(perimeter, 9);
    });

    it("lies below Shah & London's polynomial (coefficients seen in several texts) by 0.004 % to 0.063 %", () => {
      const fit =
        24 * (1 - 1.3553 * a + 1.9467 * a ** 2 - 1.7012 * a ** 3 + 0.9564 * a ** 4 - 0.2537 * a ** 5);
      const excess = fit / frictionReynolds(form) - 1;
      expect(excess).toBeGreaterThan(0.00003);
      expect(excess).toBeLessThan(0.00064);
    });
  },
);

describe('the limit of parallel plates', () => {
  it('has f Re 24 (Darcy 96/Re on twice the gap, textbook), peak velocity 3/2 and wall shear G h/2', () => {
    const form = ductForm(1e8, 1);
    expect(frictionReynolds(form)).toBeCloseTo(24, 5);
    expect(4 * frictionReynolds(form)).toBeCloseTo(96, 4);
    expect(form.peakOverMean).toBeCloseTo(1.5, 7);
    expect(overPlates(form, form.floorPeak)).toBeCloseTo(1, 7);
    expect(form.floorPeak).toBeCloseTo(0.5, 14);
  });

  it('has a side whose middle bears 8 Catalan/π² of G h/2 (computed)', () => {
    expect(ductForm(1e8, 1).sidePeak / 0.5).toBeCloseTo((8 * 0.915965594177219) / Math.PI ** 2, 13);
  });
});

describe('the torsion analogy', () => {
  // S. P. Timoshenko & J. N. Goodier, Theory of Elasticity, table of β (seen): R = 4 µL/(β w h³).
  it.each([
    [1, 0.141],
    [2, 0.229],
    [3, 0.263],
    [4, 0.281],
    [10, 0.313],
  ])('β of %d : 1 is %f to 3 decimals', (aspect, beta) => {
    // The printed 0.313 of 10:1 is the exact 0.3123 rounded up.
    expect(Math.abs(4 / (aspect * ductForm(aspect, 1).resistance) - beta)).toBeLessThan(0.0008);
  });
});

describe('resistances', () => {
  // H. Bruus, Theoretical Microfluidics, OUP 2008, table of resistances at 1 mPa s and 1 mm (from memory), 1e11 Pa s/m³.
  it('rectangle 100 × 300 µm and square 100 µm are those of Bruus to the 2 decimals printed', () => {
    expect(resistancePerLength(ductForm(300e-6, 100e-6), { viscosityPaS: 1e-3 }) * 1e-3).toBeGreaterThan(
      0.505e11,
    );
    expect(resistancePerLength(ductForm(300e-6, 100e-6), { viscosityPaS: 1e-3 }) * 1e-3).toBeLessThan(
      0.515e11,
    );
    // 2.8454… as printed is cut to 2.84, not rounded to 2.85.
    expect(
      Math.floor(resistancePerLength(ductForm(100e-6, 100e-6), { viscosityPaS: 1e-3 }) * 1e-3 * 1e-9),
    ).toBe(284);
  });

  it('plates 100 × 300 µm are those of Bruus: the flat-duct part of the series', () => {
    // R of plates is 12 µL/(w h³) and the rectangle's is that over F.
    const plates = (12 * 1e-3 * 1e-3) / (300e-6 * 100e-6 ** 3);
    expect(plates / 1e11).toBeCloseTo(0.4, 10);
    const form = ductForm(300e-6, 100e-6);
    expect(
      plates / (resistancePerLength(ductForm(300e-6, 100e-6), { viscosityPaS: 1e-3 }) * 1e-3),
    ).toBeCloseTo(12 / (form.resistance * 300e-6 * 100e-6 ** 3), 12);
  });

  it('the square constant R h⁴/(µL) is 28.4541537695623 (computed to 40 digits)', () => {
    expect(ductForm(1, 1).resistance).toBeCloseTo(28.4541537695623, 13);
  });

  // Exact series, computed to 40 digits, 1 mPa s.
  it.each([
    [100e-6, 50e-6, 10e-3, 1.39932505319e13],
    [50e-6, 100e-6, 10e-3, 1.39932505319e13],
    [500e-6, 50e-6, 20e-3, 4.09829455372e12],
    [200e-6, 100e-6, 10e-3, 8.74578158247e11],
  ])('%d × %d m, %d m long: %d Pa s/m³ to 12 figures', (width, depth, length, resistance) => {
    expect(
      (resistancePerLength(ductForm(width, depth), { viscosityPaS: 1e-3 }) * length) / resistance,
    ).toBeCloseTo(1, 11);
  });

  it('are neither the short formula nor that of the hydraulic diameter', () => {
    const short = (w: number, h: number) => 12 / (w * h ** 3 * (1 - (0.63 * h) / w));
    expect(short(1, 1) / ductForm(1, 1).resistance - 1).toBeCloseTo(0.1398, 4);
    expect(short(2, 1) / ductForm(2, 1).resistance - 1).toBeCloseTo(0.00153, 5);
    const hydraulic = (form: DuctForm) => 32 / (form.areaM2 * form.hydraulicDiameterM ** 2);
    expect(hydraulic(ductForm(1, 1)) / ductForm(1, 1).resistance - 1).toBeCloseTo(0.125, 3);
    expect(hydraulic(ductForm(20, 1)) / ductForm(20, 1).resistance - 1).toBeLessThan(-0.28);
  });
});

describe('worked examples at 1 mPa s (computed to 40 digits)', () => {
  it('1 mm × 0.1 mm at 100 µL/min: plates bear 1 Pa, the middle of the floor 1.06726394596 Pa, the perimeter 0.970240187906 Pa', () => {
    const form = ductForm(1e-3, 1e-4);
    const flow = 100e-9 / 60;
    const gradient = 1e-3 * form.resistance * flow;
    expect((6 * 1e-3 * flow) / (1e-3 * 1e-4 ** 2)).toBeCloseTo(1, 14);
    expect(floorShearAt(form, gradient, 0)).toBeCloseTo(1.06726394596, 10);
    expect(gradient * perimeterMean(form)).toBeCloseTo(0.970240187906, 11);
  });

  it('square 100 µm at 1 µL/min: 0.160129184592 Pa in the middle of each wall', () => {
    const form = ductForm(1e-4, 1e-4);
    const gradient = (1e-3 * form.resistance * 1e-9) / 60;
    expect(gradient * form.floorPeak).toBeCloseTo(0.160129184592, 11);
    expect(gradient * form.sidePeak).toBeCloseTo(0.160129184592, 11);
  });

  it('the mean shear over the perimeter is Δp D_h/(4L) exactly (identity)', () => {
    for (const width of [1e-3, 0.2, 1, 7, 1e4]) {
      const form = ductForm(width, 1);
      expect(perimeterMean(form) / (form.hydraulicDiameterM / 4)).toBeCloseTo(1, 14);
    }
  });

  it('the fastest fluid stays u_mean/u_max of the mean time: square 0.477040968753, 2:1 0.502059361054, plates 2/3', () => {
    expect(1 / ductForm(1, 1).peakOverMean).toBeCloseTo(0.477040968753, 12);
    expect(1 / ductForm(2, 1).peakOverMean).toBeCloseTo(0.502059361054, 12);
    expect(1 / ductForm(1e8, 1).peakOverMean).toBeCloseTo(2 / 3, 7);
  });
});

describe('exponents of resistance (computed): d ln R/d ln depth and d ln R/d ln width', () => {
  it.each([
    [1, -2, -2],
    [0.5, -2.55306, -1.44694],
    [0.1, -2.93274, -1.06726],
  ])('depth/width %f: %f and %f', (depth, byDepth, byWidth) => {
    const form = ductForm(1, depth);
    expect(form.byDepth.resistance).toBeCloseTo(byDepth, 5);
    expect(form.byWidth.resistance).toBeCloseTo(byWidth, 5);
  });
});
