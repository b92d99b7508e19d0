import type { Judge } from './judge.ts';
import { uniformFrom } from './low-discrepancy.ts';
import type { SpreadModel } from './model.ts';
import { type Output, outputValue } from './outputs.ts';
import { deviate } from './variables.ts';

/** Where the sample's numbers go: one column per followed output, one place per draw. */
export interface SampleColumns {
  readonly values: readonly Float64Array[];
  /** 1 where all windows and limits are kept; 0 where not, or where the draw lies outside the model. */
  readonly isGood: Uint8Array;
  /** 1 where nothing can be computed: a width, depth, bore or viscosity that is not above 0, or a temperature that no data cover. */
  readonly isOutside: Uint8Array;
}

export function emptyColumns(outputs: number, draws: number): SampleColumns {
  return {
    values: Array.from({ length: outputs }, () => new Float64Array(draws).fill(Number.NaN)),
    isGood: new Uint8Array(draws),
    isOutside: new Uint8Array(draws),
  };
}

/**
 * Makes draw after draw. Draw i depends on the seed and i alone, so any split of the draws over calls, threads or machines gives
 * the same columns.
 * @param followed how many of the outputs, from the first, have a column
 */
export function drawer(
  model: SpreadModel,
  outputs: readonly Output[],
  followed: number,
  judge: Judge,
  seed: number,
): (index: number, into: SampleColumns) => void {
  const { variables } = model;
  const uniform = uniformFrom(seed);
  const x = new Float64Array(variables.length);
  const values = new Float64Array(outputs.length);
  const needed = [...new Set([...Array(followed).keys(), ...judge.limited])];
  return (index, into) => {
    for (let k = 0; k < x.length; k++) x[k] = deviate(variables[k].tolerance, uniform(k, index));
    const state = model.at(x);
    if (state === null) {
      into.isOutside[index] = 1;
      return;
    }
    for (const i of needed) values[i] = outputValue(outputs[i], model, state);
    for (let i = 0; i < followed; i++) into.values[i][index] = values[i];
    into.isGood[index] = judge.isGood(values, state) ? 1 : 0;
  };
}
