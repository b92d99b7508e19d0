import type { AcceptEntry } from '../runsheet/types.ts';

export type Severity = 'blocker' | 'caution' | 'note';

/** One thing the engineer should know. Plain data; the report numbers and draws it. */
export interface Finding {
  /** The rule's name, kebab case: `thin-wall`. */
  readonly rule: string;
  readonly severity: Severity;
  /** What and how much, one sentence with units. */
  readonly message: string;
  /** How to put it right in terms of this drawing. */
  readonly fix: string;
  readonly xMm: number | null;
  readonly yMm: number | null;
  /** Names of channels, ports, reaches or layers concerned, the first the one to look at. */
  readonly names: readonly string[];
  /** In `unit`; null when the rule has no measure. */
  readonly measured: number | null;
  readonly limit: number | null;
  /** SI unit of measured and limit ("m", "Pa", "s", "m³/s", "rad", "" for a ratio), null without a measure. */
  readonly unit: string | null;
  readonly accepted: AcceptEntry | null;
  /** The accept entry that an unmatched-accept is about. */
  readonly unmatched?: AcceptEntry;
  /** What to draw at the place: the distance marked, in mm. Optional. */
  readonly mark?: {
    readonly x1Mm: number;
    readonly y1Mm: number;
    readonly x2Mm: number;
    readonly y2Mm: number;
  };
}

export interface NotRun {
  readonly rule: string;
  readonly why: string;
}

export interface FindingReport {
  /** Blockers first, then cautions, then notes; within one severity by rule and place. */
  readonly findings: readonly Finding[];
  readonly notRun: readonly NotRun[];
  readonly verdict: 'ready' | 'hold';
  readonly counts: {
    readonly blockers: number;
    readonly cautions: number;
    readonly notes: number;
    readonly accepted: number;
    readonly rulesNotRun: number;
  };
}
