import { describe, expect, it } from 'vitest';
import type { FindingContext } from '../../src/findings/context.ts';
import { timesToEven } from '../../src/findings/uneven.ts';
import { analyseText } from '../whole/analyse-text.ts';

/**
 * Equal lanes between a supply header and a drain header of the same width, so that resistances are as lengths; the supply at
 * the left, the drain at the left or right, each a little before the first or after the last lane.
 */
function ladder(lanes: number, drainAt: 'left' | 'right', pitchMm: number): string {
  const last = 5 + pitchMm * (lanes - 1);
  const out = drainAt === 'left' ? 3 : last + 2;
  const paths = Array.from(
    { length: lanes },
    (_, i) => `<path id="lane-${i}" d="M${5 + pitchMm * i} 5V${5 + LANE_MM}"/>`,
  );
  return `<svg xmlns="http://www.w3.org/2000/svg" width="${last + 5}mm" height="30mm" viewBox="0 0 ${last + 5} 30">
  <g fill="none" stroke="#06c" stroke-width="0.1"><path d="M3 5H${last}"/><path d="M${out} ${5 + LANE_MM}H${drainAt === 'left' ? last : 5}"/>${paths.join('')}</g>
  <circle id="in" cx="3" cy="5" r="0.2" fill="none" stroke="#c00"/><circle id="out" cx="${out}" cy="${5 + LANE_MM}" r="0.2" fill="none" stroke="#c00"/></svg>`;
}

const LANE_MM = 20;

async function lanesOf(svg: string) {
  const analysis = await analyseText(
    svg,
    'depth: 0.1 mm\njoints: centreline\nports: { in: { flow: 10 uL/min }, out: open }\nchannels: { "lane-*": { even: 5 % } }\n',
  );
  const { chip, run, network, flow } = analysis;
  const lanes = chip.channels.flatMap(({ name }, channel) => {
    if (!name.startsWith('lane-')) return [];
    const reach = network.reachChannel.indexOf(channel);
    const flowM3s = Math.abs(flow.reachFlow[reach]);
    return [{ name, reach, flowM3s, resistance: flow.reachResistance[reach] }];
  });
  const context: FindingContext = { chip, run, network, flow };
  return { context, lanes };
}

/** Flows of a ladder by potentials of its nodes, solved densely: lanes of 1, each header piece of r. */
function denseFlows(lanes: number, drainAt: 'left' | 'right', r: number): number[] {
  const n = 2 * lanes;
  const rows = Array.from({ length: n }, () => new Array<number>(n + 1).fill(0));
  const join = (i: number, j: number, g: number): void => {
    rows[i]![i]! += g;
    rows[j]![j]! += g;
    rows[i]![j]! -= g;
    rows[j]![i]! -= g;
  };
  for (let i = 0; i < lanes; i++) join(i, lanes + i, 1);
  for (let i = 0; i + 1 < lanes; i++) {
    join(i, i + 1, 1 / r);
    join(lanes + i, lanes + i + 1, 1 / r);
  }
  rows[0]![n] = 1;
  const held = lanes + (drainAt === 'left' ? 0 : lanes - 1);
  rows[held] = new Array<number>(n + 1).fill(0);
  rows[held]![held] = 1;
  for (let k = 0; k < n; k++) {
    const pivot = rows
      .slice(k)
      .reduce((best, row, i) => (Math.abs(row[k]!) > Math.abs(rows[best]![k]!) ? k + i : best), k);
    [rows[k], rows[pivot]] = [rows[pivot]!, rows[k]!];
    for (let i = 0; i < n; i++) {
      if (i === k) continue;
      const factor = rows[i]![k]! / rows[k]![k]!;
      if (factor !== 0) for (let j = k; j <= n; j++) rows[i]![j]! -= factor * rows[k]![j]!;
    }
  }
  return Array.from(
    { length: lanes },
    (_, i) => rows[i]![n]! / rows[i]![i]! - rows[lanes + i]![n]! / rows[lanes + i]![lanes + i]!,
  );
}

function farthest(flows: readonly number[]): number {
  const mean = flows.reduce((sum, q) => sum + q, 0) / flows.length;
  return Math.max(...flows.map((q) => Math.abs(q - mean) / mean));
}

describe('the ratio that makes lanes even', () => {
  it('is for two lanes the one of the closed form, d (1 − e)/(e (1 − d))', async () => {
    for (const even of [0.01, 0.05, 0.2]) {
      const { context, lanes } = await lanesOf(ladder(2, 'left', 15));
      const d = farthest(lanes.map(({ flowM3s }) => flowM3s));
      expect(d).toBeGreaterThan(even);
      const exact = (d * (1 - even)) / (even * (1 - d));
      const times = timesToEven(context, even, lanes)!;
      expect(times / exact).toBeGreaterThan(1 - 1e-6);
      expect(times / exact).toBeLessThan(1.011);
    }
  });

  it('is just enough by a second way of solving ladders, fed and drained at one side or across', async () => {
    for (const [count, drainAt, pitchMm, even] of [
      [4, 'left', 5, 0.05],
      [4, 'right', 5, 0.05],
      [9, 'left', 2, 0.02],
      [9, 'right', 4, 0.1],
      [14, 'left', 3, 0.05],
    ] as const) {
      const { context, lanes } = await lanesOf(ladder(count, drainAt, pitchMm));
      const r = pitchMm / LANE_MM;
      const mean = lanes.reduce((sum, { flowM3s }) => sum + flowM3s, 0) / count;
      const dense = denseFlows(count, drainAt, r);
      for (const [i, { flowM3s }] of lanes.entries())
        expect(flowM3s / mean / (dense[i]! * count)).toBeCloseTo(1, 9);
      const times = timesToEven(context, even, lanes)!;
      expect(times, `${count} ${drainAt}`).toBeGreaterThan(1);
      expect(farthest(denseFlows(count, drainAt, r / times))).toBeLessThan(even * (1 + 1e-5));
      expect(farthest(denseFlows(count, drainAt, (1.011 * r) / times))).toBeGreaterThan(even);
    }
  });

  it('does not exist where the lanes are driven one by one', async () => {
    const row = (i: number, name: string) =>
      `<path id="${name}" d="M5 ${5 + 5 * i}H25" fill="none" stroke="#06c" stroke-width="0.1"/><circle id="i${i}" cx="5" cy="${5 + 5 * i}" r="0.5"/><circle id="o${i}" cx="25" cy="${5 + 5 * i}" r="0.5"/>`;
    const analysis = await analyseText(
      `<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="20mm" viewBox="0 0 30 20">${row(0, 'lane-a')}${row(1, 'lane-b')}</svg>`,
      'depth: 0.1 mm\nports: { i0: { flow: 1 uL/min }, i1: { flow: 2 uL/min }, "o*": open }\nchannels: { lane-a: {}, "lane-*": { even: 5 % } }\n',
    );
    const { findings } = analysis.findings;
    const uneven = findings.filter(({ rule }) => rule === 'uneven-flow');
    expect(uneven).toHaveLength(1);
    expect(uneven[0]!.fix).toContain('give each the same flow or pressure');
  });
});
