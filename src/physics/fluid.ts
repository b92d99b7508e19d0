/**
 * Water, and glycerol in water, at atmospheric pressure: viscosity (Pa s) and density (kg/m³) by temperature (K).
 *
 * Sources: IAPWS SR6-08(2011), liquid water at 0.1 MPa; N.-S. Cheng, Ind. Eng. Chem. Res. 47 (2008) 3285, viscosity of
 * glycerol-water; A. Volk & C. J. Kähler, Exp. Fluids 59 (2018) 75, its density. Cheng's own water is 0.3 % off IAPWS, so a
 * mixture of nought glycerol is not exactly water.
 */
import { ZERO_CELSIUS_K } from './constants.ts';

/** Temperatures (K) over which IAPWS SR6-08 holds; below 273.15 K the water is supercooled. */
export const WATER_RANGE_K: readonly [number, number] = [253.15, 383.15];

/** Temperatures (K) over which Cheng's formula holds. */
export const GLYCEROL_RANGE_K: readonly [number, number] = [273.15, 373.15];

/**
 * Viscosity (Pa s) of liquid water at 0.1 MPa, IAPWS SR6-08(2011) eq. 7.
 * @throws RangeError outside 253.15 K to 383.15 K.
 */
export function waterViscosity(temperatureK: number): number {
  refuseTemperature('water', temperatureK, WATER_RANGE_K);
  const t = temperatureK / 300;
  return 1e-6 * (280.68 * t ** -1.9 + 511.45 * t ** -7.7 + 61.131 * t ** -19.6 + 0.45903 * t ** -40);
}

/**
 * Density (kg/m³) of liquid water at 0.1 MPa, IAPWS SR6-08(2011) eq. 1:
 * v = (R·10 K/0.1 MPa)[a5 + Σ a_i α^n_i + Σ b_i β^m_i], α = 10 K/(593 K − T), β = 10 K/(T − 232 K).
 * @throws RangeError outside 253.15 K to 383.15 K.
 */
export function waterDensity(temperatureK: number): number {
  refuseTemperature('water', temperatureK, WATER_RANGE_K);
  const alpha = 10 / (593 - temperatureK);
  const beta = 10 / (temperatureK - 232);
  let sum = 1.93763157e-2;
  for (const [a, n] of WATER_A) sum += a * alpha ** n;
  for (const [b, m] of WATER_B) sum += b * beta ** m;
  // R = 0.46151805 kJ/(kg K); R·10 K/0.1 MPa in m³/kg.
  return 1 / (((0.46151805 * 10) / 0.1 / 1000) * sum);
}

/**
 * Viscosity (Pa s) of glycerol in water at a mass fraction 0 … 1, Cheng 2008.
 * @throws RangeError outside 0 °C to 100 °C, or for a fraction outside 0 … 1.
 */
export function glycerolViscosity(temperatureK: number, massFraction: number): number {
  refuseTemperature('glycerol in water', temperatureK, GLYCEROL_RANGE_K);
  refuseFraction('mass', massFraction);
  const t = temperatureK - ZERO_CELSIUS_K;
  const c = massFraction;
  const water = 1.79 * Math.exp(((-1230 - t) * t) / (36100 + 360 * t));
  const glycerol = 12100 * Math.exp(((-1233 + t) * t) / (9900 + 70 * t));
  const a = 0.705 - 0.0017 * t;
  const b = (4.9 + 0.036 * t) * a ** 2.5;
  const alpha = 1 - c + (a * b * c * (1 - c)) / (a * c + b * (1 - c));
  return 1e-3 * water ** alpha * glycerol ** (1 - alpha);
}

/**
 * Density (kg/m³) of glycerol in water at a mass fraction 0 … 1, Volk & Kähler 2018. Fitted near room temperature (15 °C to
 * 30 °C, from memory of the paper); its water limb stays within 0.03 % of IAPWS from 0 °C to 100 °C, mixtures beyond the
 * fitted range are an extrapolation.
 * @throws RangeError outside 0 °C to 100 °C, or for a fraction outside 0 … 1.
 */
export function glycerolDensity(temperatureK: number, massFraction: number): number {
  refuseTemperature('glycerol in water', temperatureK, GLYCEROL_RANGE_K);
  refuseFraction('mass', massFraction);
  const { water, glycerol } = pureDensities(temperatureK);
  const t = temperatureK - ZERO_CELSIUS_K;
  const c = massFraction;
  // Contraction: the mixture is denser than its parts side by side. sin(π) rounds to 1e-16, never below nought.
  const contraction = 1.78e-6 * t * t - 1.82e-4 * t + 1.41e-2;
  const kappa = 1 + contraction * Math.max(0, Math.sin(Math.PI * c ** 1.31)) ** 0.81;
  const ideal = c === 0 ? water : water + (glycerol - water) / (1 + (glycerol / water) * (1 / c - 1));
  return kappa * ideal;
}

/**
 * Mass fraction of glycerol from its volume fraction. By volume means the volumes of the two pure liquids at this
 * temperature before mixing (30 % = 30 mL glycerol and 70 mL water, which together make less than 100 mL).
 * @throws RangeError outside 0 °C to 100 °C, or for a fraction outside 0 … 1.
 */
export function massFractionFromVolume(volumeFraction: number, temperatureK: number): number {
  refuseTemperature('glycerol in water', temperatureK, GLYCEROL_RANGE_K);
  refuseFraction('volume', volumeFraction);
  const { water, glycerol } = pureDensities(temperatureK);
  const glycerolMass = volumeFraction * glycerol;
  return glycerolMass / (glycerolMass + (1 - volumeFraction) * water);
}

const WATER_A: readonly (readonly [number, number])[] = [
  [6.74458446e3, 4],
  [-2.22521604e5, 5],
  [1.00231247e8, 7],
  [-1.63552118e9, 8],
  [8.32299658e9, 9],
];

const WATER_B: readonly (readonly [number, number])[] = [
  [5.78545292e-3, 1],
  [-1.53195665e-2, 2],
  [3.11337859e-2, 3],
  [-4.23546241e-2, 4],
  [3.38713507e-2, 5],
  [-1.19946761e-2, 6],
];

/** Pure water and pure glycerol by Volk & Kähler 2018. */
function pureDensities(temperatureK: number): { readonly water: number; readonly glycerol: number } {
  const t = temperatureK - ZERO_CELSIUS_K;
  return {
    water: 1000 * (1 - Math.abs((t - 3.98) / 615) ** 1.71),
    glycerol: 1273.3 - 0.6121 * t,
  };
}

function refuseTemperature(
  fluid: string,
  temperatureK: number,
  [low, high]: readonly [number, number],
): void {
  if (temperatureK >= low && temperatureK <= high) return;
  const celsius = (kelvin: number) => `${Number((kelvin - ZERO_CELSIUS_K).toFixed(2))} °C`;
  throw new RangeError(
    `the properties of ${fluid} are known from ${celsius(low)} to ${celsius(high)} (${low} K to ${high} K), not at ${celsius(temperatureK)}`,
  );
}

function refuseFraction(by: 'mass' | 'volume', fraction: number): void {
  if (fraction >= 0 && fraction <= 1) return;
  throw new RangeError(`a share of glycerol by ${by} lies between 0 % and 100 %, not ${fraction * 100} %`);
}
