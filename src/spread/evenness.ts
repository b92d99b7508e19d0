import { acceptedLimits } from '../asked/accepted.ts';
import { evenGroupsOf } from '../asked/even.ts';
import { reachesOfChannel } from '../asked/reaches.ts';
import { isAbove } from '../asked/within.ts';
import type { ChipState, SpreadModel } from './model.ts';

/** One group of channels that are to be even, and how often they were not. */
export interface EvenGroup {
  /** Name or pattern as the run sheet has it. */
  readonly key: string;
  /** How far a flow may lie off their mean, as a share of it. */
  readonly most: number;
  /** Draws in which one lay further off. */
  readonly failures: number;
}

export interface Evenness {
  /** Whether every group of channels that is to be even is so, as the rule uneven-flow judges it. Counts what is not. */
  readonly isKept: (state: ChipState) => boolean;
  /** The groups judged, with what was counted so far. */
  readonly groups: () => readonly EvenGroup[];
  /** Keys of groups with a flow that can't be known. */
  readonly unknown: readonly string[];
}

/** One group of the run sheet: the reaches of each of its channels, and how far a flow may lie off their mean. */
interface Group {
  readonly key: string;
  readonly lanes: readonly (readonly number[])[];
  readonly most: number;
}

export function evennessOf(model: SpreadModel): Evenness {
  const { network, run, nominal } = model;
  const { chip } = network;
  const groups = evenGroupsOf(chip, run).flatMap(({ key, even, members }): Group[] => {
    const names = members.map((channel) => chip.channels[channel].name);
    const { max } = acceptedLimits(model, 'uneven-flow', names, '', null, even);
    if (members.length < 2 || max === null) return [];
    return [{ key, lanes: members.map((channel) => [...reachesOfChannel(network, channel)]), most: max }];
  });
  const isKnown = ({ lanes }: Group): boolean =>
    lanes.every(
      (reaches) => reaches.length > 0 && reaches.every((reach) => !Number.isNaN(nominal.reachFlow[reach])),
    );
  const judged = groups.filter(isKnown);
  const failures = new Int32Array(judged.length);
  return {
    unknown: groups.filter((group) => !isKnown(group)).map(({ key }) => key),
    groups: () => judged.map(({ key, most }, g) => ({ key, most, failures: failures[g] })),
    isKept: ({ flow }) => {
      let kept = true;
      for (const [g, group] of judged.entries()) {
        if (isEven(group, flow.flow)) continue;
        failures[g]++;
        kept = false;
      }
      return kept;
    },
  };
}

function isEven({ lanes, most }: Group, flow: Float64Array): boolean {
  const flows = lanes.map((reaches) => Math.max(...reaches.map((reach) => Math.abs(flow[reach]))));
  const mean = flows.reduce((sum, value) => sum + value, 0) / flows.length;
  return mean === 0 || flows.every((value) => !isAbove(Math.abs(value - mean) / mean, most));
}
