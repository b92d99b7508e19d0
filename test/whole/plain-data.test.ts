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

it('a run is plain data, but for the way back from a key of its sheet to a line', () => {
  const { sheet, ...rest } = run;
  expect(structuredClone(rest)).toEqual(rest);
  expect(functionsIn(sheet)).toEqual(['lineOf']);
});

it('a network is plain data, but for the library’s index of boxes', () => {
  const { trace } = network;
  const rest = { ...network, trace: { ...trace, near: { ...trace.near, index: null } } };
  expect(structuredClone(rest)).toEqual(rest);
});

/** Names under which a thing holds functions, each once, however deep. */
function functionsIn(thing: unknown): string[] {
  const names = new Set<string>();
  const look = (one: unknown): void => {
    if (typeof one !== 'object' || one === null) return;
    for (const [name, value] of Object.entries(one)) {
      if (typeof value === 'function') names.add(name);
      look(value);
    }
  };
  look(thing);
  return [...names];
}

function text(file: string): string {
  return readFileSync(`layouts-demo/${file}`, 'utf8');
}
