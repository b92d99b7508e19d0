/**
 * Quantities as the trade writes them ("12 kPa", "2 µL/min", "15 dyn/cm²") to SI numbers and back.
 *
 * mathjs knows the units; it does not read every spelling, so spellings are unified first, and the units whose
 * value it rounds (mmHg, torr, psi) or lacks (inH2O, cP, thou) are defined here from exact factors:
 * g = 9.80665 m/s², lb = 0.45359237 kg, in = 0.0254 m, atm = 101325 Pa (NIST SP 811, appendix B.8).
 */
import { createUnitClass, type Unit as MathUnit, type UnitCtor } from 'mathjs';
import { nearest } from './nearest.ts';
import { hint, quote } from './quote.ts';

/** Text that is not the quantity asked for. The message says what is wrong and gives a right example; the caller adds where. */
export class QuantityError extends Error {
  override readonly name = 'QuantityError';
}

/**
 * Reads one quantity.
 * @param text number and unit, such as "12 kPa"; "80 %" for a share; a plain number for a ratio
 * @param quantity what is needed
 * @param exampleUnit unit of the example in messages, where the usual one of the quantity would look odd
 * @returns SI value: m, Pa, m³/s, s, m/s, Pa s, kg/m³, K, rad; shares and ratios as fractions of 1. "37 degC" as a temperature is 310.15 K, as a temperature difference 37 K
 * @throws QuantityError
 */
export function parseQuantity(text: string, quantity: Quantity, exampleUnit?: string): number {
  const kind = KINDS[quantity];
  const unitShown = exampleUnit ?? kind.exampleUnit;
  const { value, numberText, unitText } = splitNumber(text, kind, unitShown);
  const example = hint(`${numberText} ${unitShown}`.trim());
  const usual = hint(`${kind.exampleNumber} ${unitShown}`.trim());
  if (kind.plain !== null) {
    if (unitText !== '') throw new QuantityError(`${quote(text)} has a unit; ${kind.plain}; ${example}`);
    refuseBeyond(text, value, quantity, usual);
    return value;
  }
  if (unitText === '') throw new QuantityError(`${quote(text)} has no unit; ${example}`);
  const scale = scaleOf(unitText);
  if (scale === null) {
    const near = nearest(unitText, kind.spellings);
    const guess = near === null || near === unitText ? '' : ` (did you mean ${quote(near)}?)`;
    throw new QuantityError(
      `${quote(text)}: ${quote(unitText)} is not a unit known here${guess}; ${example}`,
    );
  }
  if (scale.dimension !== kind.dimension) {
    throw new QuantityError(
      `${quote(text)} is ${nameOf(scale.dimension)}; ${kind.word} is needed; ${example}`,
    );
  }
  const si = quantity === 'temperature' ? scale.absolute(value) : scale.difference(value);
  if (!Number.isFinite(si)) throw new QuantityError(`${quote(text)} is too large; ${example}`);
  refuseBeyond(text, si, quantity, usual);
  if (quantity === 'temperature' && si <= 0) {
    throw new QuantityError(`${quote(text)} is below absolute zero; ${hint('37 degC')}`);
  }
  return si;
}

function refuseBeyond(text: string, si: number, quantity: Quantity, usual: string): void {
  const size = Math.abs(si);
  const { least, most } = KINDS[quantity];
  if (size > most) throw new QuantityError(`${quote(text)} is too large for a chip; ${usual}`);
  if (size !== 0 && size < least) throw new QuantityError(`${quote(text)} is too small for a chip; ${usual}`);
}

/**
 * SI value of one of a unit: 1e-9/60 for "uL/min" as a flow. Divide an SI value by it to show it in that unit.
 * Not for temperatures in degC, which have an offset.
 * @throws QuantityError when the text is no unit of that quantity
 */
export function unitFactor(unitText: string, quantity: Quantity): number {
  const kind = KINDS[quantity];
  const example = hint(kind.exampleUnit);
  const scale = scaleOf(unitText);
  if (scale === null) {
    const near = nearest(unitText, kind.spellings);
    const guess = near === null ? '' : ` (did you mean ${quote(near)}?)`;
    throw new QuantityError(`${quote(unitText)} is not a unit known here${guess}; ${example}`);
  }
  if (scale.dimension !== kind.dimension) {
    throw new QuantityError(
      `${quote(unitText)} is a unit of ${nameOf(scale.dimension).replace(/^an? /, '')}; one of ${kind.word.replace(/^an? /, '')} is needed; ${example}`,
    );
  }
  return scale.difference(1);
}

/** What a quantity is called in a sentence ("a pressure"), a right example of it ("12 kPa"), its SI unit ("" for a ratio), and whether it is a bare number. */
export function describeQuantity(quantity: Quantity): {
  readonly word: string;
  readonly example: string;
  readonly siUnit: string;
  readonly isBare: boolean;
} {
  const { word, exampleNumber, exampleUnit, siUnit, plain } = KINDS[quantity];
  return { word, example: `${exampleNumber} ${exampleUnit}`.trim(), siUnit, isBare: plain !== null };
}

interface Kind {
  readonly word: string;
  readonly exampleUnit: string;
  readonly exampleNumber: string;
  readonly siUnit: string;
  readonly dimension: string;
  /**
   * Smallest and largest size in SI units (0 is always read): far beyond anything on a chip, and narrow enough that a
   * resistance, with the cube of a depth in it, still fits a double.
   */
  readonly least: number;
  readonly most: number;
  readonly spellings: readonly string[];
  /** Why it has no unit, for a quantity that is a bare number; null for the others. */
  readonly plain: string | null;
}

interface Scale {
  readonly dimension: string;
  readonly difference: (value: number) => number;
  readonly absolute: (value: number) => number;
}

const RATIO = 'ratio';

/**
 * mathjs' own Unit, made by its own factory from plain arithmetic of numbers: `create` would first build its typed functions
 * for complex numbers, fractions and matrices, which takes 0.1 s and is never asked for here.
 */
function unitClass(): UnitCtor {
  // mathjs declares Unit without its static functions; createUnit is documented and there in mathjs 15 (Unit.js).
  const ctor = createUnitClass({
    config: { number: 'number', predictable: false },
    addScalar: (a: number, b: number) => a + b,
    subtractScalar: (a: number, b: number) => a - b,
    multiplyScalar: (a: number, b: number) => a * b,
    divideScalar: (a: number, b: number) => a / b,
    pow: (a: number, b: number) => a ** b,
    abs: Math.abs,
    fix: Math.trunc,
    round: Math.round,
    equal: (a: number, b: number) => a === b,
    isNumeric: (value: unknown) => typeof value === 'number',
    format: String,
    number: Number,
    // Only degrees Fahrenheit are made of a fraction (5/9); no unit here is made of the other two.
    Fraction: PlainFraction,
    Complex: class {},
    BigNumber: class {},
  }) as UnitCtor & {
    createUnit(
      definitions: Readonly<Record<string, string>>,
      options: { readonly override: boolean },
    ): MathUnit;
  };
  ctor.createUnit(
    {
      mmHg: '133.322387415 Pa',
      torr: `${101325 / 760} Pa`,
      psi: `${(0.45359237 * 9.80665) / 0.0254 ** 2} Pa`,
      inH2O: '249.08891 Pa',
      cP: '0.001 Pa s',
      poise: '0.1 Pa s',
      thou: '0.0000254 m',
    },
    { override: true },
  );
  return ctor;
}

/** What mathjs asks of a fraction: that it can be used as a number. */
class PlainFraction {
  private readonly value: number;

  constructor(numerator: number, denominator: number) {
    this.value = numerator / denominator;
  }

  valueOf(): number {
    return this.value;
  }
}

const Unit = unitClass();

const PRESSURES = [
  ...['Pa', 'hPa', 'kPa', 'MPa', 'bar', 'mbar', 'psi', 'mmHg', 'torr'],
  ...['inH2O', 'cmH2O', 'mmH2O', 'dyn/cm^2', 'atm', 'mPa'],
];
const TEMPERATURES = ['degC', '°C', 'K', 'degF'];
const VOLUMES = ['nL', 'uL', 'µL', 'mL', 'L', 'pL'];
const FLOWS = [
  ...VOLUMES.flatMap((volume) => ['s', 'min', 'h', 'hr'].map((time) => `${volume}/${time}`)),
  'm^3/s',
];
const LENGTHS = ['um', 'µm', 'mm', 'cm', 'm', 'nm', 'in', 'thou', 'mil'];
const VELOCITIES = ['m/s', 'cm/s', 'mm/s', 'um/s', 'µm/s', 'mm/min'];
const VISCOSITIES = ['mPa s', 'mPa·s', 'mPa*s', 'mPa.s', 'Pa s', 'cP'];
const DENSITIES = ['kg/m^3', 'kg/m3', 'kg/m³', 'g/mL', 'g/cm^3'];
const DIFFUSIONS = ['m^2/s', 'm2/s', 'm²/s', 'cm^2/s', 'mm^2/s', 'um^2/s', 'µm^2/s', 'µm²/s'];

const KINDS = {
  length: kind('a length', '50 um', 'm', 1e-12, 1e4, LENGTHS),
  pressure: kind('a pressure', '12 kPa', 'Pa', 1e-12, 1e12, PRESSURES),
  wall_shear: kind('a wall shear', '0.3 Pa', 'Pa', 1e-12, 1e12, PRESSURES),
  flow: kind('a flow', '2 uL/min', 'm³/s', 1e-30, 1e6, FLOWS),
  time: kind('a time', '10 s', 's', 1e-12, 1e15, ['s', 'ms', 'min', 'h', 'hr']),
  velocity: kind('a velocity', '1 mm/s', 'm/s', 1e-18, 1e6, VELOCITIES),
  viscosity: kind('a viscosity', '0.94 mPa s', 'Pa s', 1e-9, 1e9, VISCOSITIES),
  density: kind('a density', '1003 kg/m^3', 'kg/m³', 1e-9, 1e9, DENSITIES),
  temperature: kind('a temperature', '37 degC', 'K', 0, 1e6, TEMPERATURES),
  temperature_difference: kind('a temperature difference', '1 degC', 'K', 0, 1e6, TEMPERATURES),
  angle: kind('an angle', '30 deg', 'rad', 0, 1e3, ['deg', '°', 'rad']),
  share: kind('a percentage', '80 %', '', 1e-12, 1e9, ['%']),
  ratio: bare('a plain ratio', 1e-12, 1e12, 'this is a plain ratio'),
  diffusion: kind('a diffusion coefficient', '5e-10 m^2/s', 'm²/s', 1e-30, 1, DIFFUSIONS),
  concentration: bare(
    'a concentration',
    1e-30,
    1e30,
    'a concentration is a bare number, its unit stands under solutes',
  ),
};

export type Quantity = keyof typeof KINDS;

function kind(
  word: string,
  example: string,
  siUnit: string,
  least: number,
  most: number,
  known: readonly string[],
): Kind {
  const [exampleNumber, ...rest] = example.split(' ');
  const dimension = siUnit === '' ? RATIO : dimensionOf(new Unit(1, unify(siUnit)));
  return {
    word,
    exampleNumber,
    exampleUnit: rest.join(' '),
    siUnit,
    dimension,
    least,
    most,
    spellings: known,
    plain: null,
  };
}

function bare(word: string, least: number, most: number, plain: string): Kind {
  return { ...kind(word, '10', '', least, most, []), plain };
}

/** What a wrong dimension is called. */
const NAMES: ReadonlyMap<string, string> = new Map([
  ...(
    [
      ['an area', 'm^2'],
      ['a volume', 'm^3'],
      ['a mass', 'kg'],
      ['a force', 'N'],
      ['a mass flow', 'kg/s'],
      ['a kinematic viscosity', 'm^2/s'],
      ['a rate', 's^-1'],
      ['an electric charge', 'C'],
      ['an energy', 'J'],
      ['a power', 'W'],
      ['a surface tension', 'N/m'],
    ] as const
  ).map(([name, unit]) => [dimensionOf(new Unit(1, unit)), name] as const),
  ...(
    [
      'length',
      'pressure',
      'flow',
      'time',
      'velocity',
      'viscosity',
      'density',
      'temperature',
      'angle',
    ] as const
  ).map((quantity) => [KINDS[quantity].dimension, KINDS[quantity].word] as const),
  [RATIO, 'a percentage'],
]);

function nameOf(dimension: string): string {
  return NAMES.get(dimension) ?? 'something else';
}

const NUMBER = /^([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*(.*)$/;

function splitNumber(
  text: string,
  { exampleNumber }: Kind,
  unitShown: string,
): { readonly value: number; readonly numberText: string; readonly unitText: string } {
  const usual = hint(`${exampleNumber} ${unitShown}`.trim());
  if (text.length > 200) throw new QuantityError(`${quote(text)} is too long for a quantity; ${usual}`);
  const tidy = text
    .replace(/[\s\u00a0\u2009\u202f]+/g, ' ')
    .trim()
    .replace(/^\u2212/, '-');
  if (tidy === '') throw new QuantityError(`is empty; ${usual}`);
  if (/±|\+\/-|\+-/.test(tidy)) {
    throw new QuantityError(
      `${quote(text)} has a ±; give one value here and the spread under tolerances; ${usual}`,
    );
  }
  if (/\d,\d/.test(tidy)) {
    const fixed = tidy.replace(/(\d),(?=\d)/g, '$1.');
    const example = /^[+-]?\d+\.\d+ ?\D*$/.test(fixed) ? hint(fixed) : usual;
    throw new QuantityError(`${quote(text)} has a comma; decimals take a point; ${example}`);
  }
  const match = NUMBER.exec(tidy);
  if (match === null) {
    const wanted = unitShown === '' ? 'a number' : 'a number with a unit';
    throw new QuantityError(`${quote(text)} is not ${wanted}; ${usual}`);
  }
  const numberText = match[1];
  const unitText = match[2].trim();
  if (/^[-+–—:/]?\s*\d/.test(unitText)) {
    throw new QuantityError(`${quote(text)} is more than one number; ${usual}`);
  }
  const value = Number(numberText);
  if (!Number.isFinite(value)) throw new QuantityError(`${quote(text)} is too large; ${usual}`);
  if (value === 0 && /[1-9]/.test(numberText.replace(/[eE].*$/, ''))) {
    throw new QuantityError(`${quote(text)} is too small to hold; ${usual}`);
  }
  return { value: value + 0, numberText, unitText };
}

const scales = new Map<string, Scale | null>();

function scaleOf(unitText: string): Scale | null {
  const known = scales.get(unitText);
  if (known !== undefined) return known;
  const scale = readScale(unitText);
  // A hostile sheet can name many units; the cache stays small whatever it holds.
  if (scales.size < 1000) scales.set(unitText, scale);
  return scale;
}

function readScale(unitText: string): Scale | null {
  const unified = unify(unitText);
  if (unified === '%')
    return { dimension: RATIO, difference: (value) => value / 100, absolute: (value) => value / 100 };
  if (unified.length > 40 || /\d/.test(unified.replace(/H2O/g, '').replace(/\^-?[1-3](?!\d)/g, '')))
    return null;
  const unit = mathUnit(unified);
  if (unit === null) return null;
  const difference = linear(factorOf(unit));
  const offset = unit.units.length === 1 ? unit.units[0].unit.offset : 0;
  return {
    dimension: dimensionOf(unit),
    difference,
    // mathjs: kelvin = (value + offset) × factor, so degC has offset 273.15 and degF 459.67
    absolute: offset === 0 ? difference : (value) => difference(value + offset),
  };
}

/** One spelling for each unit: no µ, no superscript, no dot between units, no space inside cmH2O. */
function unify(unitText: string): string {
  return unitText
    .replace(/[\s\u00a0\u2009\u202f]+/g, ' ')
    .trim()
    .replace(/[\u00b5\u03bc]/g, 'u')
    .replace(/₂/g, '2')
    .replace(/⁻¹/g, '^-1')
    .replace(/⁻²/g, '^-2')
    .replace(/⁻³/g, '^-3')
    .replace(/²/g, '^2')
    .replace(/³/g, '^3')
    .replace(/[·⋅∙•×*]/g, ' ')
    .replace(/(?<=[A-Za-z])\.(?=[A-Za-z])/g, ' ')
    .replace(/(?<=m)([23])(?![\dA-Za-z])/g, '^$1')
    .replace(/(?<=[A-Za-z])(-[123])(?!\d)/g, '^$1')
    .replace(/\b(in|cm|mm) ?H2O\b/g, '$1H2O')
    .replace(/\bmm ?Hg\b/g, 'mmHg')
    .replace(/\bTorr\b/g, 'torr')
    .replace(/\bdynes?\b/g, 'dyn')
    .replace(/(?:°|\bdeg) ?([CF])\b/g, 'deg$1')
    .replace(/℃/g, 'degC')
    .replace(/°/g, 'deg')
    .trim();
}

/** mathjs keeps the factor of each part, the powers and the offset; its declarations leave them out. */
type OpenUnit = MathUnit & {
  readonly dimensions: readonly number[];
  readonly units: readonly {
    readonly unit: { readonly value: number; readonly offset: number };
    readonly prefix: { readonly value: number };
    readonly power: number;
  }[];
};

function mathUnit(unified: string): OpenUnit | null {
  try {
    // The fields of OpenUnit are there on every Unit of mathjs 15 (its Unit.js constructor sets them).
    return new Unit(1, unified) as OpenUnit;
  } catch (error) {
    // mathjs throws plain Errors and SyntaxErrors for text that is no unit: the caller answers with the nearest right one.
    if (error instanceof Error) return null;
    throw error;
  }
}

function dimensionOf(unit: MathUnit): string {
  // See mathUnit: the constructor always sets the dimensions.
  return (unit as OpenUnit).dimensions.join(' ');
}

function factorOf(unit: OpenUnit): number {
  let factor = 1;
  for (const part of unit.units) factor *= (part.unit.value * part.prefix.value) ** part.power;
  return factor;
}

/**
 * Most factors are an integer or one over an integer (1 µL/min = 1/6e10 m³/s). Snapped to it, one correctly
 * rounded division gives the nearest double: "50 um" is 5e-5 and not 4.9999999999999996e-5.
 */
function linear(factor: number): (value: number) => number {
  const whole = Math.round(factor);
  if (whole >= 1 && whole < 2 ** 53 && Math.abs(factor / whole - 1) < SNAP) return (value) => value * whole;
  const parts = Math.round(1 / factor);
  if (parts >= 1 && parts < 2 ** 53 && Math.abs(factor * parts - 1) < SNAP) return (value) => value / parts;
  return (value) => value * factor;
}

/** A few roundings of the products in factorOf; far below the spacing of any two real factors. */
const SNAP = 1e-14;
