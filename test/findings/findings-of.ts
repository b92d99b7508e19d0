import { assembleChip } from '../../src/chip/assemble.ts';
import { findAll } from '../../src/findings/check.ts';
import type { FindingContext } from '../../src/findings/context.ts';
import type { FindingReport } from '../../src/findings/types.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { readSvg } from '../../src/svg/read.ts';

/** The findings of one drawing under one run sheet (null: none), by the whole chain of steps. */
export function findingsOf(svg: string, sheetText: string | null, file = 'fixture'): FindingReport {
  return findAll(contextOf(svg, sheetText, file));
}

/** The same up to the rules. */
export function contextOf(svg: string, sheetText: string | null, file = 'fixture'): FindingContext {
  const layout = layOut(readSvg(svg, `${file}.svg`), `${file}.svg`);
  const sheet = sheetText === null ? null : parseRunSheet(sheetText, `${file}.run.yaml`);
  const { chip, run } = assembleChip({ layout, sheet, file: `${file}.svg` });
  const network = buildNetwork(chip);
  return { chip, run, network, flow: solveFlow(network, run) };
}
