import type { Spread } from '../spread/types.ts';
import { inChunks } from './chunks.ts';
import { table } from './csv.ts';
import type { SpreadPart } from './result-rows.ts';
import { outputColumns } from './result-schema.ts';

/** One line per output with its quantiles, and the share of variance of each tolerance in a column of its own (`share depth:lanes`). */
export function* writeSpreadCsv({ outputs }: SpreadPart): Generator<string> {
  const causes = [...new Set(outputs.flatMap(({ shares }) => Object.keys(shares)))];
  const columns = outputColumns.filter((column) => column !== 'shares');
  yield* table(
    [...columns, ...causes.map((key) => `share ${key}`)],
    outputs.map((output) => ({
      ...Object.fromEntries(causes.map((key) => [`share ${key}`, output.shares[key] ?? null])),
      ...Object.fromEntries(columns.map((column) => [column, cellOf(output[column])])),
    })),
  );
}

function cellOf(value: string | number | boolean | null): string | number | null {
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  return value;
}

/** Every draw: its number from 0, whether it keeps all windows and limits (1 or 0), and each output in SI units, empty where it does not exist. */
export function* writeSamplesCsv({ outputs, draws, isGood }: Spread): Generator<string> {
  const heads = outputs.map(
    ({ on, name, quantity, unit }) => `${quantity} of ${on} ${name}${unit === '' ? '' : ` (${unit})`}`,
  );
  yield* table(['draw', 'good', ...heads], []);
  yield* inChunks(drawLines());

  function* drawLines(): Generator<string> {
    for (let i = 0; i < draws; i++) {
      const cells = outputs.map(({ column }) => (Number.isFinite(column[i]) ? column[i] + 0 : ''));
      yield `${[i, isGood[i], ...cells].join(',')}\r\n`;
    }
  }
}
