import { describe, expect, test } from 'vitest';
import { buildResult } from '../../src/report/result.ts';
import { sampleCase, sampleInput, sampleResult } from './sample.ts';

describe('the result of a case', () => {
  const result = sampleResult();
  const reaches = [...result.reaches];

  test('balances: flow times resistance is the pressure drop on every reach, and segments add up to their reach', () => {
    for (const reach of reaches) {
      const drop = (reach.flow_m3_s ?? 0) * (reach.resistance_pa_s_m3 ?? 0);
      expect(reach.pressure_drop_pa).toBeCloseTo(drop, 9);
      const parts = [...result.segments].filter((segment) => segment.reach === reach.name);
      const sum = (pick: (row: (typeof parts)[number]) => number | null): number =>
        parts.reduce((total, row) => total + (pick(row) ?? 0), 0);
      expect(sum((row) => row.length_m)).toBeCloseTo(reach.length_m, 12);
      expect(sum((row) => row.pressure_drop_pa)).toBeCloseTo(drop, 9);
      if (reach.residence_time_s !== null)
        expect(sum((row) => row.residence_time_s)).toBeCloseTo(reach.residence_time_s, 9);
    }
  });

  // 1 mm × 0.1 mm, 1 mPa s, 100 µL/min: τ_p = 1 Pa exactly, so the ratio to 6µQ/(wh²) is the published factor of check tables
  test('gives the floor shear of the exact series: peak over 6µQ/(wh²) at 0.5 × 0.12 mm', () => {
    const lane = reaches[3];
    const plates = (6 * result.fluid.viscosity_pa_s * (lane.flow_m3_s ?? 0)) / (0.5e-3 * 0.12e-3 ** 2);
    // at h/w = 0.24 between the computed 1.1834361577 (0.25) and 1.1435097757 (0.2)
    expect((lane.wall_shear_floor_peak_pa ?? 0) / plates).toBeGreaterThan(1.16);
    expect((lane.wall_shear_floor_peak_pa ?? 0) / plates).toBeLessThan(1.1834361577);
  });

  test('gives a Dean number on the bent reach only', () => {
    expect(reaches.map(({ dean }) => dean !== null)).toEqual([false, false, false, true, false, false]);
  });

  test('takes the trimmed length for volume and times, and says what was drawn', () => {
    const stub = reaches[4];
    expect(stub.drawn_length_m).toBeCloseTo(3e-3, 12);
    expect(stub.length_m).toBeCloseTo(2.85e-3, 12);
    expect(stub.volume_m3).toBeCloseTo(0.2e-3 * 0.12e-3 * 2.85e-3, 18);
  });

  test('gives the tubing volume and how long the fluid stays in it, null where there is none', () => {
    const [feed, waste] = result.ports;
    const volume = (Math.PI / 4) * 0.5e-3 ** 2 * 0.3;
    expect(feed.tubing_volume_m3).toBeCloseTo(volume, 18);
    expect(feed.tubing_time_s).toBeCloseTo(volume / (feed.flow_m3_s ?? 0), 9);
    expect([waste.tubing_volume_m3, waste.tubing_time_s]).toEqual([null, null]);
  });

  test('gives the share of the floor inside a window only where the run sheet has one', () => {
    expect(reaches.map(({ floor_share_inside_window: share }) => share !== null)).toEqual([
      false,
      true,
      true,
      true,
      false,
      false,
    ]);
    for (const { floor_share_inside_window: share } of reaches)
      if (share !== null) expect(share).toBeLessThanOrEqual(1);
  });

  test('writes temperatures without the last bits of the kelvin', () => {
    expect(result.fluid.temperature_c).toBe(37);
  });

  test('makes rows only when asked', () => {
    const one = sampleCase();
    const looked = { nodeX: 0, reachFrom: 0, segmentX1: 0 };
    const network = { ...one.network };
    for (const name of ['nodeX', 'reachFrom', 'segmentX1'] as const) {
      Object.defineProperty(network, name, {
        get: () => {
          looked[name]++;
          return one.network[name];
        },
      });
    }
    const lazy = buildResult(sampleInput({ ...one, network }));
    if ('cases' in lazy) throw new TypeError('it has no cases');
    expect(looked).toEqual({ nodeX: 0, reachFrom: 0, segmentX1: 0 });
    lazy.segments.at(0);
    expect(looked).toEqual({ nodeX: 0, reachFrom: 0, segmentX1: 1 });
    lazy.nodes.at(0);
    lazy.reaches.at(0);
    expect(looked).toEqual({ nodeX: 1, reachFrom: 1, segmentX1: 1 });
  });
});
