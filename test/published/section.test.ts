/**
 * Published values through the command line: what a person types, and the JSON that comes back.
 * Sources: R. K. Shah & A. L. London, Laminar Flow Forced Convection in Ducts, Academic Press 1978, ch. VII; H. Bruus, Theoretical Microfluidics, OUP 2008,
 * table of hydraulic resistances (two digits); S. P. Timoshenko & J. N. Goodier, Theory of Elasticity, torsion of rectangular bars (three digits); IAPWS
 * SR6-08(2011). "Computed" values were recomputed by independent 40-digit series.
 */
import { describe, expect, it } from 'vitest';
import { run } from '../../src/cli.ts';
import { fakeIo } from '../commands/fake-io.ts';

const ONE = ['--viscosity', '1 mPa s', '--density', '1000 kg/m^3'];

async function section(...args: string[]) {
  const io = fakeIo('/');
  const code = await run(['section', ...args, '--json'], io);
  expect(io.stderr()).toBe('');
  expect(code).toBe(0);
  return JSON.parse(io.stdout());
}

function duct(widthUm: number, depthUm: number, lengthMm: number, ...rest: string[]) {
  return section(
    '--width',
    `${widthUm} um`,
    '--depth',
    `${depthUm} um`,
    '--length',
    `${lengthMm} mm`,
    ...rest,
  );
}

describe('published values through rillcheck section', () => {
  it('has the friction of Shah & London on the hydraulic diameter, to their five decimals', async () => {
    for (const [aspect, fRe] of [
      [1, 14.22708],
      [0.5, 15.54806],
      [0.25, 18.23278],
      [0.2, 19.0705],
      [0.125, 20.58464],
      [0.1, 21.16888],
    ]) {
      const depthUm = 100;
      const one = await duct(depthUm / aspect, depthUm, 10, '--flow', '1 uL/min', ...ONE);
      // Fanning: f = Δp D/(2 ρ u² L), so f Re = Δp D²/(2 µ u L)
      const D = (2 * one.width_m * one.depth_m) / (one.width_m + one.depth_m);
      const found = (one.pressure_drop_pa * D ** 2) / (2 * 1e-3 * one.mean_velocity_m_s * one.length_m);
      expect(Math.abs(found - fRe)).toBeLessThan(0.6e-5);
    }
  });

  it('has the resistances of Bruus’ table: square 2.84e12, 100 × 300 µm 0.51e11, plates 0.40e11 Pa s/m³ for 1 mm', async () => {
    const flat = await duct(300, 100, 1, '--flow', '1 uL/min', ...ONE);
    expect(flat.resistance_pa_s_m3 / 1e11).toBeCloseTo(0.51, 2);
    expect(flat.parallel_plates.resistance_pa_s_m3 / 1e11).toBeCloseTo(0.4, 2);
    const square = await duct(100, 100, 1, '--flow', '1 uL/min', ...ONE);
    expect(square.resistance_pa_s_m3 / 1e11).toBeCloseTo(2.84, 1);
    // computed: R h⁴/(µ L) = 28.4541537695623
    expect(square.resistance_pa_s_m3 / 28.4541537695623e10).toBeCloseTo(1, 12);
  });

  it('has the torsion constants of Timoshenko & Goodier, R = 4 µ L/(β w h³), whose 0.313 for 10:1 is 0.0007 above the series', async () => {
    for (const [ratio, beta] of [
      [1, 0.141],
      [2, 0.229],
      [3, 0.263],
      [4, 0.281],
      [10, 0.313],
    ]) {
      const one = await duct(100 * ratio, 100, 10, '--flow', '1 uL/min', ...ONE);
      const found = (4 * 1e-3 * 10e-3) / (one.resistance_pa_s_m3 * one.width_m * one.depth_m ** 3);
      expect(Math.abs(found - beta)).toBeLessThan(0.7e-3);
    }
  });

  it('has the computed resistances, the same on either side', async () => {
    const wide = await duct(100, 50, 10, '--pressure', '1 kPa', ...ONE);
    const deep = await duct(50, 100, 10, '--pressure', '1 kPa', ...ONE);
    expect(wide.resistance_pa_s_m3 / 1.39932505319e13).toBeCloseTo(1, 11);
    expect(deep.resistance_pa_s_m3).toBe(wide.resistance_pa_s_m3);
    expect(wide.flow_m3_s).toBeCloseTo(1000 / 1.39932505319e13, 20);
    const flat = await duct(500, 50, 20, '--pressure', '1 kPa', ...ONE);
    expect(flat.resistance_pa_s_m3 / 4.09829455372e12).toBeCloseTo(1, 11);
  });

  it('has the worked wall shear of 1 mm × 0.1 mm at 100 µL/min: plates 1 Pa, middle of the floor 1.06726394596 Pa, perimeter 0.970240187906 Pa', async () => {
    const one = await duct(1000, 100, 10, '--flow', '100 uL/min', ...ONE);
    expect(one.parallel_plates.wall_shear_pa).toBeCloseTo(1, 12);
    expect(one.wall_shear_floor_peak_pa).toBeCloseTo(1.06726394596, 10);
    const perimeter =
      (one.wall_shear_floor_mean_pa * one.width_m + one.wall_shear_side_mean_pa * one.depth_m) /
      (one.width_m + one.depth_m);
    expect(perimeter).toBeCloseTo(0.970240187906, 11);
    const square = await duct(100, 100, 10, '--flow', '1 uL/min', ...ONE);
    expect(square.wall_shear_floor_peak_pa).toBeCloseTo(0.160129184592, 11);
    expect(square.fastest_time_s / square.residence_time_s).toBeCloseTo(0.477040968753, 11);
  });

  it('has water’s viscosity and density of IAPWS SR6-08 at 25 °C unless told otherwise', async () => {
    const one = await duct(100, 100, 10, '--flow', '1 uL/min');
    expect(one.fluid.viscosity_pa_s * 1e6).toBeCloseTo(889.996774, 5);
    expect(one.fluid.density_kg_m3).toBeCloseTo(997.047013, 5);
    const warm = await duct(100, 100, 10, '--flow', '1 uL/min', '--temperature', '37 degC');
    expect(warm.fluid.viscosity_pa_s * 1e6).toBeCloseTo(691.30342, 4);
  });
});
