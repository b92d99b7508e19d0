import { expect, test } from 'vitest';
import { distributionChart } from '../../src/report/spread-charts.ts';
import { keptShare } from '../../src/report/spread-part.ts';
import {
  cornerText,
  overallShares,
  remarks,
  shareText,
  spreadColumns,
  toleranceText,
  yieldText,
} from '../../src/report/spread-rows.ts';
import { showOf } from '../../src/runsheet/shown.ts';
import type { Spread, SpreadOutput } from '../../src/spread/types.ts';
import { oneDuct, outputNamed, spreadOfDrawing } from './spread-of.ts';

const SHEET = `fluid: water
depth: 50 um
ports: { feed: { pressure: 1 kPa }, waste: open }
channels: { lane: { wall_shear: { max: 1.28 Pa } } }
tolerances: { depth: 5 %, width: { limit: 4 um }, temperature: 1 degC, pressure: { feed: 10 Pa } }
`;
const show = showOf(null);
const spread = await spreadOfDrawing(oneDuct(), SHEET, { draws: 2000 });
const peak = outputNamed(spread, 'lane', 'wall_shear_floor_peak');

test('the bars of a distribution hold the draws in range, and its curve is the first order’s over the same area', () => {
  const chart = distributionChart(peak, spread, show);
  if (chart === null) throw new Error('no chart');
  const tallest = Math.max(...chart.bars, ...chart.curve);
  expect(tallest).toBe(1);
  const step = (chart.high - chart.low) / chart.bars.length;
  const bars = chart.bars.reduce((sum, height) => sum + height * step, 0);
  const curve = chart.curve.reduce(
    (sum, height) => sum + (height * (chart.high - chart.low)) / (chart.curve.length - 1),
    0,
  );
  expect(curve / bars).toBeCloseTo(1, 1);
  expect(chart.window).toEqual({ min: null, max: 1.28 });
  for (const { at } of chart.ticks) expect(at >= chart.low && at <= chart.high).toBe(true);
  expect(chart.ticks.length).toBeGreaterThanOrEqual(2);
  expect(chart.alt).toContain('floor shear, peak of lane');
});

test('what does not move, and what was not drawn, has no distribution', async () => {
  expect(distributionChart(outputNamed(spread, 'waste', 'pressure'), spread, show)).toBeNull();
  const none = await spreadOfDrawing(oneDuct(), SHEET, { draws: 1 });
  expect(distributionChart(outputNamed(none, 'lane', 'wall_shear_floor_peak'), none, show)).toBeNull();
});

test('all numbers of one row are in one unit, and what does not exist is a dash', async () => {
  const cells = cellsOf(peak, spread);
  expect(cells).toMatchObject({
    what: 'lane',
    quantity: 'floor shear, peak',
    unit: 'Pa',
    asked: '≤ 1.28',
    linear: '',
  });
  expect(Number(cells.nominal)).toBeCloseTo(peak.nominal, 3);
  expect(Number(cells.sd)).toBeCloseTo(peak.sd, 4);
  const none = await spreadOfDrawing(oneDuct(), SHEET, { draws: 0 });
  expect(cellsOf(outputNamed(none, 'feed', 'flow'), none)).toMatchObject({
    mean: '–',
    sd: '–',
    low: '–',
    kept: '',
  });
});

function cellsOf(output: SpreadOutput, of: Spread): Record<string, string> {
  const columns = Object.entries(spreadColumns(of, show));
  return Object.fromEntries(columns.map(([key, { text }]) => [key, text(output)]));
}

test('tolerances are shown in their own units with their kind', () => {
  expect(spread.causes.map((cause) => `${cause.key} ${toleranceText(cause, show)}`)).toEqual([
    'depth:lanes ±5 % (2σ)',
    'width ±4 µm (hard limit)',
    'temperature ±1 K (2σ)',
    'pressure:feed ±0.01 kPa (2σ)',
  ]);
});

test('the causes of windows add up to all, and the yield is said with its interval', () => {
  const overall = overallShares(spread);
  expect(overall?.over).toBe('windows');
  expect(overall?.shares.reduce((sum, share) => sum + share, 0)).toBeCloseTo(1, 12);
  expect(yieldText(spread)).toMatch(
    /^all windows and limits hold in 8\d(\.\d+)? % of the draws \(95 % interval /,
  );
  expect(keptShare(peak, spread)).toBeCloseTo(spread.yield?.share ?? Number.NaN, 12);
  expect(keptShare(outputNamed(spread, 'lane', 'flow'), spread)).toBeNull();
  expect(cornerText(spread, show)).toMatch(
    /^floor shear, peak of lane has the least room: .* \(depth:lanes upper, .*not kept\)$/,
  );
});

test('the causes overall are the plain mean over what has a window and moves; without windows, over all that moves', () => {
  const of = (hasWindow: boolean, ...shares: readonly number[]) => ({
    ...peak,
    hasWindow,
    shares: shares.length === 0 ? null : Float64Array.from(shares),
  });
  const free = [of(false, 0, 0, 0, 1), of(false, 0, 0.5, 0, 0.5)];
  const windowed = [of(true, 1, 0, 0, 0), of(true), of(true, 0.5, 0.25, 0.25, 0)];
  const overall = (outputs: readonly ReturnType<typeof of>[]) => overallShares({ ...spread, outputs });
  expect(overall([...free, ...windowed])).toEqual({
    shares: Float64Array.of(0.75, 0.125, 0.125, 0),
    over: 'windows',
  });
  expect(overall([...free, of(true)])).toEqual({ shares: Float64Array.of(0, 0.25, 0, 0.75), over: 'all' });
  expect(overall([of(true), of(false)])).toBeNull();
});

test('a share near all or none is never rounded to it', () => {
  expect([1, 0.99999, 0.9999, 0.5, 0.00001, 0].map(shareText)).toEqual([
    '100 %',
    '> 99.99 %',
    '99.99 %',
    '50 %',
    '< 0.01 %',
    '0 %',
  ]);
});

test('remarks say what was stopped, left out, not linear and idle', () => {
  const bent = { ...peak, isLinear: false };
  const texts = remarks({
    ...spread,
    asked: 9000,
    outside: 7,
    turbulent: 3,
    evenGroups: [{ key: 'lane-*', most: 0.05, failures: 12 }],
    leftOut: 5,
    outputs: [bent],
    idle: ['bore: no port has tubing'],
    unknownLimits: ['pressure of x'],
  });
  expect(texts).toEqual([
    'stopped before the end: 2000 of 9000 draws were made, and everything here is of those',
    expect.stringContaining('7 of the draws could not be computed'),
    'in 0.6 % of the draws the flows of lane-* are not within ±5 % of their mean',
    'in 3 of the draws some reach was not laminar',
    'the response is not linear there, go by the sample: floor shear, peak of lane',
    'moves nothing: bore: no port has tubing',
    'not judged: pressure of x',
    '5 more numbers are not listed for want of room; their windows were judged all the same',
  ]);
});
