/** The part of each centreline that is kept, by position; and what was left out at each end (2c, 2c + 1), mm. */
export interface Kept {
  readonly from: Float64Array;
  readonly to: Float64Array;
  readonly leftOutMm: Float64Array;
  /** Why the end piece was left out. */
  readonly leftOutBy: readonly LeftOut[];
}

export type LeftOut = 'overshoot' | 'overlap' | 'well-stub' | null;
