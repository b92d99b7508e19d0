import { describe, expect, it } from 'vitest';
import { analyse } from '../../src/analyse.ts';
import { checkLayout } from '../../src/check-layout.ts';
import { layOut } from '../../src/layout/layout.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { readSvg } from '../../src/svg/read.ts';
import { analyseText, portFlows } from './analyse-text.ts';

const CHIP = `<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="10mm" viewBox="0 0 30 10">
  <path id="lane" d="M5 5H25" fill="none" stroke="#06c" stroke-width="0.2"/>
  <circle id="in" cx="5" cy="5" r="0.5" fill="none" stroke="#c00"/>
  <circle id="out" cx="25" cy="5" r="0.5" fill="none" stroke="#c00"/>
</svg>`;

/** Viscosity of water, mPa s: 20 °C and 37 °C, IAPWS SR6-08(2011), computed; 25 °C its verification row. */
const WATER = { 20: 1.00156726, 25: 0.889996774, 37: 0.69130342 } as const;

const sheet = (tubing: string) =>
  `fluid: water\ntemperature: 37 degC\ndepth: 0.1 mm\nports: { in: { pressure: 10 kPa, tubing: ${tubing} }, out: open }\n`;

const LIST =
  '[ { bore: 0.5 mm, length: 300 mm, temperature: 20 degC }, { bore: 50 um, length: 80 mm }, { bore: 0.1 mm, length: 50 mm, temperature: 25 degC } ]';

describe('tubing of several pieces', () => {
  it('resists in series, each piece at the viscosity of its own temperature', async () => {
    const piece = (boreM: number, lengthM: number, mPaS: number) =>
      (128 * mPaS * 1e-3 * lengthM) / (Math.PI * boreM ** 4);
    const series =
      piece(0.5e-3, 0.3, WATER[20]) + piece(50e-6, 0.08, WATER[37]) + piece(0.1e-3, 0.05, WATER[25]);
    const plain = await analyseText(CHIP, sheet('none'));
    const lane = 1e4 / portFlows(plain).in;
    const { in: flow } = portFlows(await analyseText(CHIP, sheet(LIST)));
    expect(flow / (1e4 / (lane + series))).toBeCloseTo(1, 7);
  });

  it('holds what its pieces hold together, and takes the time that they take one after the other', async () => {
    const [{ part }] = (
      await checkLayout({
        layout: { name: 't.svg', text: CHIP },
        runSheet: { name: 't.run.yaml', text: sheet(LIST) },
      })
    ).cases;
    const [row, other] = part.ports;
    const volume = (Math.PI / 4) * (0.5e-3 ** 2 * 0.3 + 50e-6 ** 2 * 0.08 + 0.1e-3 ** 2 * 0.05);
    expect(row.tubing_volume_m3! / volume).toBeCloseTo(1, 12);
    expect(row.tubing_time_s! / (volume / row.flow_m3_s!)).toBeCloseTo(1, 12);
    expect(other).toMatchObject({ tubing_volume_m3: null, tubing_time_s: null });
  });

  it('stays at a port in every case, until a case takes it away', async () => {
    const conditions = { open: 'open', head: '{ head: 40 mm }', sealed: 'sealed', bare: '{ tubing: none }' };
    const text = `${sheet(LIST)}cases: { ${Object.entries(conditions)
      .map(([name, port]) => `${name}: { ports: { in: ${port}, out: { head: 20 mm } } }`)
      .join(', ')} }`;
    const layout = layOut(readSvg(CHIP, 't.svg'), 't.svg');
    for (const { name, sheet: one } of parseRunSheet(text, 't.run.yaml').cases) {
      expect(one.ports.in!.tubing.length, name).toBe(name === 'bare' ? 0 : 3);
      const { flow } = await analyse({ layout, sheet: one, file: 't.svg' });
      expect(flow.tubingResistance[0]! > 0, name).toBe(name !== 'bare');
    }
  });

  it('of a temperature that the fluid is not known at is refused at its line', async () => {
    await expect(
      analyseText(
        CHIP,
        sheet('[ { bore: 1 mm, length: 1 m }, { bore: 1 mm, length: 1 m, temperature: 120 degC } ]'),
      ),
    ).rejects.toThrow(
      'test.run.yaml:4: ports.in.tubing[1].temperature: the properties of water are known from',
    );
  });
});
