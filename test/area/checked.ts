import { assembleChip } from '../../src/chip/assemble.ts';
import { findAll } from '../../src/findings/check.ts';
import type { FindingReport } from '../../src/findings/types.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import type { Network } from '../../src/network/types.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { readSvg } from '../../src/svg/read.ts';

/** Network and findings of one drawing under one run sheet (null: none), by the whole chain of steps. */
export function checkedOf(svg: string, sheetText: string | null, file = 'drawing'): Checked {
  const layout = layOut(readSvg(svg, `${file}.svg`), `${file}.svg`);
  const sheet = sheetText === null ? null : parseRunSheet(sheetText, `${file}.run.yaml`);
  const { chip, run } = assembleChip({ layout, sheet, file: `${file}.svg` });
  const network = buildNetwork(chip);
  return { network, report: findAll({ chip, run, network, flow: solveFlow(network, run) }) };
}

export interface Checked {
  readonly network: Network;
  readonly report: FindingReport;
}
