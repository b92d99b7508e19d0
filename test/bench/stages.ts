import { performance } from 'node:perf_hooks';
import { assembleChip } from '../../src/chip/assemble.ts';
import { findAll } from '../../src/findings/check.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { writeJson } from '../../src/report/json.ts';
import { buildReport } from '../../src/report/report.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { readSvg } from '../../src/svg/read.ts';
import type { BigLayout } from './layouts.ts';

export const STAGES = ['read', 'lay out', 'chip', 'network', 'solve', 'findings', 'json'] as const;

export interface StageTimes {
  readonly segments: number;
  readonly seconds: Readonly<Record<(typeof STAGES)[number], number>>;
}

/** Runs the steps of the main job on a text and times each. */
export async function measureStages({ name, svg, sheet: sheetText }: BigLayout): Promise<StageTimes> {
  const seconds = Object.fromEntries(STAGES.map((stage) => [stage, 0])) as Record<
    (typeof STAGES)[number],
    number
  >; // all keys are there
  const timed = <T>(stage: (typeof STAGES)[number], step: () => T): T => {
    const begin = performance.now();
    const value = step();
    seconds[stage] += (performance.now() - begin) / 1000;
    return value;
  };
  const file = `${name}.svg`;
  const drawing = timed('read', () => readSvg(svg, file));
  const layout = timed('lay out', () => layOut(drawing, file));
  const sheet = timed('chip', () => parseRunSheet(sheetText, 'bench.run.yaml'));
  const { chip, run } = timed('chip', () => assembleChip({ layout, sheet, file }));
  const network = timed('network', () => buildNetwork(chip));
  const flow = timed('solve', () => solveFlow(network, run));
  const findings = timed('findings', () => findAll({ chip, run, network, flow }));
  timed('json', () => {
    const report = buildReport({
      tool: { name: 'rillcheck', version: '0' },
      layout: { file, sha256: '' },
      sheet: null,
      cases: [{ name: null, chip, run, network, flow, findings }],
    });
    let length = 0;
    for (const part of writeJson(report.result, 'ports')) length += part.length;
    return length;
  });
  return { segments: network.segmentCount, seconds };
}
