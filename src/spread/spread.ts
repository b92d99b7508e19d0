/**
 * Network × tolerances → Spread, in two ways that check each other: first order with exact derivatives, and a seeded
 * low-discrepancy sample of the whole nonlinear model.
 */

import type { RunNetwork } from '../asked/run-network.ts';
import type { Tolerances } from '../runsheet/types.ts';
import { worstCorner } from './corner.ts';
import { type Derivatives, derivativesOf, firstOrder } from './first-order.ts';
import { type Judge, makeJudge } from './judge.ts';
import { prepareModel, type SpreadModel } from './model.ts';
import { listOutputs, type Output, outputValue, pressureNodesOf } from './outputs.ts';
import { drawer, emptyColumns, type SampleColumns } from './sample.ts';
import { chanceOf, type Summary, summarise } from './statistics.ts';
import type { Spread, SpreadOutput } from './types.ts';
import { listVariables } from './variables.ts';

export interface SpreadOptions {
  readonly draws: number;
  readonly seed: number;
}

/** Lets the caller in between two draws: `due` is asked after each, `rest` waits and says whether to go on. */
export interface Pace {
  readonly due: () => boolean;
  readonly rest: (done: number) => Promise<'go on' | 'stop'>;
  /** Called once no draw follows. */
  readonly end?: () => void;
}

const NEVER: Pace = { due: () => false, rest: async () => 'go on' };

/** Numbers that the sample may hold at once (8 bytes each); outputs beyond are judged, and not listed. */
const MOST_NUMBERS = 3e7;

/**
 * How far the tolerances move every port, window and target. Same network, tolerances, draws and seed: same numbers, to the last bit.
 * Stopped early it gives the draws made so far, which are those of a shorter sample.
 *
 * Errors: InputError for a target at a node or reach that the network lacks.
 */
export async function spreadOf(
  at: RunNetwork,
  tolerances: Tolerances,
  { draws: asked, seed }: SpreadOptions,
  pace: Pace = NEVER,
): Promise<Spread> {
  const { causes, variables, idle } = listVariables(at, tolerances);
  const model = prepareModel(at, variables, pressureNodesOf(at));
  const outputs = listOutputs(at, model.nominal);
  const followed = Math.min(outputs.length, Math.max(16, Math.floor(MOST_NUMBERS / Math.max(1, asked))));
  const nominal = Float64Array.from(outputs, (output) => outputValue(output, model, model.nominalState));
  const judge = makeJudge(model, outputs, nominal);
  const linear = await linearPart(model, causes.length, outputs.slice(0, followed), pace);
  const columns = emptyColumns(followed, asked);
  const draws = linear.isStopped ? 0 : await sampled(model, outputs, followed, judge, seed, columns, pace);
  const outside = columns.isOutside.subarray(0, draws).reduce((sum, flag) => sum + flag, 0);
  const good = columns.isGood.subarray(0, draws).reduce((sum, flag) => sum + flag, 0);
  return {
    seed,
    asked,
    draws,
    outside,
    causes,
    idle,
    outputs: outputs
      .slice(0, followed)
      .map((output, i) =>
        outputOf(output, nominal[i], linear, i, columns.values[i].subarray(0, draws), judge.failures[i]),
      ),
    leftOut: outputs.length - followed,
    yield: judge.unknownWindows.length > 0 ? null : chanceOf(good, draws),
    isGood: columns.isGood.subarray(0, draws),
    unknownWindows: judge.unknownWindows,
    unknownLimits: judge.unknownLimits,
    turbulent: judge.turbulent(),
    evenGroups: judge.evenGroups(),
    corner: worstCorner(
      model,
      causes.length,
      outputs.slice(0, followed),
      nominal,
      linear.sd,
      linear.derivatives,
    ),
  };
}

/** Why no tolerance moves anything on this chip, one reason each; null when one does. Computes nothing. */
export function whyNoSpread(at: RunNetwork, tolerances: Tolerances): readonly string[] | null {
  const { variables, idle } = listVariables(at, tolerances);
  return variables.length > 0 ? null : idle;
}

interface LinearPart {
  readonly derivatives: Derivatives;
  readonly sd: Float64Array;
  /** By output and cause; null where there are no derivatives. */
  readonly variance: readonly (Float64Array | null)[];
  readonly isStopped: boolean;
}

async function linearPart(
  model: SpreadModel,
  causes: number,
  outputs: readonly Output[],
  pace: Pace,
): Promise<LinearPart> {
  const derivatives = derivativesOf(model);
  const sd = new Float64Array(outputs.length).fill(Number.NaN);
  const variance: (Float64Array | null)[] = outputs.map(() => null);
  let isStopped = false;
  for (let i = 0; i < outputs.length && !isStopped; i++) {
    const row = derivatives.of(outputs[i]);
    if (row !== null) {
      const first = firstOrder(model, causes, row);
      sd[i] = first.sd;
      variance[i] = first.variance;
    }
    if (pace.due()) isStopped = (await pace.rest(0)) === 'stop';
  }
  return { derivatives, sd, variance, isStopped };
}

async function sampled(
  model: SpreadModel,
  outputs: readonly Output[],
  followed: number,
  judge: Judge,
  seed: number,
  columns: SampleColumns,
  pace: Pace,
): Promise<number> {
  const draw = drawer(model, outputs, followed, judge, seed);
  const asked = columns.isGood.length;
  for (let i = 0; i < asked; i++) {
    draw(i, columns);
    if (pace.due() && (await pace.rest(i + 1)) === 'stop') return i + 1;
  }
  return asked;
}

function outputOf(
  output: Output,
  nominal: number,
  { sd, variance }: LinearPart,
  index: number,
  column: Float64Array,
  failures: number,
): SpreadOutput {
  const sample = summarise(column);
  const rounding = ROUNDING * Math.abs(nominal);
  const summary = sample.sd <= rounding ? { ...sample, sd: 0 } : sample;
  const linearSd = sd[index] <= rounding ? 0 : sd[index];
  const whole = linearSd * linearSd;
  const parts = variance[index];
  return {
    ...output,
    nominal,
    mean: summary.mean,
    sd: summary.sd,
    p2_5: summary.p2_5,
    p97_5: summary.p97_5,
    linearSd,
    shares: parts !== null && whole > 0 ? parts.map((part) => part / whole) : null,
    isLinear: agrees(nominal, linearSd, summary),
    failures,
    column,
  };
}

/** A spread below this share of the value is what rounding leaves of a number that nothing moves (a given flow, its equal shares). */
const ROUNDING = 1e-12;

/** How far sd may differ, as a share of it, and how far the mean may move, in sd, before a response counts as not linear. */
const SD_DIFFERENCE = 0.05;
const MEAN_SHIFT = 0.1;

/**
 * Sample and first order agree when neither the spread nor the middle differs by more than would show in a second digit, beyond
 * three standard errors that the sample would have if the response were linear: it is then a sum of normal and uniform numbers,
 * whose fourth moment is at most a normal's, so s errs by at most σ/√2n and the mean by σ/√n.
 */
function agrees(nominal: number, linearSd: number, { count, mean, sd }: Summary): boolean | null {
  if (count < 2 || Number.isNaN(linearSd) || Number.isNaN(sd)) return null;
  if (sd === 0 && linearSd === 0) return true;
  const largest = Math.max(sd, linearSd);
  const spreadDiffers =
    Math.abs(sd - linearSd) > SD_DIFFERENCE * largest + (3 * linearSd) / Math.sqrt(2 * count);
  const middleDiffers = Math.abs(mean - nominal) > MEAN_SHIFT * largest + (3 * linearSd) / Math.sqrt(count);
  return !spreadDiffers && !middleDiffers;
}
