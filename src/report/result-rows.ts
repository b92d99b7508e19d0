import type * as v from 'valibot';
import type * as schemas from './result-schema.ts';

/**
 * The types of the result's parts, from the schemas that describe them. They go by way of a value, whose type the compiler
 * infers and so writes out in the published declarations (`flow_m3_s: number | null`): those name no package, while valibot's
 * own types would need valibot. The module holds types alone and is never loaded.
 */
const part = valuesOf<Omit<typeof schemas, 'singleSchema' | 'casesSchema' | 'resultSchema'>>();

export type ToolRow = Readonly<typeof part.toolSchema>;
export type LayoutRow = Readonly<typeof part.layoutSchema>;
export type RunSheetRow = Readonly<typeof part.runSheetSchema>;
export type FluidRow = Readonly<typeof part.fluidSchema>;
export type CountsRow = Readonly<typeof part.countsSchema>;
export type PortRow = Readonly<typeof part.portSchema>;
export type NodeRow = Readonly<typeof part.nodeSchema>;
export type ReachRow = Readonly<typeof part.reachSchema>;
export type SegmentRow = Readonly<typeof part.segmentSchema>;
export type FindingRow = Readonly<typeof part.findingSchema>;
export type NotRunRow = Readonly<typeof part.notRunSchema>;
export type BalanceRow = Readonly<typeof part.balanceSchema>;
export type PumpPart = Readonly<typeof part.pumpSchema>;
export type SpreadPart = Readonly<typeof part.spreadSchema>;

function valuesOf<Schemas>(): {
  readonly [Key in keyof Schemas]: Schemas[Key] extends v.GenericSchema ? v.InferOutput<Schemas[Key]> : never;
} {
  throw new TypeError('result-rows.ts holds types alone');
}
