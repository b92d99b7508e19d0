import type { SheetValues } from './schema.ts';
import type { MapNode } from './tree.ts';

/**
 * The checked run sheet and its parts: SI units throughout (a name says so where not), every key known. The types come from the
 * schema that reads them, by way of a value, whose type the compiler infers and so writes out in the published declarations:
 * those name no package, while valibot's own types would need valibot. The module holds types alone and is never loaded.
 */
const values = valuesOf<SheetValues>();

function valuesOf<T>(): Plain<T> {
  throw new TypeError('types.ts holds types alone');
}

/** Written out to the last key. */
type Plain<T> = T extends string | number | boolean | null | undefined
  ? T
  : { readonly [Key in keyof T]: Plain<T[Key]> };

type Values = typeof values;

type Named<T> = Readonly<Record<string, T>>;

/** Where in the run sheet an entry stands, for messages that the layout makes necessary later. */
export interface Placed {
  readonly line: number;
}

export type PortEntry = Values['ports'][string] & Placed;
export type PortCondition = PortEntry['condition'];
/** From the far end to the chip. */
export type TubingPiece = PortEntry['tubing'][number];
export type LayerEntry = Values['layers'][string] & Placed;
export type ChannelEntry = Values['channels'][string] & Placed;
export type Window = NonNullable<ChannelEntry['flow']>;
export type FluidSpec = NonNullable<Values['fluid']>;
export type ProcessName = NonNullable<Values['process']>;
export type PumpLimitEntry = Values['pumpLimits'][string] & Placed;
export type Limits = Values['limits'];
export type Tolerances = NonNullable<Values['tolerances']>;
/** Relative (share) or absolute (SI); 2 sigma of a normal, or a uniform hard limit. */
export type Tolerance = NonNullable<Tolerances['depth']>;
export type ShowUnits = Partial<Values['show']>;
export type AcceptEntry = Values['accept'][number] & Placed;

/** A target with its place in the run sheet's list, from 0. */
type Target = Values['targets'][number] & Placed & { readonly index: number };
export type TargetEntry = Exclude<Target, { readonly quantity: 'concentration' }>;
/** Kept apart from the other targets: what fluids carry is not computed yet. */
type ConcentrationTarget = Extract<Target, { readonly quantity: 'concentration' }>;

export interface RunSheet
  extends Omit<
    Values,
    'layers' | 'ports' | 'channels' | 'switch' | 'targets' | 'pumpLimits' | 'show' | 'accept'
  > {
  /** As given on the command line, for messages (`culture.run.yaml`). */
  readonly file: string;
  /** The whole text, as printed in the report. */
  readonly text: string;
  readonly layers: Named<LayerEntry>;
  readonly ports: Named<PortEntry>;
  /** By name or pattern, in the order written. */
  readonly channels: Named<ChannelEntry>;
  readonly switch: (NonNullable<Values['switch']> & Placed) | null;
  readonly targets: readonly TargetEntry[];
  readonly concentrationTargets: readonly ConcentrationTarget[];
  readonly pumpLimits: Named<PumpLimitEntry>;
  /** Each case is the whole sheet with its changes merged in, checked like the sheet itself. Empty without cases. */
  readonly cases: readonly { readonly name: string; readonly sheet: RunSheet }[];
  readonly show: ShowUnits;
  readonly accept: readonly AcceptEntry[];
  /** Names and patterns that the case writes under `ports`; none for the sheet itself. */
  readonly changedPorts: readonly string[];
  /** As written: `lineAt` finds the line of a key in it. */
  readonly tree: MapNode;
}
