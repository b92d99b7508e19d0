import { isAbove } from '../findings/rule.ts';
import { reynoldsNumber } from '../physics/reynolds.ts';
import { acceptedLimits } from './accepted.ts';
import { evennessOf } from './evenness.ts';
import type { ChipState, SpreadModel } from './model.ts';
import { flowingIn, isKept, type Output } from './outputs.ts';

/**
 * Whether a state keeps every window and limit that flow decides: the outputs' own, and the Reynolds number of every reach.
 * Limits of the drawing (widths, walls, margins) are judged on the drawing and not here.
 */
export interface Judge {
  /** Outputs that something is asked of, as indices into the list. */
  readonly limited: readonly number[];
  /** `values` are those of all outputs; the counts of what was not kept go into `failures`, one per output. */
  readonly isGood: (values: Float64Array, state: ChipState) => boolean;
  readonly failures: Int32Array;
  /** Draws in which some reach was not laminar. */
  readonly turbulent: () => number;
  /** Windows and limits of numbers that can't be known, so that nobody can say whether they are kept. */
  readonly unknownWindows: readonly string[];
  readonly unknownLimits: readonly string[];
}

export function makeJudge(model: SpreadModel, outputs: readonly Output[], nominal: Float64Array): Judge {
  const limited = outputs.flatMap(({ min, max }, i) => (min !== null || max !== null ? [i] : []));
  const canJudge = (i: number): boolean => !Number.isNaN(nominal[i]) || isStill(model, outputs[i]);
  const judged = limited.filter(canJudge);
  const unknown = limited.filter((i) => !canJudge(i));
  const named = (ofWindow: boolean): string[] =>
    unknown
      .filter((i) => outputs[i].hasWindow === ofWindow)
      .map((i) => `${outputs[i].quantity.replaceAll('_', ' ')} of ${outputs[i].name}`);
  const failures = new Int32Array(outputs.length);
  const isLaminar = laminarityOf(model);
  const evenness = evennessOf(model);
  let turbulent = 0;
  return {
    limited: judged,
    failures,
    unknownWindows: [...named(true), ...evenness.unknown.map((key) => `evenness of ${key}`)],
    unknownLimits: named(false),
    turbulent: () => turbulent,
    isGood: (values, state) => {
      let good = true;
      for (const i of judged) {
        // a time through a reach without flow does not exist because it has no end
        const value = Number.isNaN(values[i]) ? Number.POSITIVE_INFINITY : values[i];
        if (isKept(outputs[i], value)) continue;
        failures[i]++;
        good = false;
      }
      if (!evenness.isKept(state)) good = false;
      if (isLaminar(state)) return good;
      turbulent++;
      return false;
    },
  };
}

/** Whether a time does not exist because the flow is known to be nought. */
function isStill({ nominal }: SpreadModel, { subject }: Output): boolean {
  return subject.kind === 'time' && subject.reaches.every((reach) => !Number.isNaN(nominal.reachFlow[reach]));
}

function laminarityOf(model: SpreadModel): (state: ChipState) => boolean {
  const { network, chip } = model;
  const { reachCount, reachChannel } = network;
  const limit = Float64Array.from({ length: reachCount }, (_, reach) => {
    const names = [network.reachName(reach), chip.channels[reachChannel[reach]].name];
    const { max } = acceptedLimits(chip, 'not-laminar', names, '', null, chip.limits.maxReynolds.value);
    return max ?? Number.POSITIVE_INFINITY;
  });
  return (state) => {
    for (let reach = 0; reach < reachCount; reach++) {
      const flowing = flowingIn(reach, model, state);
      if (flowing === null) continue;
      const { form, flow } = flowing;
      const reynolds = reynoldsNumber(
        state.densityKgM3,
        flow / form.areaM2,
        form.hydraulicDiameterM,
        state.viscosityPaS,
      );
      if (isAbove(reynolds, limit[reach])) return false;
    }
    return true;
  };
}
