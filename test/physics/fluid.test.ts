import { describe, expect, it } from 'vitest';
import {
  glycerolDensity,
  glycerolViscosity,
  massFractionFromVolume,
  waterDensity,
  waterViscosity,
} from '../../src/physics/fluid.ts';

describe('water', () => {
  it('is known at both ends of its range and refused beyond, with the range in the message', () => {
    for (const t of [253.15, 383.15]) {
      expect(waterViscosity(t)).toBeGreaterThan(0);
      expect(waterDensity(t)).toBeGreaterThan(900);
    }
    for (const t of [253.14, 383.16, Number.NaN]) {
      expect(() => waterViscosity(t)).toThrow(RangeError);
      expect(() => waterDensity(t)).toThrow(
        /water are known from -20 °C to 110 °C \(253\.15 K to 383\.15 K\), not at/,
      );
    }
  });

  it('gets thinner with every degree and is densest near 4 °C', () => {
    for (let t = 254.15; t <= 383.15; t++) expect(waterViscosity(t)).toBeLessThan(waterViscosity(t - 1));
    expect(waterDensity(277.13)).toBeGreaterThan(waterDensity(276.13));
    expect(waterDensity(277.13)).toBeGreaterThan(waterDensity(278.13));
  });
});

describe('glycerol in water', () => {
  it('gets thicker and denser with every share of glycerol', () => {
    for (const t of [273.15, 293.15, 373.15]) {
      for (let c = 0.05; c <= 1.0001; c += 0.05) {
        const share = Math.min(1, c);
        expect(glycerolViscosity(t, share)).toBeGreaterThan(glycerolViscosity(t, share - 0.05));
        expect(glycerolDensity(t, share)).toBeGreaterThan(glycerolDensity(t, share - 0.05));
      }
    }
  });

  it('has pure limits: κ and the mixing term vanish', () => {
    expect(glycerolDensity(293.15, 1)).toBeCloseTo(1273.3 - 0.6121 * 20, 6);
    expect(glycerolDensity(277.13, 0)).toBeCloseTo(1000, 6);
  });

  it('by volume and by mass agree at the ends and by mass weighs more between', () => {
    expect(massFractionFromVolume(0, 293.15)).toBe(0);
    expect(massFractionFromVolume(1, 293.15)).toBe(1);
    expect(massFractionFromVolume(0.5, 293.15)).toBeGreaterThan(0.5);
  });

  it('is refused outside 0 °C to 100 °C and outside 0 % to 100 %', () => {
    expect(() => glycerolViscosity(273.1, 0.3)).toThrow(/known from 0 °C to 100 °C .* not at -0\.05 °C/);
    expect(() => glycerolDensity(373.2, 0.3)).toThrow(RangeError);
    expect(() => glycerolViscosity(293.15, 1.2)).toThrow(
      /share of glycerol by mass lies between 0 % and 100 %, not 120 %/,
    );
    expect(() => massFractionFromVolume(-0.1, 293.15)).toThrow(/by volume/);
    expect(() => glycerolDensity(293.15, Number.NaN)).toThrow(RangeError);
  });
});
