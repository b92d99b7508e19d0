import { describe, expect, it } from 'vitest';
import { densityAt, feelsTemperature, viscosityAt } from '../../src/chip/fluid.ts';
import { minWallM } from '../../src/chip/limits.ts';
import {
  glycerolDensity,
  glycerolViscosity,
  massFractionFromVolume,
  waterDensity,
} from '../../src/physics/fluid.ts';
import { assembled, circle, runOf } from './drawing.ts';

/** The least wall, of which depth it may be asked, and every other limit. */
const limitsOf = (sheet: string | null) => {
  const { chip, run } = assembled([circle('p', 0, 0)], sheet);
  return { ...run.limits, minWallM: (depthM: number) => minWallM(chip, depthM) };
};

describe('limits', () => {
  // Usual practice, no source: width, wall, w/d, d/w, margin, gap, pressure.
  for (const [process, values] of [
    ['cast elastomer', [20e-6, 30e-6, 10, 2, 2e-3, 2e-3, 100e3]],
    ['etched glass', [20e-6, 50e-6 + 2 * 80e-6, null, 0.5, 1e-3, 1e-3, 500e3]],
    ['etched silicon', [5e-6, 10e-6, null, 15, 1e-3, 1e-3, 500e3]],
    ['milled thermoplastic', [200e-6, 200e-6, 50, 2.5, 2e-3, 2e-3, 200e3]],
    ['moulded thermoplastic', [50e-6, 100e-6, 50, 2, 2e-3, 2e-3, 300e3]],
  ] as const) {
    it(`of ${process} are the usual ones and say that they have no source`, () => {
      const limits = limitsOf(`process: ${process}`);
      const all = [
        limits.minWidthM,
        limits.minWallM(80e-6),
        limits.maxWidthToDepth,
        limits.maxDepthToWidth,
        limits.edgeMarginM,
        limits.portGapM,
        limits.maxPressurePa,
      ];
      expect(all.map((limit) => limit?.value ?? null)).toEqual(values);
      for (const limit of all)
        if (limit !== null) expect(limit.origin).toBe('typical value, not from your maker');
      expect(limits.stiffnessPa?.value ?? null).toBe(process === 'cast elastomer' ? 1.5e6 : null);
    });
  }

  it('given in the run sheet come before the usual ones', () => {
    const limits = limitsOf('process: etched glass\nlimits: { min_wall: 70 um, max_width_to_depth: 30 }');
    expect(limits.minWallM(80e-6)).toEqual({ value: 70e-6, origin: 'run sheet' });
    expect(limits.maxWidthToDepth).toEqual({ value: 30, origin: 'run sheet' });
    expect(limits.minWidthM!.origin).toBe('typical value, not from your maker');
  });

  it('that nobody gave are none, but for port diameter and Reynolds number', () => {
    const limits = limitsOf(null);
    expect(limits.minWallM(1e-4)).toBeNull();
    expect(limits).toMatchObject({
      minWidthM: null,
      maxPressurePa: null,
      minPressurePa: null,
      minCornerAngleRad: null,
    });
    expect(limits.portDiameterM).toEqual({ value: [0.2e-3, 10e-3], origin: 'default' });
    expect(limits.maxReynolds).toEqual({ value: 1000, origin: 'default' });
  });

  it('of wall need no depth to be known', () => {
    expect(limitsOf('process: etched glass').minWallM(Number.NaN)!.value).toBe(50e-6);
  });
});

describe('fluid', () => {
  const fluidOf = (sheet: string | null) => runOf([circle('p', 0, 0)], sheet).fluid;

  it('is water at 25 °C unless said otherwise', () => {
    // IAPWS SR6-08(2011), verification row 298.15 K: 889.996774 µPa s, 997.047013 kg/m³ (published, seen).
    const fluid = fluidOf(null);
    expect(fluid.viscosityPaS).toBeCloseTo(889.996774e-6, 12);
    expect(fluid.densityKgM3).toBeCloseTo(997.047013, 5);
    expect(fluid.source).toContain('IAPWS');
    expect(viscosityAt(fluid, 310.15)).toBeLessThan(fluid.viscosityPaS);
    expect(densityAt(fluid, 310.15)).toBe(waterDensity(310.15));
    expect(feelsTemperature(fluid)).toBe(true);
  });

  it('is glycerol in water by mass, or by volume of the parts before mixing', () => {
    const T = 293.15;
    const byMass = fluidOf('temperature: 20 degC\nfluid: { glycerol: 50 % by mass }');
    expect(byMass).toMatchObject({
      name: 'glycerol in water, 50 % by mass',
      viscosityPaS: glycerolViscosity(T, 0.5),
      densityKgM3: glycerolDensity(T, 0.5),
    });
    const mass = massFractionFromVolume(0.3, T);
    const byVolume = fluidOf('temperature: 20 degC\nfluid: { glycerol: 30 % by volume }');
    expect(byVolume.viscosityPaS).toBe(glycerolViscosity(T, mass));
    // the share by mass stays what mixing made it, however warm the tubing
    expect(viscosityAt(byVolume, 303.15)).toBe(glycerolViscosity(303.15, mass));
    expect(densityAt(byVolume, 303.15)).toBe(glycerolDensity(303.15, mass));
  });

  it('as given ignores the temperature and says so', () => {
    const fluid = fluidOf('temperature: 300 degC\nfluid: { viscosity: 2 cP, density: 1010 kg/m^3 }');
    expect(fluid).toMatchObject({ name: 'as given', viscosityPaS: 2e-3, densityKgM3: 1010 });
    expect(fluid.source).toBe('run sheet; the temperature given is ignored');
    expect(viscosityAt(fluid, 280)).toBe(2e-3);
    expect(densityAt(fluid, 280)).toBe(1010);
    expect(feelsTemperature(fluid)).toBe(false);
    expect(fluidOf('fluid: { viscosity: 2 cP, density: 1010 kg/m^3 }').source).toBe('run sheet');
  });

  it('is refused outside what is known of it, with the line', () => {
    expect(() => fluidOf('title: x\ntemperature: 120 degC')).toThrow(
      /^c\.run\.yaml:2: temperature: the properties of water are known from/,
    );
    expect(() => fluidOf('temperature: -25 degC')).toThrow(/^c\.run\.yaml:1: temperature: /);
    expect(() => fluidOf('fluid: { glycerol: 10 % by mass }\ntemperature: 101 degC')).toThrow(
      /^c\.run\.yaml:2: temperature: /,
    );
    expect(fluidOf('temperature: -19 degC').densityKgM3).toBe(waterDensity(254.15));
    for (const tubing of [
      '{ bore: 1 mm, length: 1 m, temperature: 200 degC }',
      '[{ bore: 1 mm, length: 1 m, temperature: 200 degC }]',
    ]) {
      expect(() => fluidOf(`title: x\nports:\n  p:\n    tubing: ${tubing}`)).toThrow(
        /^c\.run\.yaml:4: ports\.p\.tubing(\[0\])?\.temperature: the properties of water/,
      );
    }
  });
});
