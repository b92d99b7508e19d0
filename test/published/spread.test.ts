import { expect, test } from 'vitest';
import { derivativesOf } from '../../src/spread/first-order.ts';
import { normalQuantile } from '../../src/spread/normal-quantile.ts';
import { chanceOf } from '../../src/spread/statistics.ts';
import { modelOf, oneDuct, varying } from '../spread/spread-of.ts';

// M. J. Wichura, Appl. Stat. 37 (1988) 477, the check values printed with the algorithm (from memory of the source; computed anew with
// the error function of another library, they agree to the last digit)
test('the normal quantile has the values printed with Algorithm AS 241', () => {
  expect(normalQuantile(0.25)).toBeCloseTo(-0.6744897501960817, 15);
  expect(normalQuantile(0.001)).toBeCloseTo(-3.090232306167814, 14);
  expect(normalQuantile(1e-20) / -9.26234008979841).toBeCloseTo(1, 14);
  expect(normalQuantile(0.5)).toBe(0);
  expect(normalQuantile(0.975)).toBeCloseTo(1.959963984540054, 15);
});

// R. G. Newcombe, Stat. Med. 17 (1998) 857, table I, method 3 (Wilson's score without continuity correction), four decimals
test('the interval of a chance is Wilson’s as Newcombe tabulates it', () => {
  for (const [count, of, low, high] of [
    [81, 263, 0.2553, 0.3662],
    [15, 148, 0.0624, 0.1605],
    [0, 20, 0, 0.1611],
    [1, 29, 0.0061, 0.1718],
  ]) {
    const chance = chanceOf(count, of);
    expect(chance?.low).toBeCloseTo(low, 4);
    expect(chance?.high).toBeCloseTo(high, 4);
  }
});

// exponents of the exact series, computed to 40 digits: d ln R/d ln depth and d ln R/d ln width by depth over width
test.each([
  [1, -2, -2],
  [0.5, -2.55306, -1.44694],
  [0.1, -2.93274, -1.06726],
])(
  'flow through a duct of depth over width %d goes with the exact powers of both',
  (aspect, byDepth, byWidth) => {
    const sheet = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
depth: ${200 * aspect} um
ports: { feed: { pressure: 10 kPa }, waste: open }
tolerances: { depth: 1 %, width: 1 % }
`;
    const { model, outputs } = modelOf(varying(oneDuct(0.2), sheet));
    const flow = outputs.find(({ name, quantity }) => name === 'feed' && quantity === 'flow');
    const row = flow === undefined ? null : derivativesOf(model).of(flow);
    const value = model.nominal.portFlow[0];
    expect((row?.[0] ?? 0) / value).toBeCloseTo(-byDepth, 5);
    expect((row?.[1] ?? 0) / value).toBeCloseTo(-byWidth, 5);
  },
);
