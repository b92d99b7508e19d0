import type { Curve } from '../geometry/curve.ts';
import type { Centreline } from '../layout/types.ts';
import type { DuctForm } from '../physics/duct.ts';
import type {
  AcceptEntry,
  ChannelEntry,
  PortCondition,
  ProcessName,
  RunSheet,
  TubingPiece,
} from '../runsheet/types.ts';

/** Where a value came from, printed beside it: the run sheet, the drawing, usual practice of a process, or a default. */
export type Origin = 'run sheet' | 'drawing' | 'typical value, not from your maker' | 'default';

export interface Sourced<T> {
  readonly value: T;
  readonly origin: Origin;
}

export interface Fluid {
  /** "water", "glycerol in water, 30 % by mass", "as given" */
  readonly name: string;
  readonly temperatureK: number;
  readonly viscosityPaS: number;
  readonly densityKgM3: number;
  /** Published source of the values, or "run sheet". */
  readonly source: string;
  /** What it is made of: how it changes with temperature follows from it (`fluid.ts`). */
  readonly mixture: Mixture;
}

/** `massShare` is the glycerol in the mixture, 0…1: it stays in warmer or colder tubing. */
export type Mixture =
  | { readonly kind: 'water' }
  | { readonly kind: 'glycerol'; readonly massShare: number }
  /** Given by its values, which no temperature changes. */
  | { readonly kind: 'custom' };

export interface ChipLayer {
  /** As drawn (or "" for strokes in no layer). */
  readonly name: string;
  /** Index into Chip.planes. */
  readonly plane: number;
  /** NaN when no depth is known: finding missing-depth. */
  readonly depthM: number;
  readonly depthOrigin: Origin;
  readonly profile: 'rectangle' | 'isotropic';
}

/** One drawn stroke with its width and depth. All its centrelines share them. */
export interface Channel {
  /** As shown everywhere: unique (`lane`, `lane-2`, `channel-7`). */
  readonly name: string;
  /** As drawn; null when unnamed. Channels that share it share their settings. */
  readonly drawnName: string | null;
  readonly ordinal: number;
  /** Index into Chip.layers. */
  readonly layer: number;
  readonly plane: number;
  /** As drawn (the mask's), mm; NaN when unsized. */
  readonly drawnWidthMm: number;
  /** Of the rectangular duct that stands for it (isotropic: mask + π·depth/2), mm. NaN when unsized or depth unknown for isotropic. */
  readonly ductWidthMm: number;
  /** Half the width of the strip (isotropic: mask/2 + depth), mm: where the walls stand. */
  readonly stripHalfWidthMm: number;
  /** NaN when unknown. */
  readonly depthMm: number;
  readonly depthOrigin: Origin;
  readonly profile: 'rectangle' | 'isotropic';
  /** Index into Chip.sections; −1 where the width or depth is unknown. */
  readonly section: number;
  readonly linecap: 'butt' | 'round' | 'square';
  /** In mm (drawing coordinates × unit), y down. */
  readonly centrelines: readonly Centreline[];
  readonly disguises: readonly string[];
  /** The drawing says that it is a channel (`data-channel`). */
  readonly dataChannel: boolean;
}

export interface Port {
  /** Unique; unnamed ones are shown as `port-3`. */
  readonly name: string;
  readonly drawnName: string | null;
  readonly ordinal: number;
  readonly xMm: number;
  readonly yMm: number;
  readonly radiusMm: number;
}

export interface ChipEdge {
  readonly name: string;
  /** Outer rings, mm, x0 y0 x1 y1 …, first point repeated at the end. */
  readonly rings: readonly Float64Array[];
  /** The curve that each side of each ring was cut from, mm, null for a straight one; null or left out where all are straight. */
  readonly ringCurves?: readonly (readonly (Curve | null)[] | null)[];
  /** Sides of the smallest rectangle at any angle round it, mm, longer first. */
  readonly sidesMm: readonly [number, number];
}

/** The thinnest wall: what is usual for some processes grows with the depth of the channels beside it. */
export interface LeastWall {
  readonly flatM: number;
  readonly perDepth: number;
  readonly origin: Origin;
}

/** All limits with their origin; null = nobody gave one and no process implies one: not checked, listed as not run. */
export interface Limits {
  readonly minWidthM: Sourced<number> | null;
  readonly maxWidthToDepth: Sourced<number> | null;
  readonly maxDepthToWidth: Sourced<number> | null;
  readonly edgeMarginM: Sourced<number> | null;
  readonly portGapM: Sourced<number> | null;
  readonly portDiameterM: Sourced<readonly [number, number]>;
  readonly portGridM: Sourced<number> | null;
  readonly maxPressurePa: Sourced<number> | null;
  readonly minPressurePa: Sourced<number> | null;
  readonly maxReynolds: Sourced<number>;
  readonly minCornerAngleRad: Sourced<number> | null;
  readonly stiffnessPa: Sourced<number> | null;
}

/**
 * Why a drawn area is taken for the outline of a channel: it is stroked too, a channel end or a port touches it or lies on it,
 * it is a hairline round a port or another such line, there is no channel at all; or it is said to be a channel and has no stroke.
 */
export type OutlineReason = 'stroked' | 'end' | 'port' | 'hairline' | 'no-channels' | 'no-stroke';

/** A drawn area that is the outline of a channel, not its centreline. */
export interface OutlineFault {
  readonly kind: 'filled-outline';
  readonly name: string;
  readonly xMm: number;
  readonly yMm: number;
  readonly reason: OutlineReason;
  /** Names of the ports that touch it or lie on it. */
  readonly ports: readonly string[];
  /** Names of the channels that end on it, and where each does. */
  readonly ends: readonly { readonly channel: string; readonly xMm: number; readonly yMm: number }[];
}

/** A drawn area in or across a channel that is no port: it is not in the model. */
export interface Obstacle {
  readonly name: string;
  readonly ordinal: number;
  /** Index into Chip.channels. */
  readonly channel: number;
  /** All of it lies in the etched area (a pillar); else it lies across a wall. */
  readonly inside: boolean;
  /** mm, first point repeated at the end. */
  readonly rings: readonly Float64Array[];
  /** The circle itself where it is one. */
  readonly circle: { readonly xMm: number; readonly yMm: number; readonly radiusMm: number } | null;
}

/** A fault found while reading or laying out: becomes a finding of findings/. */
export type ReadingFault =
  | { readonly kind: 'unsized-stroke'; readonly name: string; readonly xMm: number; readonly yMm: number }
  | OutlineFault
  | { readonly kind: 'assumed-scale'; readonly reason: string }
  | {
      readonly kind: 'missing-depth';
      readonly channel: string;
      readonly layer: string;
      readonly xMm: number;
      readonly yMm: number;
    }
  | {
      readonly kind: 'disguised-stroke';
      readonly channel: string;
      readonly by: string;
      readonly xMm: number;
      readonly yMm: number;
    };

/**
 * What is made: what the drawing shows, in millimetres, and how deep it is. Plain data, the same for all cases of a run sheet
 * that draw and etch the chip alike; how it is run is a Run.
 */
export interface Chip {
  /** The layout's file name as given, without folders. */
  readonly file: string;
  readonly unitMm: number;
  readonly unitReason: string;
  /** Size of the drawing (viewport) in mm. */
  readonly widthMm: number | null;
  readonly heightMm: number | null;
  readonly planes: readonly string[];
  readonly layers: readonly ChipLayer[];
  /** Channels that have a width; unsized strokes are faults only. */
  readonly channels: readonly Channel[];
  /** Each distinct profile, duct width and depth of the channels once. */
  readonly sections: readonly DuctForm[];
  readonly ports: readonly Port[];
  readonly obstacles: readonly Obstacle[];
  readonly edge: ChipEdge | null;
  readonly sizeMm: readonly [number, number] | null;
  readonly ignored: Readonly<Record<string, number>>;
  /** Lines of what is drawn and not read, for the picture; mm, x0 y0 x1 y1 … */
  readonly unreadLines: readonly Float64Array[];
  readonly faults: readonly ReadingFault[];
  readonly joinWithinMm: number;
  readonly joints: 'resolved' | 'centreline';
  readonly process: ProcessName | null;
  /** null where nobody gave one: not checked. */
  readonly leastWall: LeastWall | null;
}

/** What a port is set to. */
export interface PortRun {
  readonly condition: PortCondition;
  readonly tubing: readonly TubingPiece[];
  readonly expect: 'in' | 'out' | null;
}

/** How a chip is run, and what is asked of it: one case of a run sheet. Plain data. */
export interface Run {
  readonly fluid: Fluid;
  /** In the order of Chip.ports. */
  readonly ports: readonly PortRun[];
  /** What is asked of each channel, in the order of Chip.channels; null where nothing is. */
  readonly channels: readonly (ChannelEntry | null)[];
  readonly limits: Limits;
  readonly accept: readonly AcceptEntry[];
  readonly sheet: RunSheet | null;
}
