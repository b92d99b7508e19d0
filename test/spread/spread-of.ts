import type { RunNetwork } from '../../src/asked/run-network.ts';
import { assembleChip } from '../../src/chip/assemble.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import type { Tolerances } from '../../src/runsheet/types.ts';
import { prepareModel, type SpreadModel } from '../../src/spread/model.ts';
import { listOutputs, type Output, pressureNodesOf } from '../../src/spread/outputs.ts';
import { spreadOf } from '../../src/spread/spread.ts';
import type { Spread, SpreadOutput } from '../../src/spread/types.ts';
import { listVariables, type Variables } from '../../src/spread/variables.ts';
import { readSvg } from '../../src/svg/read.ts';

export interface Varying extends RunNetwork {
  readonly tolerances: Tolerances;
}

/** A drawing (what stands between the svg tags, 1 unit = 1 mm) under a run sheet, as far as its network and its run. */
export function varying(shapes: string, sheetText: string): Varying {
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="60mm" height="40mm" viewBox="0 0 60 40">${shapes}</svg>`;
  const sheet = parseRunSheet(sheetText, 'test.run.yaml');
  if (sheet.tolerances === null) throw new Error('the test sheet has no tolerances');
  const layout = layOut(readSvg(svg, 'test.svg'), 'test.svg');
  const { chip, run } = assembleChip({ layout, sheet, file: 'test.svg' });
  return { network: buildNetwork(chip), run, tolerances: sheet.tolerances };
}

export function spreadOfDrawing(
  shapes: string,
  sheetText: string,
  { draws = 1000, seed = 1 } = {},
): Promise<Spread> {
  const at = varying(shapes, sheetText);
  return spreadOf(at, at.tolerances, { draws, seed });
}

export interface Modelled extends Variables {
  readonly model: SpreadModel;
  readonly outputs: readonly Output[];
}

export function modelOf(at: Varying): Modelled {
  const variables = listVariables(at, at.tolerances);
  const model = prepareModel(at, variables.variables, pressureNodesOf(at));
  return { ...variables, model, outputs: listOutputs(at, model.nominal) };
}

export function outputNamed(spread: Spread, name: string, quantity: SpreadOutput['quantity']): SpreadOutput {
  const found = spread.outputs.find((output) => output.name === name && output.quantity === quantity);
  if (found === undefined) throw new Error(`there is no ${quantity} of ${name}`);
  return found;
}

export function shareOf(spread: Spread, output: SpreadOutput, key: string): number {
  return output.shares?.[spread.causes.findIndex((cause) => cause.key === key)] ?? 0;
}

/** One straight duct of 20 mm between two ports, 0.2 mm wide unless said. */
export function oneDuct(widthMm = 0.2): string {
  return `<g id="lanes" fill="none" stroke="#000" stroke-width="${widthMm}"><path id="lane" d="M10 20 H32"/></g>
    <circle id="feed" cx="10" cy="20" r="1"/><circle id="waste" cx="32" cy="20" r="1"/>`;
}
