import * as v from 'valibot';
import { describe, expect, test } from 'vitest';
import { type Detail, writeJson } from '../../src/report/json.ts';
import type { SingleResult } from '../../src/report/result.ts';
import { resultJsonSchema } from '../../src/report/result-json-schema.ts';
import { resultSchema } from '../../src/report/result-schema.ts';
import { sampleCasesReport, sampleResult } from './sample.ts';

const text = (result: Parameters<typeof writeJson>[0], detail?: Detail): string =>
  [...writeJson(result, detail)].join('');

describe('the JSON document', () => {
  test('has the keys of the contract in their order', () => {
    const document = JSON.parse(text(sampleResult()));
    expect(Object.keys(document)).toEqual(
      'tool layout run_sheet fluid verdict counts ports nodes reaches segments findings not_run balance'.split(
        ' ',
      ),
    );
    expect(Object.keys(document.ports[0])).toEqual(
      'name x_mm y_mm diameter_mm condition pressure_pa supply_pressure_pa flow_m3_s tubing_volume_m3 tubing_time_s joint_flow_share joint_pressure_share'.split(
        ' ',
      ),
    );
    expect(Object.keys(document.reaches[0])).toEqual(
      (
        'name channel layer from to width_m depth_m drawn_length_m length_m joint_length_m resistance_pa_s_m3 flow_m3_s pressure_drop_pa ' +
        'mean_velocity_m_s peak_velocity_m_s reynolds dean entrance_length_m wall_shear_floor_mean_pa wall_shear_floor_peak_pa ' +
        'wall_shear_side_mean_pa wall_shear_side_peak_pa floor_share_inside_window residence_time_s fastest_time_s volume_m3 joint_flow_share'
      ).split(' '),
    );
    expect(Object.keys(document.segments[0])).toEqual(
      (
        'name reach x1_mm y1_mm x2_mm y2_mm length_m resistance_pa_s_m3 pressure_drop_pa wall_shear_floor_mean_pa ' +
        'wall_shear_floor_peak_pa residence_time_s'
      ).split(' '),
    );
  });

  test.each(['ports', 'reaches', 'segments'] as const)(
    'validates against its own description at detail %s',
    (detail) => {
      const document = JSON.parse(text(sampleResult(), detail));
      expect(v.safeParse(resultSchema, document).issues).toBeUndefined();
      expect('segments' in document).toBe(detail === 'segments');
      expect('nodes' in document).toBe(detail !== 'ports');
    },
  );

  test('of cases repeats everything but tool, layout and run sheet, and holds when one case holds', () => {
    const result = sampleCasesReport().result;
    const document = JSON.parse(text(result));
    expect(Object.keys(document)).toEqual(['tool', 'layout', 'run_sheet', 'verdict', 'cases']);
    expect(Object.keys(document.cases[0]).slice(0, 3)).toEqual(['case', 'fluid', 'verdict']);
    expect([document.verdict, document.cases[0].verdict, document.cases[1].verdict]).toEqual([
      'hold',
      'ready',
      'hold',
    ]);
    expect(v.safeParse(resultSchema, document).issues).toBeUndefined();
  });

  test('has null where a number does not exist, and no −0', () => {
    const atRest = JSON.parse(text(sampleResult({ feedPa: 0 })));
    const [inlet] = atRest.reaches;
    expect([inlet.residence_time_s, inlet.fastest_time_s, inlet.dean]).toEqual([null, null, null]);
    expect(inlet.volume_m3).toBeGreaterThan(0);
    expect(text(sampleResult({ feedPa: -0 }))).not.toMatch(/[:[,]-0[,\]}]/);
    expect(JSON.parse(text(sampleResult())).reaches[4].residence_time_s).toBeNull();
  });

  test('refuses a number that is not finite and names its key', () => {
    const result: SingleResult = {
      ...sampleResult(),
      balance: { worst_imbalance: Number.NaN, worst_node: null },
    };
    expect(() => text(result)).toThrow(
      'balance.worst_imbalance is NaN: a result holds finite numbers or null',
    );
  });

  test('writes −0 as 0', () => {
    const result: SingleResult = {
      ...sampleResult(),
      balance: { worst_imbalance: -0, worst_node: null },
    };
    expect(text(result)).toContain('"worst_imbalance":0,');
  });

  test('is the same text twice and ends with one line end', () => {
    const once = text(sampleResult());
    expect(text(sampleResult())).toBe(once);
    expect(once.endsWith('}\n')).toBe(true);
  });

  test('has a published JSON Schema that describes every key with its unit', () => {
    const schema = JSON.stringify(resultJsonSchema());
    for (const key of ['wall_shear_floor_mean_pa', 'tubing_time_s', 'cases', 'worst_imbalance', 'p97_5'])
      expect(schema).toContain(key);
    expect(schema).toContain('https://json-schema.org/draft/2020-12/schema');
  });
});
