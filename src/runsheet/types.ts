/** The checked run sheet: SI units throughout (a name says so where not), every key known, defaults not yet filled in. */

export interface Window {
  readonly min: number | null;
  readonly max: number | null;
}

/** Where in the run sheet an entry stands, for messages that the layout makes necessary later. */
export interface Placed {
  readonly line: number;
}

export interface TubingPiece {
  readonly boreM: number;
  readonly lengthM: number;
  /** null: the chip's temperature. */
  readonly temperatureK: number | null;
}

export type PortCondition =
  | { readonly kind: 'pressure'; readonly pressurePa: number }
  | { readonly kind: 'flow'; readonly flowM3s: number }
  | { readonly kind: 'head'; readonly headM: number }
  | { readonly kind: 'open' }
  | { readonly kind: 'sealed' }
  | { readonly kind: 'unset' };

export interface PortEntry extends Placed {
  readonly condition: PortCondition;
  /** From the far end to the chip; empty without tubing. */
  readonly tubing: readonly TubingPiece[];
  readonly expect: 'in' | 'out' | null;
  /** By solute, in its own unit; null when nothing is said. */
  readonly concentration: Readonly<Record<string, number>> | null;
}

export type LayerEntry = Placed &
  (
    | {
        readonly kind: 'etched';
        readonly depthM: number | null;
        readonly profile: 'rectangle' | 'isotropic' | null;
        readonly plane: string | null;
      }
    | { readonly kind: 'ignore' }
  );

export interface ShareWindow extends Window {
  /** Share that must lie inside, of the floor's width (shear) or of the flow (concentration), 0…1; null when not asked. */
  readonly over: number | null;
}

export type ShearWindow = ShareWindow;

export interface ChannelEntry extends Placed {
  readonly wallShear: ShearWindow | null;
  readonly residenceTime: Window | null;
  readonly flow: Window | null;
  readonly walls: 'floor' | 'all';
  /** Share of their mean by which the flows of all channels of this name may differ from it, 0…1; null when not asked. */
  readonly even: number | null;
  /** By solute, in its own unit; `over` is a share of the flow. null when not asked. */
  readonly concentration: Readonly<Record<string, ShareWindow>> | null;
  /** By solute: the least mixing, 0…1; null when not asked. */
  readonly mixing: Readonly<Record<string, number>> | null;
}

export interface Solute {
  /** m²/s */
  readonly diffusionM2s: number;
  /** Printed, not converted. */
  readonly unit: string | null;
}

export interface SwitchEntry extends Placed {
  /** Ports; null: all that feed. */
  readonly from: readonly string[] | null;
  /** Name or pattern of reaches; null: nothing is asked. */
  readonly reach: string | null;
  /** Share of the final change, 0…1. */
  readonly to: number | null;
  readonly withinS: number | null;
}

export type FluidSpec =
  | { readonly kind: 'water' }
  | { readonly kind: 'custom'; readonly viscosityPaS: number; readonly densityKgM3: number }
  | { readonly kind: 'glycerol'; readonly share: number; readonly by: 'mass' | 'volume' };

export type TargetQuantity = 'flow' | 'wall_shear' | 'velocity' | 'residence_time' | 'pressure';

interface AnyTarget extends Placed {
  /** Place in the run sheet's list, from 0. */
  readonly index: number;
  readonly on: 'channel' | 'port' | 'node';
  readonly name: string;
  readonly reach: string | null;
  /** The port whose setting is to be found. */
  readonly by: string;
}

export interface TargetEntry extends AnyTarget {
  readonly quantity: TargetQuantity;
  /** Only for wall_shear; 'mean' by default. */
  readonly at: 'mean' | 'peak';
  /** One value, or a window to be kept. SI. */
  readonly value: number | Window;
}

/** Kept apart from the other targets: what fluids carry is not computed yet. */
export interface ConcentrationTarget extends AnyTarget {
  readonly quantity: 'concentration';
  readonly solute: string;
  /** In the solute's own unit. */
  readonly value: number | Window;
}

export interface PumpLimitEntry extends Placed {
  readonly maxPressurePa: number | null;
  readonly minPressurePa: number | null;
  readonly maxFlowM3s: number | null;
}

export interface Limits {
  readonly minWidthM: number | null;
  readonly minWallM: number | null;
  readonly maxWidthToDepth: number | null;
  readonly maxDepthToWidth: number | null;
  readonly edgeMarginM: number | null;
  readonly portGapM: number | null;
  readonly portDiameterM: readonly [number, number] | null;
  readonly portGridM: number | null;
  readonly maxPressurePa: number | null;
  readonly minPressurePa: number | null;
  readonly maxReynolds: number | null;
  readonly minCornerAngleRad: number | null;
  readonly stiffnessPa: number | null;
}

/** A tolerance: relative (share) or absolute (SI); 2 sigma of a normal, or a uniform hard limit. */
export interface Tolerance {
  readonly kind: 'relative' | 'absolute';
  readonly value: number;
  readonly distribution: 'normal' | 'uniform';
}

export interface Tolerances {
  /** For every layer not named. */
  readonly depth: Tolerance | null;
  readonly depthByLayer: Readonly<Record<string, Tolerance>>;
  /** A part common to all layers, beside what each has of its own. */
  readonly depthCommon: Tolerance | null;
  /** The whole: bias of the mask and own part of each channel together. */
  readonly width: Tolerance | null;
  /** One bias common to the whole mask. */
  readonly widthBias: Tolerance | null;
  /** A part of its own for each channel. */
  readonly widthOwn: Tolerance | null;
  readonly temperature: Tolerance | null;
  readonly viscosity: Tolerance | null;
  readonly pressure: Tolerance | null;
  readonly flow: Tolerance | null;
  readonly pressureByPort: Readonly<Record<string, Tolerance>>;
  readonly flowByPort: Readonly<Record<string, Tolerance>>;
  readonly bore: Tolerance | null;
}

export type ShowUnits = Readonly<
  Partial<Record<'flow' | 'pressure' | 'wall_shear' | 'residence_time' | 'velocity', string>>
>;

export interface AcceptEntry extends Placed {
  readonly rule: string;
  readonly at: string;
  /** In the SI unit of the rule's measure (m, Pa, s, m³/s or a plain ratio); null when the rule has no measure. */
  readonly upTo: number | null;
  /** SI unit of upTo ("m", "Pa", "s", "m³/s", "rad", "" for a ratio): a rule may measure in more than one. Left out: any. */
  readonly upToUnit?: string;
  readonly because: string;
  readonly by: string;
  /** ISO date as written. */
  readonly on: string;
}

export type ProcessName =
  | 'cast elastomer'
  | 'etched glass'
  | 'etched silicon'
  | 'milled thermoplastic'
  | 'moulded thermoplastic';

export interface RunSheet {
  /** As given on the command line, for messages (`culture.run.yaml`). */
  readonly file: string;
  /** The whole text, as printed in the report. */
  readonly text: string;
  readonly title: string | null;
  readonly drawing: {
    readonly number: string | null;
    readonly revision: string | null;
    readonly drawnBy: string | null;
  };
  readonly unitMm: number | null;
  readonly sizeMm: readonly [number, number] | null;
  readonly outline: string | null;
  readonly portsLayer: string | null;
  /** Names or patterns, * matches any run of characters. */
  readonly ignore: readonly string[];
  readonly joinWithinMm: number | null;
  readonly joints: 'resolved' | 'centreline' | 'computed' | null;
  readonly process: ProcessName | null;
  readonly fluid: FluidSpec | null;
  readonly temperatureK: number | null;
  readonly depthM: number | null;
  readonly layers: Readonly<Record<string, LayerEntry>>;
  readonly ports: Readonly<Record<string, PortEntry>>;
  /** By name or pattern, in the order written. */
  readonly channels: Readonly<Record<string, ChannelEntry>>;
  readonly solutes: Readonly<Record<string, Solute>>;
  readonly junctions: 'laminar' | 'mixed' | null;
  readonly switch: SwitchEntry | null;
  /** Names of strokes and filled shapes. */
  readonly fields: readonly string[];
  /** Names of layers. */
  readonly pillars: readonly string[];
  readonly targets: readonly TargetEntry[];
  readonly concentrationTargets: readonly ConcentrationTarget[];
  readonly pumpLimits: Readonly<Record<string, PumpLimitEntry>>;
  readonly limits: Limits;
  readonly tolerances: Tolerances | null;
  /** Each case is the whole sheet with its changes merged in, checked like the sheet itself. Empty without cases. */
  readonly cases: readonly { readonly name: string; readonly sheet: RunSheet }[];
  readonly show: ShowUnits;
  readonly accept: readonly AcceptEntry[];
  /** Names and patterns that the case writes under `ports`; none for the sheet itself. */
  readonly changedPorts: readonly string[];
  /** Line of a key path such as ['ports', 'feed', 'pressure'], 1-based; null when not written. */
  readonly lineOf: (path: readonly (string | number)[]) => number | null;
}
