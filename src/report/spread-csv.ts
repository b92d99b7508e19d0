import type { Spread } from '../spread/types.ts';
import { table } from './csv.ts';
import type { SpreadPart } from './result-rows.ts';

const COLUMNS = [
  'on',
  'name',
  'quantity',
  'unit',
  'nominal',
  'mean',
  'sd',
  'p2_5',
  'p97_5',
  'linear_sd',
  'linear',
  'kept',
] as const;

/** One line per output with its quantiles, and the share of variance of each tolerance in a column of its own (`share depth:lanes`). */
export function* writeSpreadCsv({ outputs }: SpreadPart): Generator<string> {
  const causes = [...new Set(outputs.flatMap(({ shares }) => Object.keys(shares)))];
  const columns = [...COLUMNS, ...causes.map((key) => `share ${key}`)];
  yield* table(
    columns,
    outputs.map((output) => {
      const row: Record<string, string | number | null> = {
        ...Object.fromEntries(causes.map((key) => [`share ${key}`, output.shares[key] ?? null])),
      };
      for (const column of COLUMNS) {
        const value = output[column];
        row[column] = typeof value === 'boolean' ? (value ? 'yes' : 'no') : value;
      }
      return row;
    }),
  );
}

/** Every draw: its number from 0, whether it keeps all windows and limits (1 or 0), and each output in SI units, empty where it does not exist. */
export function* writeSamplesCsv({ outputs, draws, isGood }: Spread): Generator<string> {
  const heads = outputs.map(
    ({ on, name, quantity, unit }) => `${quantity} of ${on} ${name}${unit === '' ? '' : ` (${unit})`}`,
  );
  yield* table(['draw', 'good', ...heads], []);
  let pending = '';
  for (let i = 0; i < draws; i++) {
    pending += `${i},${isGood[i]}`;
    for (const { column } of outputs) pending += `,${Number.isFinite(column[i]) ? column[i] + 0 : ''}`;
    pending += '\r\n';
    if (pending.length < 65_536) continue;
    yield pending;
    pending = '';
  }
  yield pending;
}
