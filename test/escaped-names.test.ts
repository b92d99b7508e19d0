import { describe, expect, it } from 'vitest';
import { type Assembled, assembleChip } from '../src/chip/assemble.ts';
import type { Chip } from '../src/chip/types.ts';
import { withoutEscapes } from '../src/escaped-names.ts';
import { layOut } from '../src/layout/layout.ts';
import { parseRunSheet } from '../src/runsheet/parse.ts';
import { readSvg } from '../src/svg/read.ts';
import { randomFrom } from './solve/graphs.ts';

describe("an editor's escapes", () => {
  it.each([
    ['lane_x5F_1', 'lane_1'],
    ['lane_x20_1', 'lane 1'],
    ['a_x2d_b_x2D_c', 'a-b-c'],
    ['_x31_00_x5F_um', '100_um'],
    ['a_x5F__x5F_b', 'a__b'],
    ['_x3bc_m', 'μm'],
    ['_x1F9EA_', '🧪'],
    // Escaped twice, and never left half read.
    ['_x5F_x5F_', '_'],
    ['plain', 'plain'],
    ['a_xyz_b', 'a_xyz_b'],
    ['a_x5_b', 'a_x5_b'],
    ['a_x5F', 'a_x5F'],
    // No characters of a text.
    ['a_x00_b', 'a_x00_b'],
    ['a_xD800_b', 'a_xD800_b'],
    ['a_xFFFFFF_b', 'a_xFFFFFF_b'],
    ['_x20_', '_x20_'],
    ['_x20_a_x20_', 'a'],
  ])('%s reads %s', (written, read) => {
    expect(withoutEscapes(written)).toBe(read);
    expect(withoutEscapes(read)).toBe(read);
  });

  it('read any name back as it was', () => {
    const random = randomFrom(3);
    for (let k = 0; k < 500; k++) {
      const name = Array.from(
        { length: 1 + Math.floor(8 * random()) },
        () => 'ab1-. µé漢'[Math.floor(10 * random())],
      )
        .join('')
        .trim();
      if (name === '') continue;
      const escaped = [...name]
        .map((c) =>
          /[a-z]/.test(c) ? c : `_x${c.codePointAt(0)?.toString(16).toUpperCase().padStart(2, '0')}_`,
        )
        .join('');
      expect(withoutEscapes(escaped)).toBe(name);
    }
  });
});

describe('a name that an editor has escaped', () => {
  const svg = (
    more = '',
  ): string => `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="20mm" viewBox="0 0 40 20">
    <g id="lower_x5F_layer"><path id="run_x5F_1" d="M4 10H36" fill="none" stroke="#000" stroke-width=".2"/>${more}</g>
    <circle id="in_x20_1" cx="4" cy="10" r=".75"/><circle data-name="out 1" id="out_x20_1_2_" cx="36" cy="10" r=".75"/></svg>`;
  const assembled = (sheet: string, drawing = svg()): Assembled =>
    assembleChip({
      layout: layOut(readSvg(drawing, 'c.svg'), 'c.svg'),
      sheet: parseRunSheet(sheet, 'c.run.yaml'),
      file: 'c.svg',
    });
  const chip = (sheet: string, drawing = svg()): Chip => assembled(sheet, drawing).chip;
  const SHEET = (lane: string, layer: string, feed: string, waste: string): string => `
layers: { ${layer}: { depth: 80 um } }
ports: { ${feed}: { pressure: 1 kPa }, ${waste}: open }
channels: { ${lane}: { flow: { min: 1 uL/min } } }
targets: [{ channel: ${lane}, flow: 2 uL/min, by: ${feed} }]
pump_limits: { ${feed}: { max_flow: 1 mL/min } }
tolerances: { depth: { ${layer}: 5 % }, pressure: { ${feed}: 1 % } }
accept: [{ rule: open-end, at: ${lane}, because: b, by: c, on: 2026-05-04 }]
cases: { warm: { ports: { ${feed}: { pressure: 2 kPa } } } }
`;

  it('is shown as it was meant, and the run sheet may write either form, in every place', () => {
    const plain = assembled(SHEET('run_1', 'lower_layer', '"in 1"', '"out 1"'));
    const escaped = assembled(SHEET('run_x5F_1', 'lower_x5F_layer', 'in_x20_1', 'out_x20_1'));
    for (const { chip: one, run } of [plain, escaped]) {
      expect(one.channels).toMatchObject([{ name: 'run_1', depthMm: 0.08 }]);
      expect(run.channels).toMatchObject([{ flow: {} }]);
      expect(one.ports).toMatchObject([{ name: 'in 1' }, { name: 'out 1' }]);
      expect(run.ports).toMatchObject([{ condition: { kind: 'pressure' } }, { condition: { kind: 'open' } }]);
      expect(one.layers).toMatchObject([{ name: 'lower_layer' }]);
      expect(run.sheet?.targets).toMatchObject([{ name: 'run_1', by: 'in 1' }]);
      expect(run.sheet?.cases[0].sheet.ports['in 1'].condition).toEqual({
        kind: 'pressure',
        pressurePa: 2000,
      });
      expect(run.sheet?.accept[0].at).toBe('run_1');
    }
    expect(chip('depth: 1 um\nignore: [run_x5F_1]').channels).toEqual([]);
    expect(chip('depth: 1 um\nignore: ["run_x5F_*"]').channels).toEqual([]);
  });

  it('is refused with both where another is written otherwise and then is the same', () => {
    const twin = '<path id="run_1" d="M4 12H36" fill="none" stroke="#000" stroke-width=".2"/>';
    expect(() => chip('depth: 1 um', svg(twin))).toThrow(
      'c.svg: the shapes "run_x5F_1" and "run_1" have one name, "run_1", once the escapes that an editor wrote are read; give one of them another name',
    );
    expect(() => chip('depth: 1 um', svg(twin.replace('run_1', 'run_x5f_1')))).toThrow(
      'the shapes "run_x5F_1" and "run_x5f_1" have one name',
    );
    expect(() =>
      chip('depth: 1 um', svg(`</g><g id="lower_layer">${twin.replace('run_1', 'other')}`)),
    ).toThrow('the groups "lower_x5F_layer" and "lower_layer" have one name, "lower_layer"');
    // Two that are written alike share their settings as before, and a group may be called as a shape is.
    expect(chip('depth: 1 um', svg(twin.replace('run_1', 'run_x5F_1'))).channels).toHaveLength(2);
    expect(chip('depth: 1 um', svg(twin.replace('run_1', 'lower_layer'))).channels).toHaveLength(2);
    expect(() => chip('ports: { in_x20_1: open, "in 1": open }')).toThrow(
      'c.run.yaml:1: ports."in 1": "in_x20_1" and "in 1" are one name, "in 1", once an editor\'s escapes are read; keep one of them',
    );
  });
});
