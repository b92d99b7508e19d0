import { expect, test } from 'vitest';
import { ductForm } from '../../src/physics/duct.ts';
import { resistancePerLength } from '../../src/physics/duct-state.ts';
import { isotropicFloorMean } from '../../src/physics/section.ts';
import { writePdf } from '../../src/report/pdf/document.ts';
import { drawing } from '../solve/network-from.ts';
import { reportOf } from './demo.ts';
import { fonts } from './fonts.ts';
import { readPdf } from './read-pdf.ts';

const [MASK, DEPTH] = [0.2e-3, 60e-6];

test('the hand check of an isotropic etch says what etching 5 % deeper does, the width growing with the depth', async () => {
  const svg = drawing({ lane: 'M5 10H50' }, { in: [5, 10], out: [50, 10] });
  const sheet =
    'depth: 60 um\nlayers: { cut: { depth: 60 um, profile: isotropic } }\nports: { in: { flow: 6 uL/min }, out: open }\n';
  const { pages } = await readPdf(
    await writePdf(await reportOf('chip', svg, sheet), { fonts, paper: 'a4', date: new Date(0) }),
  );
  const text = pages.map(({ texts }) => texts.map((one) => one.text).join(' ')).join(' ');
  // the duct that stands for the etch is π·depth/2 wider than its mask
  const widthAt = (depth: number): number => MASK + (Math.PI * depth) / 2;
  const resistance = powerOf((depth) =>
    resistancePerLength(ductForm(widthAt(depth), depth), { viscosityPaS: 1e-3 }),
  );
  const shear = powerOf((depth) => isotropicFloorMean(MASK, depth));
  const area = powerOf((depth) => widthAt(depth) * depth);
  expect(resistance).toBeLessThan(-3);
  expect(numberAfter(text, 'the resistance goes with depth to the power')).toBeCloseTo(resistance, 1);
  const percent = (power: number): number => 100 * (1.05 ** power - 1);
  const rows: readonly (readonly [string, number, number])[] = [
    ['same flow by flow', percent(-resistance), 0],
    ['pressure drop', 0, percent(resistance)],
    ['mean floor shear', percent(shear), percent(resistance + shear)],
    ['residence time', percent(area + resistance), percent(area)],
  ];
  const table = text.slice(text.indexOf('5 % more depth changes at'));
  for (const [what, atPressure, atFlow] of rows) {
    const found = new RegExp(`${what} ([-+.\\d]+) % ([-+.\\d]+) %`).exec(table);
    expect(Math.abs(Number(found?.[1]) - atPressure), `${what}, ${found?.[0]}`).toBeLessThan(0.06);
    expect(Math.abs(Number(found?.[2]) - atFlow), `${what}, ${found?.[0]}`).toBeLessThan(0.06);
  }
});

/** d ln y / d ln depth by central differences. */
function powerOf(y: (depth: number) => number): number {
  const step = 1e-4;
  return Math.log(y(DEPTH * (1 + step)) / y(DEPTH * (1 - step))) / Math.log((1 + step) / (1 - step));
}

function numberAfter(text: string, words: string): number {
  return Number.parseFloat(text.slice(text.indexOf(words) + words.length));
}
