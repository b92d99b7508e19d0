import { describe, expect, test } from 'vitest';
import { figures, words } from '../../src/report/columns.ts';
import { type Quantity, quantityColumns, quantityTexts, valueColumns } from '../../src/report/quantities.ts';
import { portQuantity, reachQuantity } from '../../src/report/result-schema.ts';
import { textTable } from '../../src/report/text-table.ts';
import { showOf } from '../../src/runsheet/shown.ts';

const show = showOf(null);
const QUANTITIES: Readonly<Record<'mean' | 'peak' | 'share', Quantity>> = {
  mean: { kind: 'wall_shear', head: 'floor mean' },
  peak: { kind: 'wall_shear', head: 'floor peak' },
  share: { kind: 'share', head: 'floor in', second: 'window' },
};
const quantityOf = (key: keyof typeof QUANTITIES): Quantity => QUANTITIES[key];
const row = (mean: number | null, peak: number | null) => ({ mean, peak, share: null });

describe('columns of quantities', () => {
  const rows = [row(0.001, 0.002), row(0.003, 0.02), row(null, null)];

  test('that are asked for together share the unit of the largest of all their values', () => {
    const columns = quantityColumns(quantityOf, rows, show)('mean', 'peak');
    expect(columns.map(({ head, unit }) => [head, unit])).toEqual([
      ['floor mean', 'Pa'],
      ['floor peak', 'Pa'],
    ]);
    expect(rows.map((one) => columns.map(({ text }) => text(one)))).toEqual([
      ['0.001', '0.002'],
      ['0.003', '0.02'],
      ['–', '–'],
    ]);
    const [alone] = quantityColumns(quantityOf, rows, show)('mean');
    expect([alone.unit, alone.text(rows[1])]).toEqual(['mPa', '3']);
  });

  test('may say another head and value, and go where no row has one', () => {
    const columns = quantityColumns(
      quantityOf,
      rows,
      show,
    )({ key: 'peak', head: 'beyond 1 Pa', value: () => 1 }, { key: 'share', isOptional: true });
    expect(columns.map(({ head, text }) => [head, text(rows[0])])).toEqual([['beyond 1 Pa', '1']]);
  });

  test('of one value each carry a unit of their own', () => {
    const value = valueColumns(quantityOf, show);
    const columns = [value('mean'), value('peak', 'peak')];
    expect(columns.map(({ head, text }) => [head, text(row(0.003, null))])).toEqual([
      ['floor mean', '3 mPa'],
      ['peak', '–'],
    ]);
    expect(quantityTexts(quantityOf, { ...row(0, 0), share: 0.5 }, show)('share')).toBe('50 %');
  });
});

test('the result says of its keys what they measure, beside their descriptions', () => {
  expect(portQuantity('pressure_pa')).toMatchObject({ kind: 'pressure', head: 'in the chip' });
  expect(reachQuantity('joint_flow_share')).toEqual({
    kind: 'bound',
    head: 'joints move',
    second: 'it by ±',
  });
});

describe('a table in the terminal', () => {
  test('leaves out a column without any cell, aligns numbers right and cuts the widest column first', () => {
    const rows = [
      ['inlet of the long lane', '', '12'],
      ['b\u202Ec', '', '3.5'],
    ];
    const columns = [
      words('port', ([name]: readonly string[]) => name),
      words('empty', ([, empty]: readonly string[]) => empty),
      figures('flow', ([, , flow]: readonly string[]) => flow),
    ];
    expect(textTable(rows, columns, 16)).toEqual([
      'port        flow',
      'inlet of …    12',
      'bc           3.5',
    ]);
  });
});
