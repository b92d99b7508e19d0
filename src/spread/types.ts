import type { WorstCorner } from './corner.ts';
import type { EvenGroup } from './evenness.ts';
import type { Output } from './outputs.ts';
import type { Chance } from './statistics.ts';
import type { Cause } from './variables.ts';

/** How far tolerances move the results: Network × Tolerances → Spread. NaN stands for a number that does not exist. */
export interface Spread {
  readonly seed: number;
  /** Draws asked for, and made; fewer when the user stopped it. */
  readonly asked: number;
  readonly draws: number;
  /** Draws of which nothing could be computed (a duct closed, no data for the temperature). They count as not good. */
  readonly outside: number;
  readonly causes: readonly Cause[];
  /** Tolerances that move nothing, with why. */
  readonly idle: readonly string[];
  readonly outputs: readonly SpreadOutput[];
  /** Further outputs for which there was no room; their windows are judged all the same. */
  readonly leftOut: number;
  /** Chance that all windows and limits hold; null without draws, or when a window can't be judged. */
  readonly yield: Chance | null;
  /** 1 for each draw that holds them all. */
  readonly isGood: Uint8Array;
  /** Windows of which nobody can say whether they are kept, and limits left unjudged for want of a pressure or flow. */
  readonly unknownWindows: readonly string[];
  readonly unknownLimits: readonly string[];
  /** Draws in which some reach was not laminar. */
  readonly turbulent: number;
  /** Groups of channels that are to be even, and the draws in which they were not. */
  readonly evenGroups: readonly EvenGroup[];
  readonly corner: WorstCorner | null;
}

export interface SpreadOutput extends Output {
  readonly nominal: number;
  /** Of the sample. */
  readonly mean: number;
  readonly sd: number;
  readonly p2_5: number;
  readonly p97_5: number;
  /** First order. */
  readonly linearSd: number;
  /** Share of the first-order variance of each cause; null where nothing moves the number, or nothing is known of its derivatives. */
  readonly shares: Float64Array | null;
  /** Whether sample and first order agree; null where one of them is missing. */
  readonly isLinear: boolean | null;
  /** Draws that did not keep what is asked of it. */
  readonly failures: number;
  /** Of every draw, in order; NaN where it does not exist. */
  readonly column: Float64Array;
}
