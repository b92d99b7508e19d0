/** Rows of the signed report against what a hand gets from the drawing. */
import { describe, expect, test } from 'vitest';
import { sharesAnew } from '../solve/joint-shares-anew.ts';
import { drawing, networkFrom } from '../solve/network-from.ts';
import { reportOf } from './demo.ts';

/** 6 µL/min. */
const FLOW = 1e-10;
const SHEET =
  'depth: 80 um\nfluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }\nports: { in: { flow: 6 uL/min }, out: open }\n';
const [WIDTH, DEPTH] = [0.2e-3, 0.08e-3];

async function rowsOf(svg: string, sheet: string) {
  const [{ part }] = (await reportOf('chip', svg, sheet)).cases;
  return part;
}

describe('a reach', () => {
  test('holds and keeps fluid by its centreline alone: what a corner adds is resistance, not room', async () => {
    const svg = drawing({ lane: 'M5 10H20V25' }, { in: [5, 10], out: [20, 25] });
    const [lane] = [...(await rowsOf(svg, `joints: resolved\n${SHEET}`)).reaches];
    // 15 mm and 15 mm, less half a millimetre inside either well
    const volume = WIDTH * DEPTH * 29e-3;
    expect(Math.abs(lane.joint_length_m)).toBeGreaterThan(0.05e-3);
    expect(lane.length_m - lane.joint_length_m).toBeCloseTo(29e-3, 12);
    expect((lane.volume_m3 ?? 0) / volume).toBeCloseTo(1, 9);
    expect((lane.residence_time_s ?? 0) / (volume / FLOW)).toBeCloseTo(1, 9);
    expect(((lane.fastest_time_s ?? 0) * (lane.peak_velocity_m_s ?? 0)) / 29e-3).toBeCloseTo(1, 9);
  });

  test('has the Dean number of its tightest bend, wherever that stands in the row', async () => {
    const d = 'M5 10H15A2 2 0 0 1 17 12V15A0.5 0.5 0 0 0 17.5 15.5H20A1 1 0 0 1 21 16.5V25';
    const [lane] = [...(await rowsOf(drawing({ lane: d }, { in: [5, 10], out: [21, 25] }), SHEET)).reaches];
    const diameter = (2 * WIDTH * DEPTH) / (WIDTH + DEPTH);
    const reynolds = (1000 * (FLOW / (WIDTH * DEPTH)) * diameter) / 1e-3;
    expect((lane.dean ?? 0) / (reynolds * Math.sqrt(diameter / 1e-3))).toBeCloseTo(1, 3);
  });
});

test('ports and reaches say by how much joints could move them: the whole share, as solving anew finds it', async () => {
  const svg = drawing(
    { head: 'M5 10H40', one: 'M20 10V30', two: 'M40 10V30', foot: 'M20 30H55' },
    { in: [5, 10], out: [55, 30] },
  ).replace('data-name="two"', 'data-name="two" stroke-width="0.3"');
  const sheet = (inlet: string): string => `depth: 80 um\nports: { in: ${inlet}, out: open }\n`;
  let compared = 0;
  const expectShares = (found: readonly (number | null)[], wanted: Float64Array): void => {
    found.forEach((share, i) => {
      if (share === null || share === 0) return;
      expect(share / wanted[i]).toBeCloseTo(1, 3);
      compared++;
    });
  };
  for (const inlet of [
    '{ pressure: 1 kPa, tubing: { bore: 0.1 mm, length: 100 mm } }',
    '{ flow: 6 uL/min }',
  ]) {
    const rows = await rowsOf(svg, sheet(inlet));
    const wanted = sharesAnew(networkFrom(svg, sheet(inlet)), 1e-3);
    expectShares(
      rows.ports.map((row) => row.joint_flow_share),
      wanted.portFlow,
    );
    expectShares(
      rows.ports.map((row) => row.joint_pressure_share),
      wanted.portPressure,
    );
    expectShares(
      [...rows.reaches].map((row) => row.joint_flow_share),
      wanted.reachFlow,
    );
  }
  expect(compared).toBeGreaterThanOrEqual(10);
});
