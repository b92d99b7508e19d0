import type { Derivatives } from './first-order.ts';
import type { SpreadModel } from './model.ts';
import { isKept, type Output, outputValue } from './outputs.ts';

/** One end of the box that the tolerances span: each variable at its 2 sigma or its hard limit. */
export interface WorstCorner {
  /** The output with least room, as an index; and which of its limits. */
  readonly output: number;
  readonly side: 'min' | 'max';
  readonly limit: number;
  /** Of the output there; NaN when the corner lies outside what can be computed. */
  readonly value: number;
  readonly isKept: boolean;
  /** By cause: +1 all its variables at their upper ends, −1 at their lower ones, 0 each at an end of its own. */
  readonly signs: readonly (1 | -1 | 0)[];
  /** Standard deviations between the nominal value and the limit; below 0 beyond it. */
  readonly room: number;
}

/**
 * The corner that the derivatives say is worst for the limit with least room (counted in standard deviations), computed exactly.
 * null when nothing is asked of a number that has derivatives and moves.
 */
export function worstCorner(
  model: SpreadModel,
  causes: number,
  outputs: readonly Output[],
  nominal: Float64Array,
  linearSd: Float64Array,
  derivatives: Derivatives,
): WorstCorner | null {
  let found: Pick<WorstCorner, 'output' | 'side' | 'limit' | 'room'> | null = null;
  for (const [output, asked] of outputs.entries()) {
    // below is what rounding leaves of a number that nothing moves
    if (!(linearSd[output] > 1e-12 * Math.abs(nominal[output]))) continue;
    for (const side of ['min', 'max'] as const) {
      const limit = asked[side];
      if (limit === null) continue;
      const distance = side === 'min' ? nominal[output] - limit : limit - nominal[output];
      const room = distance / linearSd[output];
      if (found === null || room < found.room) found = { output, side, limit, room };
    }
  }
  if (found === null) return null;
  const row = derivatives.of(outputs[found.output]);
  if (row === null) return null;
  const towards = found.side === 'min' ? -1 : 1;
  const x = row.map((d, k) => towards * Math.sign(d) * model.variables[k].tolerance.value);
  const state = model.at(x);
  const value = state === null ? Number.NaN : outputValue(outputs[found.output], model, state);
  return {
    ...found,
    value,
    isKept: isKept({ ...outputs[found.output], [found.side === 'min' ? 'max' : 'min']: null }, value),
    signs: signsOf(model, x, causes),
  };
}

function signsOf({ variables }: SpreadModel, x: Float64Array, causes: number): (1 | -1 | 0)[] {
  const signs: (1 | -1 | 0 | null)[] = [];
  variables.forEach(({ cause }, k) => {
    if (x[k] === 0) return;
    const sign = x[k] > 0 ? 1 : -1;
    const before = signs[cause];
    signs[cause] = before === undefined || before === null || before === sign ? sign : 0;
  });
  return Array.from({ length: causes }, (_, cause) => signs[cause] ?? 0);
}
