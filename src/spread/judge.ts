import { acceptedLimits } from '../asked/accepted.ts';
import { reachesOfChannel } from '../asked/reaches.ts';
import { isAbove } from '../asked/within.ts';
import { reachName } from '../network/names.ts';
import { type EvenGroup, evennessOf } from './evenness.ts';
import type { ChipState, SpreadModel } from './model.ts';
import { ductStateOf, isKept, type Output, outputValue, timeOutputs } from './outputs.ts';

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
  /** Groups of channels that are to be even, and the draws in which they were not. */
  readonly evenGroups: () => readonly EvenGroup[];
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
  const regrouped = regrouping(model, outputs, judged);
  let turbulent = 0;
  return {
    limited: judged,
    failures,
    unknownWindows: [...named(true), ...evenness.unknown.map((key) => `evenness of ${key}`)],
    unknownLimits: named(false),
    turbulent: () => turbulent,
    evenGroups: evenness.groups,
    isGood: (values, state) => {
      let good = true;
      const anew = regrouped(state);
      for (const i of judged) {
        if (anew?.get(i) ?? keeps(outputs[i], values[i])) continue;
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

/** A time through a reach without flow does not exist because it has no end. */
function keeps(output: Output, value: number): boolean {
  return isKept(output, Number.isNaN(value) ? Number.POSITIVE_INFINITY : value);
}

/**
 * Where a reach flows another way than nominally, fluid passes other reaches one after the other, and the residence windows of the
 * channel are asked of those. Gives what then is kept of the outputs they stand in for; null while every passage is the nominal one.
 */
function regrouping(
  model: SpreadModel,
  outputs: readonly Output[],
  judged: readonly number[],
): (state: ChipState) => ReadonlyMap<number, boolean> | null {
  const { network, nominal } = model;
  const ofChannel = new Map<number, number[]>();
  for (const i of judged) {
    const { subject, hasWindow, isTarget } = outputs[i];
    if (subject.kind !== 'time' || !hasWindow || isTarget) continue;
    const channel = network.reachChannel[subject.reaches[0]];
    ofChannel.set(channel, [...(ofChannel.get(channel) ?? []), i]);
  }
  const watched = [...ofChannel].flatMap(([channel, members]) => {
    const reaches = reachesOfChannel(network, channel);
    return reaches.length > 1 && reaches.every((reach) => !Number.isNaN(nominal.reachFlow[reach]))
      ? [{ channel, members, reaches }]
      : [];
  });
  return (state) => {
    let kept: Map<number, boolean> | null = null;
    const { flow } = state.flow;
    for (const { channel, members, reaches } of watched) {
      if (reaches.every((reach) => flow[reach] * nominal.reachFlow[reach] > 0)) continue;
      kept ??= new Map();
      const failed = timeOutputs(model, channel, flow).filter(
        (output) => !keeps(output, outputValue(output, model, state)),
      );
      for (const i of members)
        kept.set(i, !failed.some(({ subject }) => isOfSameTime(subject, outputs[i].subject)));
    }
    return kept;
  };
}

function isOfSameTime(a: Output['subject'], b: Output['subject']): boolean {
  return (
    a.kind === 'time' &&
    b.kind === 'time' &&
    a.at === b.at &&
    a.reaches.some((reach) => b.reaches.includes(reach))
  );
}

/** Whether a time does not exist because the flow is known to be nought. */
function isStill({ nominal }: SpreadModel, { subject }: Output): boolean {
  return subject.kind === 'time' && subject.reaches.every((reach) => !Number.isNaN(nominal.reachFlow[reach]));
}

function laminarityOf(model: SpreadModel): (state: ChipState) => boolean {
  const { network, run } = model;
  const { chip } = network;
  const { reachCount, reachChannel } = network;
  const limit = Float64Array.from({ length: reachCount }, (_, reach) => {
    const names = [reachName(network, reach), chip.channels[reachChannel[reach]].name];
    const { max } = acceptedLimits(model, 'not-laminar', names, '', null, run.limits.maxReynolds.value);
    return max ?? Number.POSITIVE_INFINITY;
  });
  return (state) => {
    for (let reach = 0; reach < reachCount; reach++) {
      const duct = ductStateOf(reach, model, state);
      if (duct !== null && isAbove(duct.reynolds, limit[reach])) return false;
    }
    return true;
  };
}
