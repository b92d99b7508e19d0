import { DEFAULT_TEMPERATURE_K } from '../chip/defaults.ts';
import { InputError } from '../errors.ts';
import { waterDensity, waterViscosity } from '../physics/fluid.ts';
import { type SectionFluid, sectionText } from '../report/section-text.ts';
import { parseQuantity, type Quantity, QuantityError } from '../runsheet/units.ts';
import { computeSection, type Given, type SectionInput, type SectionState } from '../section/section.ts';
import { RESULT_VERSION, VERSION } from '../version.ts';
import type { Io } from './io.ts';

/** What commander hands over: texts with units. */
export interface SectionOptions {
  readonly width: string;
  readonly depth: string;
  readonly length: string;
  readonly flow?: string;
  readonly pressure?: string;
  readonly wallShear?: string;
  readonly viscosity?: string;
  readonly density?: string;
  readonly temperature?: string;
  readonly profile: 'rectangle' | 'isotropic';
  readonly json?: boolean;
}

/** `rillcheck section`: one duct on stdout. Errors: InputError naming the option. */
export async function section(options: SectionOptions, io: Io): Promise<number> {
  const { fluid, viscosityPaS, densityKgM3 } = fluidOf(options);
  const input: SectionInput = {
    widthM: above0('--width', options.width, 'length'),
    depthM: above0('--depth', options.depth, 'length'),
    lengthM: above0('--length', options.length, 'length', 'mm'),
    profile: options.profile,
    viscosityPaS,
    densityKgM3,
    given: givenOf(options),
  };
  const state = naming('section', () => computeSection(input));
  await io.out(
    options.json === true ? sectionJson(input, state, fluid) : sectionText(input, state, fluid, io.columns),
  );
  return 0;
}

function givenOf({ flow, pressure, wallShear }: SectionOptions): Given {
  const given = [
    flow === undefined ? [] : [['--flow', flow]],
    pressure === undefined ? [] : [['--pressure', pressure]],
    wallShear === undefined ? [] : [['--wall-shear', wallShear]],
  ].flat();
  if (given.length !== 1) {
    const what =
      given.length === 0 ? 'none is given' : `${given.map(([option]) => option).join(' and ')} are given`;
    throw new InputError(
      'section',
      `needs exactly one of --flow, --pressure and --wall-shear (${what}); write for example --flow "2 uL/min"`,
    );
  }
  const [[option, text]] = given;
  switch (option) {
    case '--flow':
      return { kind: 'flow', flowM3s: above0(option, text, 'flow') };
    case '--pressure':
      return { kind: 'pressure', pressurePa: above0(option, text, 'pressure') };
    default:
      return { kind: 'wall_shear', shearPa: above0(option, text, 'wall_shear') };
  }
}

interface Filling {
  readonly fluid: SectionFluid;
  readonly viscosityPaS: number;
  readonly densityKgM3: number;
}

/** Water at 25 °C unless said otherwise; a viscosity of one's own needs a density too, and then has no temperature. */
function fluidOf({ viscosity, density, temperature }: SectionOptions): Filling {
  if (viscosity === undefined && density === undefined) {
    const temperatureK =
      temperature === undefined ? DEFAULT_TEMPERATURE_K : read('--temperature', temperature, 'temperature');
    return naming('--temperature', () => ({
      fluid: { name: 'water', temperatureK },
      viscosityPaS: waterViscosity(temperatureK),
      densityKgM3: waterDensity(temperatureK),
    }));
  }
  if (temperature !== undefined) {
    throw new InputError(
      '--temperature',
      'says nothing about a fluid given by viscosity and density; leave it out, or leave those out for water',
    );
  }
  if (viscosity === undefined) throw needed('--viscosity', '--density', '0.94 mPa s');
  if (density === undefined) throw needed('--density', '--viscosity', '1003 kg/m^3');
  return {
    fluid: { name: 'as given', temperatureK: null },
    viscosityPaS: above0('--viscosity', viscosity, 'viscosity'),
    densityKgM3: above0('--density', density, 'density'),
  };
}

function needed(option: string, other: string, example: string): InputError {
  return new InputError(option, `is needed with ${other}; write for example ${option} "${example}"`);
}

function above0(option: string, text: string, quantity: Quantity, exampleUnit?: string): number {
  const value = read(option, text, quantity, exampleUnit);
  if (value > 0) return value;
  throw new InputError(option, `${JSON.stringify(text)} is not above 0`);
}

function read(option: string, text: string, quantity: Quantity, exampleUnit?: string): number {
  return naming(option, () => parseQuantity(text, quantity, exampleUnit));
}

/** What is made, or the error that names the option it comes from. */
function naming<T>(option: string, make: () => T): T {
  try {
    return make();
  } catch (error) {
    if (!(error instanceof QuantityError || error instanceof RangeError)) throw error;
    throw new InputError(option, error.message, { cause: error });
  }
}

/** One JSON document, SI units, unit in the key. */
function sectionJson(input: SectionInput, state: SectionState, fluid: SectionFluid): string {
  const { temperatureK } = fluid;
  const document = {
    tool: { name: 'rillcheck', version: VERSION, result_version: RESULT_VERSION },
    fluid: {
      name: fluid.name,
      temperature_c: temperatureK === null ? null : Number((temperatureK - 273.15).toFixed(9)),
      viscosity_pa_s: input.viscosityPaS,
      density_kg_m3: input.densityKgM3,
    },
    profile: input.profile,
    width_m: input.widthM,
    duct_width_m: state.ductWidthM,
    depth_m: input.depthM,
    length_m: input.lengthM,
    given: input.given.kind,
    resistance_pa_s_m3: state.resistance,
    flow_m3_s: state.flowM3s,
    pressure_drop_pa: state.pressurePa,
    mean_velocity_m_s: state.meanVelocity,
    peak_velocity_m_s: state.peakVelocity,
    reynolds: state.reynolds,
    entrance_length_m: state.entranceM,
    wall_shear_floor_mean_pa: state.floorMeanPa,
    wall_shear_floor_peak_pa: state.floorPeakPa,
    wall_shear_side_mean_pa: state.sideMeanPa,
    wall_shear_side_peak_pa: state.sidePeakPa,
    residence_time_s: state.residenceS,
    fastest_time_s: state.fastestS,
    volume_m3: state.volumeM3,
    parallel_plates: {
      resistance_pa_s_m3: state.plates.resistance,
      wall_shear_pa: state.plates.shearPa,
      resistance_ratio: state.plates.resistance / state.resistance,
    },
  };
  return `${JSON.stringify(document, refuseNonFinite, 2)}\n`;
}

function refuseNonFinite(key: string, value: unknown): unknown {
  if (typeof value === 'number' && !Number.isFinite(value))
    throw new InputError(
      'section',
      `${key} comes out beyond all numbers (${value}); give quantities of a usual size`,
    );
  return value;
}
