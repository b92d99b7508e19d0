import { describe, expect, it } from 'vitest';
import { pumpCurve } from '../../src/report/pump-curve.ts';
import { showOf } from '../../src/runsheet/shown.ts';
import { findSettings } from '../../src/solve/targets.ts';
import { drawing, networkFrom } from '../solve/network-from.ts';

const SVG = drawing({ lane: 'M5 10H50' }, { in: [5, 10], out: [50, 10] });

function curveOf(target: string, more = '') {
  const driven = networkFrom(
    SVG,
    `depth: 100 um\nports:\n  in: { pressure: 1 kPa, tubing: { bore: 0.2 mm, length: 200 mm } }\n  out: open\ntargets:\n  - { channel: lane, ${target}, by: in }\n${more}`,
  );
  const [found] = findSettings(driven).targets;
  return { found, curve: pumpCurve(driven, found, showOf(null)) };
}

describe('pumpCurve', () => {
  it('runs through the found setting, with its ticks, limits and windows within the axes', () => {
    for (const target of [
      'wall_shear: 0.4 Pa',
      'wall_shear: { min: 0.2 Pa, max: 0.4 Pa }',
      'residence_time: 10 s',
      'flow: -3 uL/min',
      'velocity: 2 mm/s',
    ]) {
      const { curve } = curveOf(
        target,
        'pump_limits: { in: { max_pressure: 3 kPa, max_flow: 20 uL/min } }\nchannels: { lane: { wall_shear: { min: 0.1 Pa, max: 0.5 Pa }, residence_time: { max: 20 s } } }\n',
      );
      const [value, setting] = curve.found;
      for (const { at } of curve.limits) expect(inside(at, curve.y)).toBe(true);
      for (const { at } of curve.x.ticks) expect(inside(at, curve.x)).toBe(true);
      for (const { at } of curve.y.ticks) expect(inside(at, curve.y)).toBe(true);
      expect(inside(value, curve.x)).toBe(true);
      expect(inside(setting, curve.y)).toBe(true);
      const nearest = Math.min(
        ...curve.runs
          .flat()
          .map(([x, y]) =>
            Math.hypot(
              (x - value) / (curve.x.high - curve.x.low),
              (y - setting) / (curve.y.high - curve.y.low),
            ),
          ),
      );
      expect(nearest).toBeLessThan(0.02);
      expect(curve.x.ticks.length).toBeGreaterThanOrEqual(2);
      expect(curve.x.ticks.length).toBeLessThanOrEqual(8);
    }
  });

  it('draws a time as falling with the setting and a flow as a straight line', () => {
    const time = curveOf('residence_time: 10 s').curve.runs.flat();
    for (let i = 1; i < time.length; i++) expect(time[i][0]).toBeLessThan(time[i - 1][0]);
    for (const [value, setting] of time) expect(value * setting).toBeCloseTo(time[0][0] * time[0][1], 9);
    const { curve, found } = curveOf('flow: 3 uL/min');
    const slope = curve.found[1] / curve.found[0];
    for (const [value, setting] of curve.runs.flat()) expect(setting).toBeCloseTo(slope * value, 9);
    expect(found.response.setting).toBeGreaterThan(0);
  });

  it('shows a channel’s window as what the target would read: the most is asked of the peak', () => {
    const window = 'channels: { lane: { wall_shear: { min: 0.1 Pa, max: 0.5 Pa } } }\n';
    const mean = curveOf('wall_shear: 0.4 Pa', window).curve.windows[0];
    const peak = curveOf('wall_shear: 0.4 Pa, at: peak', window).curve.windows[0];
    expect(mean.window.min).toBeCloseTo(0.1, 12);
    expect(peak.window.max).toBeCloseTo(0.5, 12);
    expect((mean.window.max ?? 0) / 0.5).toBeCloseTo(0.1 / (peak.window.min ?? 0), 12);
    expect(mean.window.max).toBeLessThan(0.5);
  });
});

function inside(at: number, { low, high }: { readonly low: number; readonly high: number }): boolean {
  return at >= low - 1e-9 && at <= high + 1e-9;
}
