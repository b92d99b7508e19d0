import { describe, expect, it } from 'vitest';
import {
  glycerolDensity,
  glycerolViscosity,
  massFractionFromVolume,
  waterDensity,
  waterViscosity,
} from '../../src/physics/fluid.ts';

describe('water: IAPWS SR6-08(2011), verification table (seen)', () => {
  it.each([
    [260, 997.06836, 3058.36075],
    [298.15, 997.047013, 889.996774],
    [375, 957.00971, 276.207245],
  ])('%d K: %d kg/m³ and %d µPa s to the printed digits', (temperature, density, viscosity) => {
    expect(waterDensity(temperature)).toBeCloseTo(density, 6);
    expect(Math.abs((waterViscosity(temperature) * 1e6) / viscosity - 1)).toBeLessThan(2e-9);
  });

  it('20 °C: 1001.56726 µPa s, 37 °C: 691.303420 µPa s (computed from the same formula)', () => {
    expect(waterViscosity(293.15) * 1e6).toBeCloseTo(1001.56726, 5);
    expect(waterViscosity(310.15) * 1e6).toBeCloseTo(691.30342, 5);
  });
});

describe('glycerol in water', () => {
  // N.-S. Cheng, Ind. Eng. Chem. Res. 47 (2008) 3285: constants seen, values computed from them.
  it.each([
    [0.3, 2.45502673],
    [0.5, 6.002250305],
    [1, 1413.830656],
  ])('Cheng 2008 at 20 °C, mass fraction %d: %d mPa s', (fraction, viscosity) => {
    expect((glycerolViscosity(293.15, fraction) * 1e3) / viscosity).toBeCloseTo(1, 8);
  });

  // J. B. Segur & H. E. Oberstar, Ind. Eng. Chem. 43 (1951) 2117, measured at 20 °C (seen), two or three figures.
  it.each([
    [0.3, 2.5],
    [0.5, 6.0],
    [0.8, 60.1],
    [1, 1410],
  ])(
    'is within 3 %% of Segur & Oberstar 1951 at 20 °C, mass fraction %d: %d mPa s',
    (fraction, viscosity) => {
      expect(Math.abs((glycerolViscosity(293.15, fraction) * 1e3) / viscosity - 1)).toBeLessThan(0.03);
    },
  );

  it('has a water limb 0.3 % off IAPWS at 20 °C', () => {
    const off = Math.abs(glycerolViscosity(293.15, 0) / waterViscosity(293.15) - 1);
    expect(off).toBeGreaterThan(0.002);
    expect(off).toBeLessThan(0.004);
  });

  // A. Volk & C. J. Kähler, Exp. Fluids 59 (2018) 75: constants seen, value computed from them.
  it('Volk & Kähler 2018 at 20 °C, half by mass: 1126.22620 kg/m³', () => {
    expect(glycerolDensity(293.15, 0.5)).toBeCloseTo(1126.2262, 4);
  });

  it('has a water limb within 0.03 % of IAPWS from 0 °C to 100 °C', () => {
    for (let t = 273.15; t <= 373.15; t += 5) {
      expect(Math.abs(glycerolDensity(t, 0) / waterDensity(t) - 1)).toBeLessThan(3e-4);
    }
  });

  it('30 % by volume at 20 °C is 35.1 % by mass: 0.3 ρ_g against 0.7 ρ_w of the pure liquids (computed)', () => {
    // ρ_g = 1261.058, ρ_w = 1000 (1 − (16.02/615)^1.71) = 998.0506 kg/m³.
    expect(massFractionFromVolume(0.3, 293.15)).toBeCloseTo(378.3174 / (378.3174 + 698.63545), 5);
  });
});
