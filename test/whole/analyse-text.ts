import { type Analysis, analyse } from '../../src/analyse.ts';
import { layOut } from '../../src/layout/layout.ts';
import { reachName } from '../../src/network/names.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { readSvg } from '../../src/svg/read.ts';

/** The whole program on texts, without disk: SVG and run sheet in, analysis out. */
export async function analyseText(svg: string, sheet: string | null): Promise<Analysis> {
  const file = 'test.svg';
  return analyse({
    layout: layOut(readSvg(svg, file), file),
    sheet: sheet === null ? null : parseRunSheet(sheet, 'test.run.yaml'),
    file,
  });
}

/** Flow into the chip at every port by name, m³/s. */
export function portFlows({ chip, flow }: Analysis): Record<string, number> {
  return Object.fromEntries(chip.ports.map(({ name }, p) => [name, flow.portFlow[p]]));
}

/** Flow, duct length and pressure drop of every reach by name. */
export function reachValues({ network, flow }: Analysis): Record<string, readonly [number, number, number]> {
  const values: Record<string, readonly [number, number, number]> = {};
  for (let r = 0; r < network.reachCount; r++) {
    values[reachName(network, r)] = [flow.reachFlow[r], network.reachDuctMm[r], flow.reachPressureDrop[r]];
  }
  return values;
}
