import { describe, expect, it } from 'vitest';
import {
  describeQuantity,
  parseQuantity,
  type Quantity,
  QuantityError,
  unitFactor,
} from '../../src/runsheet/units.ts';

// Exact factors: SI prefixes; NIST SP 811 (2008), appendix B.8: lb 0.45359237 kg, g 9.80665 m/s², in 0.0254 m,
// atm 101325 Pa, mmHg (conventional) 133.322387415 Pa, inH2O (conventional) 249.08891 Pa (= 25.4 mm × 9.80665 Pa/mm),
// torr = atm/760, dyn/cm² = 0.1 Pa, cP = 1 mPa s.
const SPELLINGS: readonly (readonly [Quantity, number, readonly string[]])[] = [
  [
    'length',
    50e-6,
    ['50 um', '50um', '50 µm', '50 μm', '50.0 um', '5e1 um', '+50 um', '0.05 mm', '.05 mm', '50\u00a0µm'],
  ],
  ['length', 0.0254, ['1 in', '1000 thou', '1000 mil', '25.4 mm', '2.54 cm']],
  [
    'flow',
    2e-9 / 60,
    [
      '2 uL/min',
      '2 µL/min',
      '2 μL/min',
      '2 ul/min',
      '2 µl/min',
      '120 uL/h',
      '120 uL/hr',
      '2 uL min^-1',
      '2 µL·min⁻¹',
      '2 uL min-1',
    ],
  ],
  ['flow', 1e-12, ['1 nL/s', '1 nl/s', '1e-12 m^3/s', '1e-12 m3/s', '1e-12 m³/s', '3.6 uL/h', '60 nL/min']],
  ['flow', 1e-6 / 60, ['1 mL/min', '1 ml/min', '60 mL/hr', '0.001 L/min']],
  ['pressure', 12000, ['12 kPa', '12000 Pa', '0.012 MPa', '120 mbar', '0.12 bar', '120 hPa', '120e2 Pa']],
  ['pressure', 6894.757293168361, ['1 psi', '1psi']],
  ['pressure', 133.322387415, ['1 mmHg', '1 mm Hg']],
  ['pressure', 101325 / 760, ['1 torr', '1 Torr']],
  ['pressure', 249.08891, ['1 inH2O', '1 in H2O', '1 inH₂O']],
  ['pressure', 98.0665, ['1 cmH2O', '1 cm H2O', '10 mmH2O']],
  ['pressure', -30000, ['-30 kPa', '−30 kPa']],
  [
    'wall_shear',
    1.5,
    ['15 dyn/cm^2', '15 dyn/cm2', '15 dyn/cm²', '15 dyne/cm^2', '1.5 Pa', '1500 mPa', '1.5 N/m^2'],
  ],
  [
    'viscosity',
    0.94e-3,
    ['0.94 mPa s', '0.94 mPa·s', '0.94 mPa*s', '0.94 mPa.s', '0.94 mPa⋅s', '0.94 cP', '0.00094 Pa s'],
  ],
  ['density', 1003, ['1003 kg/m^3', '1003 kg/m3', '1003 kg/m³', '1.003 g/mL', '1.003 g/cm^3']],
  ['temperature', 310.15, ['37 degC', '37 °C', '37degC', '37 ℃', '310.15 K', '98.6 degF']],
  ['temperature_difference', 1, ['1 degC', '1 °C', '1 K', '1.8 degF']],
  ['time', 90, ['90 s', '1.5 min', '90000 ms', '0.025 h', '0.025 hr']],
  ['velocity', 1e-3, ['1 mm/s', '1000 um/s', '1000 µm/s', '0.1 cm/s', '60 mm/min']],
  ['angle', Math.PI / 6, ['30 deg', '30°', '30 °']],
  ['share', 0.8, ['80 %', '80%']],
  ['ratio', 10, ['10', '1e1', '10.0']],
  ['diffusion', 5e-10, ['5e-10 m^2/s', '5e-10 m2/s', '5e-10 m²/s', '5e-6 cm^2/s', '500 um^2/s', '500 µm²/s']],
  ['concentration', 10, ['10', '1e1', '+10']],
];

describe('parseQuantity', () => {
  for (const [quantity, si, texts] of SPELLINGS) {
    for (const text of texts) {
      it(`reads "${text}" as a ${quantity} to the last bit or two`, () => {
        expect(Math.abs(parseQuantity(text, quantity) / si - 1)).toBeLessThan(4.5e-16);
      });
    }
  }

  it('reads every unit that the trade writes, as the contract lists them', () => {
    const listed: readonly (readonly [Quantity, string])[] = [
      ['length', 'um µm μm thou in'],
      ['flow', 'uL/min µL/min μL/min ul/min uL/h uL/hr uL/s nL/s nL/min'],
      ['pressure', 'mbar bar psi mmHg torr inH2O cmH2O mmH2O'],
      ['viscosity', 'cP mPa_s mPa·s mPa*s mPa.s'],
      ['wall_shear', 'dyn/cm^2 dyn/cm2 dyn/cm²'],
      ['share', '%'],
      ['temperature', 'degC °C'],
      ['temperature_difference', 'degC °C'],
    ];
    for (const [quantity, units] of listed)
      for (const unit of units.split(' '))
        expect(parseQuantity(`2 ${unit.replace('_', ' ')}`, quantity), unit).toBeGreaterThan(0);
  });

  it('gives the nearest double for factors that are an integer or one over an integer', () => {
    expect(parseQuantity('50 um', 'length')).toBe(5e-5);
    expect(parseQuantity('0.3 mm', 'length')).toBe(3e-4);
    expect(parseQuantity('2 g/cm^3', 'density')).toBe(2000);
    expect(parseQuantity('1 uL/min', 'flow')).toBe(1 / 6e10);
  });

  it('never gives a negative zero', () => {
    expect(Object.is(parseQuantity('-0 Pa', 'pressure'), 0)).toBe(true);
  });

  const WRONG: readonly (readonly [string, Quantity, string])[] = [
    ['12', 'pressure', '"12" has no unit; write for example "12 kPa"'],
    ['0', 'pressure', '"0" has no unit; write for example "0 kPa"'],
    ['12 um', 'pressure', '"12 um" is a length; a pressure is needed; write for example "12 kPa"'],
    ['2 mL', 'flow', '"2 mL" is a volume; a flow is needed; write for example "2 uL/min"'],
    ['2 g/min', 'flow', '"2 g/min" is a mass flow; a flow is needed; write for example "2 uL/min"'],
    [
      '37 C',
      'temperature',
      '"37 C" is an electric charge; a temperature is needed; write for example "37 degC"',
    ],
    ['5 %', 'length', '"5 %" is a percentage; a length is needed; write for example "5 um"'],
    ['0,5 mm', 'length', '"0,5 mm" has a comma; decimals take a point; write for example "0.5 mm"'],
    ['1,000.5 mm', 'length', '"1,000.5 mm" has a comma; decimals take a point; write for example "50 um"'],
    [
      '50 um ± 2 um',
      'length',
      '"50 um ± 2 um" has a ±; give one value here and the spread under tolerances; write for example "50 um"',
    ],
    [
      '50 +/- 2 um',
      'length',
      '"50 +/- 2 um" has a ±; give one value here and the spread under tolerances; write for example "50 um"',
    ],
    [
      '12 kpa',
      'pressure',
      '"12 kpa": "kpa" is not a unit known here (did you mean "kPa"?); write for example "12 kPa"',
    ],
    [
      '2 furlong/fortnite',
      'velocity',
      '"2 furlong/fortnite": "furlong/fortnite" is not a unit known here; write for example "2 mm/s"',
    ],
    ['1 m^1e9', 'length', '"1 m^1e9": "m^1e9" is not a unit known here; write for example "1 um"'],
    [
      '1 __proto__',
      'length',
      '"1 __proto__": "__proto__" is not a unit known here; write for example "1 um"',
    ],
    ['NaN', 'length', '"NaN" is not a number with a unit; write for example "50 um"'],
    ['Infinity m', 'length', '"Infinity m" is not a number with a unit; write for example "50 um"'],
    ['1e400 m', 'length', '"1e400 m" is too large; write for example "50 um"'],
    ['1e308 km', 'length', '"1e308 km" is too large; write for example "1e308 um"'],
    ['1e-400 m', 'length', '"1e-400 m" is too small to hold; write for example "50 um"'],
    ['10-20 um', 'length', '"10-20 um" is more than one number; write for example "50 um"'],
    ['1 000 um', 'length', '"1 000 um" is more than one number; write for example "50 um"'],
    ['1/2 mm', 'length', '"1/2 mm" is more than one number; write for example "50 um"'],
    ['', 'length', 'is empty; write for example "50 um"'],
    ['wide', 'length', '"wide" is not a number with a unit; write for example "50 um"'],
    ['10 um', 'ratio', '"10 um" has a unit; this is a plain ratio; write for example "10"'],
    ['-300 degC', 'temperature', '"-300 degC" is below absolute zero; write for example "37 degC"'],
  ];
  for (const [text, quantity, message] of WRONG) {
    it(`answers "${text}" as a ${quantity} with what is wrong and a right example`, () => {
      expect(() => parseQuantity(text, quantity)).toThrow(new QuantityError(message));
    });
  }

  it('takes the unit of its example from the caller', () => {
    expect(() => parseQuantity('40', 'length', 'mm')).toThrow('"40" has no unit; write for example "40 mm"');
  });

  it('refuses long text without reading it through', () => {
    expect(() => parseQuantity(`1 ${'m'.repeat(10_000)}`, 'length')).toThrow(/is too long for a quantity/);
  });
});

describe('unitFactor', () => {
  it('divide an SI value into the unit shown', () => {
    expect(unitFactor('µL/min', 'flow')).toBe(1 / 6e10);
    expect(unitFactor('mbar', 'pressure')).toBe(100);
    expect(unitFactor('dyn/cm^2', 'wall_shear')).toBe(0.1);
  });

  it('refuse a unit of something else', () => {
    expect(() => unitFactor('kPa', 'flow')).toThrow(
      '"kPa" is a unit of pressure; one of flow is needed; write for example "uL/min"',
    );
    expect(() => unitFactor('uL/minn', 'flow')).toThrow('did you mean "uL/min"?');
  });

  it('is what one of the unit is read as', () => {
    for (const [quantity, unit] of [
      ['flow', 'uL/h'],
      ['pressure', 'psi'],
      ['wall_shear', 'dyn/cm²'],
      ['time', 'min'],
    ] as const) {
      for (const value of [1.234e-6, 0.5, 98760]) {
        expect(parseQuantity(`${value} ${unit}`, quantity) / unitFactor(unit, quantity) / value).toBeCloseTo(
          1,
          12,
        );
      }
    }
  });

  it('give an example of every quantity that parses as it', () => {
    const all: readonly Quantity[] = [
      'length',
      'pressure',
      'wall_shear',
      'flow',
      'time',
      'velocity',
      'viscosity',
      'density',
      'temperature',
      'temperature_difference',
      'angle',
      'share',
      'ratio',
      'diffusion',
      'concentration',
    ];
    for (const quantity of all)
      expect(parseQuantity(describeQuantity(quantity).example, quantity)).toBeGreaterThan(0);
  });
});
