import type { Chip, Run } from '../chip/types.ts';
import { isPattern, matches } from '../runsheet/names.ts';

/** Channels that are to carry alike. */
export interface AskedEven {
  /** Name or pattern as the run sheet has it. */
  readonly key: string;
  /** How far a flow may lie off their mean, as a share of it. */
  readonly even: number;
  /** Every channel whose drawn name matches, whatever other entry it has. */
  readonly members: readonly number[];
}

/** What is asked to be even, in the order written. */
export function evenGroupsOf(chip: Pick<Chip, 'channels'>, { sheet }: Pick<Run, 'sheet'>): AskedEven[] {
  return Object.entries(sheet?.channels ?? {}).flatMap(([key, { even }]) =>
    even === null ? [] : [{ key, even, members: membersOf(chip, key) }],
  );
}

function membersOf({ channels }: Pick<Chip, 'channels'>, key: string): number[] {
  const name = key.trim();
  return channels.flatMap(({ drawnName }, channel) => {
    if (drawnName === null) return [];
    return (isPattern(key) ? matches(key, drawnName) : drawnName === name) ? [channel] : [];
  });
}
