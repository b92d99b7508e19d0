import type { RunNetwork } from '../../src/asked/run-network.ts';
import { assembleChip } from '../../src/chip/assemble.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { readSvg } from '../../src/svg/read.ts';

/** The network of a drawing and its run under a run sheet, by the whole chain of steps. */
export function networkFrom(svg: string, sheet: string): RunNetwork {
  const { chip, run } = assembleChip({
    layout: layOut(readSvg(svg, 'chip.svg'), 'chip.svg'),
    sheet: parseRunSheet(sheet, 'chip.run.yaml'),
    file: 'chip.svg',
  });
  return { network: buildNetwork(chip), run };
}

/** A drawing of 60 × 40 mm with named strokes 0.2 mm wide and ports of 1 mm. */
export function drawing(
  channels: Readonly<Record<string, string>>,
  ports: Readonly<Record<string, readonly [number, number]>>,
): string {
  const strokes = Object.entries(channels).map(([name, d]) => `<path data-name="${name}" d="${d}"/>`);
  const holes = Object.entries(ports).map(
    ([name, [x, y]]) => `<circle data-name="${name}" cx="${x}" cy="${y}" r="0.5"/>`,
  );
  return `<svg xmlns="http://www.w3.org/2000/svg" width="60mm" height="40mm" viewBox="0 0 60 40"><g data-name="cut" fill="none" stroke="#000" stroke-width="0.2">${strokes.join('')}</g><g>${holes.join('')}</g></svg>`;
}
