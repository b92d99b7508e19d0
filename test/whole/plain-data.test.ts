import { readFileSync } from 'node:fs';
import { expect, it } from 'vitest';
import { assembleChip } from '../../src/chip/assemble.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { readSvg } from '../../src/svg/read.ts';

/** The stages of a demo's check up to its network, of a sheet with the most of what a sheet can say. */
const { chip, run } = assembleChip({
  layout: layOut(readSvg(text('culture.svg'), 'culture.svg'), 'culture.svg'),
  sheet: parseRunSheet(text('culture.run.yaml'), 'culture.run.yaml'),
  file: 'culture.svg',
});
const network = buildNetwork(chip);

it('a chip is plain data: what a copy has is all there is', () => {
  expect(structuredClone(chip)).toEqual(chip);
});

it('a run is plain data too, its sheet and where each key of it stands included', () => {
  expect(structuredClone(run)).toEqual(run);
});

it('a network is plain data, but for the library’s index of boxes', () => {
  const { trace } = network;
  const rest = { ...network, trace: { ...trace, near: { ...trace.near, index: null } } };
  expect(structuredClone(rest)).toEqual(rest);
});

function text(file: string): string {
  return readFileSync(`layouts-demo/${file}`, 'utf8');
}
