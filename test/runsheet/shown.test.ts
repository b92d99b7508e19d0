import { describe, expect, test } from 'vitest';
import { formatBound, formatMm, formatNumber, showOf } from '../../src/runsheet/shown.ts';

describe('numbers for people', () => {
  test.each([
    [0, '0'],
    [-0, '0'],
    [50, '50'],
    [0.1, '0.1'],
    [12.3456, '12.35'],
    [-12.3456, '-12.35'],
    [999.96, '1000'],
    [12345, '12350'],
    [0.00012346, '0.0001235'],
    [0.000099996, '0.0001'],
    [1.2345e-7, '1.235e-7'],
    [1e6, '1e6'],
    [-1e-300, '-1e-300'],
  ])('%d is written %s', (value, text) => {
    expect(formatNumber(value)).toBe(text);
  });

  test('have four significant digits at most and none too many', () => {
    for (let i = 0; i < 2000; i++) {
      const value = Math.sin(i) * 10 ** ((i % 40) - 20);
      const text = formatNumber(value);
      expect(Math.abs(Number(text) - value)).toBeLessThanOrEqual(Math.abs(value) * 5.0001e-4);
      expect(text.replace(/e.*/, '').replace(/[-.]/g, '').replace(/^0+/, '').length).toBeLessThanOrEqual(6);
    }
  });

  test.each([
    [null, '–'],
    [0, '0 %'],
    [0.004841, '0.49 %'],
    [0.05231, '5.3 %'],
    [0.0996, '10 %'],
    [0.5, '50 %'],
    [1.234, '130 %'],
  ])('a bound of %d is written %s, two digits and never below it', (share, text) => {
    expect(formatBound(share)).toBe(text);
  });

  test('refuse what is no number', () => {
    expect(() => formatNumber(Number.NaN)).toThrow('a number to show is NaN');
  });

  test.each([
    ['flow', 2e-9 / 60, '2 µL/min'],
    ['flow', -2e-13 / 60, '-200 pL/min'],
    ['pressure', 12_000, '12 kPa'],
    ['pressure', 3, '3 Pa'],
    ['wall_shear', 0.3, '0.3 Pa'],
    ['residence_time', 0.25, '250 ms'],
    ['residence_time', 90, '90 s'],
    ['residence_time', 300, '5 min'],
    ['residence_time', 3 * 3600, '3 h'],
    ['velocity', 0.0021, '2.1 mm/s'],
    ['cross_length', 50e-6, '50 µm'],
    ['length', 0.012, '12 mm'],
    ['resistance', 1.399e13, '13.99 10¹² Pa s/m³'],
    ['flow', null, '–'],
  ] as const)('%s of %d reads %s', (shown, value, text) => {
    expect(showOf(null).text(shown, value)).toBe(text);
  });

  test('keep a unit that the run sheet fixes, whatever the size', () => {
    const show = showOf({ pressure: 'mbar', wall_shear: 'dyn/cm^2' });
    expect(show.text('pressure', 12_000)).toBe('120 mbar');
    expect(show.text('wall_shear', 0.03)).toBe('0.3 dyn/cm²');
    expect(show.text('pressure', 1e-4)).toBe('1e-6 mbar');
  });

  test('give places to a thousandth of a millimetre', () => {
    expect([formatMm(12.3456), formatMm(-0.0001), formatMm(12)]).toEqual(['12.346', '0', '12']);
  });
});
