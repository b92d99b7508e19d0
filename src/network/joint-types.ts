/** Kinds of joints as they are listed in the report, in this order. */
export const JOINT_KINDS = [
  'mitred corner',
  'bend',
  'T of equal ducts',
  'T into a wider main',
  'step in width',
  'cross of equal ducts',
  'corner not computed',
  'bend not computed',
  'T of unequal ducts not computed',
  'T with a step in depth not computed',
  'junction with short arms not computed',
  'junction not computed',
  'step not computed',
  'entry from a well',
] as const;

export type JointKind = (typeof JOINT_KINDS)[number];

/** What all joints of one kind come to. */
export interface JointSummary {
  readonly kind: JointKind;
  /** Whether an end correction was computed for the kind. */
  readonly computed: boolean;
  readonly count: number;
  /** Signed length that they add to their ducts, mm, all together. */
  readonly addedMm: number;
  /** Largest length that one of them could still be off by, mm. */
  readonly boundMm: number;
  /** Where the first of the kind is. */
  readonly xMm: number;
  readonly yMm: number;
}

/** Adds joints up by kind while they are found. */
export class JointTally {
  private readonly byKind = new Map<
    JointKind,
    { -readonly [Key in keyof JointSummary]: JointSummary[Key] }
  >();

  add(kind: JointKind, addedMm: number, boundMm: number, xMm: number, yMm: number): void {
    const known = this.byKind.get(kind);
    if (known === undefined) {
      const computed = !kind.endsWith('not computed') && kind !== 'entry from a well';
      this.byKind.set(kind, { kind, computed, count: 1, addedMm, boundMm, xMm, yMm });
      return;
    }
    known.count++;
    known.addedMm += addedMm;
    known.boundMm = Math.max(known.boundMm, boundMm);
  }

  summaries(): JointSummary[] {
    return JOINT_KINDS.flatMap((kind) => this.byKind.get(kind) ?? []);
  }
}
