import {
  glycerolDensity,
  glycerolViscosity,
  massFractionFromVolume,
  waterDensity,
  waterViscosity,
} from '../physics/fluid.ts';
import { type KeyPath, pathText } from '../runsheet/path-text.ts';
import { lineAt } from '../runsheet/tree.ts';
import type { FluidSpec, RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';
import { DEFAULT_TEMPERATURE_K } from './defaults.ts';
import type { Fluid } from './types.ts';

/**
 * The fluid of the chip at the chip's temperature: water at 25 °C when the run sheet says nothing.
 * @throws InputError when the temperature, or that of a tubing piece, is outside what the published values cover
 */
export function resolveFluid(sheet: RunSheet | null): Fluid {
  const temperatureK = sheet?.temperatureK ?? DEFAULT_TEMPERATURE_K;
  const spec: FluidSpec = sheet?.fluid ?? { kind: 'water' };
  if (sheet === null) return fluidOf(spec, temperatureK, false);
  const fluid = known(sheet, sheet.temperatureK === null ? ['fluid'] : ['temperature'], () =>
    fluidOf(spec, temperatureK, sheet.temperatureK !== null),
  );
  for (const [name, port] of Object.entries(sheet.ports)) {
    for (const [i, piece] of port.tubing.entries()) {
      if (piece.temperatureK === null) continue;
      const at = piece.temperatureK;
      // One piece may be written without a list.
      const path =
        lineAt(sheet.tree, ['ports', name, 'tubing', i]) === null
          ? ['ports', name, 'tubing']
          : ['ports', name, 'tubing', i];
      known(sheet, [...path, 'temperature'], () => viscosityAt(fluid, at));
    }
  }
  return fluid;
}

/** Viscosity (Pa s) of the same fluid at another temperature (K), as in tubing. */
export function viscosityAt({ mixture, viscosityPaS }: Fluid, temperatureK: number): number {
  switch (mixture.kind) {
    case 'water':
      return waterViscosity(temperatureK);
    case 'glycerol':
      return glycerolViscosity(temperatureK, mixture.massShare);
    case 'custom':
      return viscosityPaS;
    default:
      return mixture satisfies never;
  }
}

/** Density (kg/m³) of the same fluid at another temperature (K). */
export function densityAt({ mixture, densityKgM3 }: Fluid, temperatureK: number): number {
  switch (mixture.kind) {
    case 'water':
      return waterDensity(temperatureK);
    case 'glycerol':
      return glycerolDensity(temperatureK, mixture.massShare);
    case 'custom':
      return densityKgM3;
    default:
      return mixture satisfies never;
  }
}

/** Whether the fluid is another at another temperature. */
export function feelsTemperature({ mixture }: Fluid): boolean {
  return mixture.kind !== 'custom';
}

function fluidOf(spec: FluidSpec, temperatureK: number, temperatureGiven: boolean): Fluid {
  switch (spec.kind) {
    case 'water':
      return {
        name: 'water',
        temperatureK,
        viscosityPaS: waterViscosity(temperatureK),
        densityKgM3: waterDensity(temperatureK),
        source: 'IAPWS SR6-08(2011)',
        mixture: { kind: 'water' },
      };
    case 'custom':
      return {
        name: 'as given',
        temperatureK,
        viscosityPaS: spec.viscosityPaS,
        densityKgM3: spec.densityKgM3,
        source: temperatureGiven ? 'run sheet; the temperature given is ignored' : 'run sheet',
        mixture: { kind: 'custom' },
      };
    case 'glycerol': {
      const mass = spec.by === 'mass' ? spec.share : massFractionFromVolume(spec.share, temperatureK);
      const percent = Number((spec.share * 100).toPrecision(6));
      return {
        name: `glycerol in water, ${percent} % by ${spec.by}`,
        temperatureK,
        viscosityPaS: glycerolViscosity(temperatureK, mass),
        densityKgM3: glycerolDensity(temperatureK, mass),
        source: 'viscosity: Cheng 2008; density: Volk & Kähler 2018',
        mixture: { kind: 'glycerol', massShare: mass },
      };
    }
    default:
      return spec satisfies never;
  }
}

function known<T>(sheet: RunSheet, path: KeyPath, value: () => T): T {
  try {
    return value();
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    return refuse(sheet, path, `${pathText(path)}: ${error.message}`, { cause: error });
  }
}
