import type { Limits as GivenLimits, ProcessName, RunSheet } from '../runsheet/types.ts';
import { DEFAULT_MAX_REYNOLDS, DEFAULT_PORT_DIAMETER_M } from './defaults.ts';
import type { Chip, LeastWall, Limits, Sourced } from './types.ts';

/** Rounding never decides against the drawing: every limit, window and ceiling is passed only by more than this share of it. */
export const LIMIT_SLACK = 1e-6;

/** The thinnest wall with where it came from: the run sheet, else what is usual for the process, else null. */
export function resolveLeastWall(sheet: RunSheet | null): LeastWall | null {
  const given = sheet?.limits.minWallM ?? null;
  if (given !== null) return { flatM: given, perDepth: 0, origin: 'run sheet' };
  return sheet?.process == null ? null : { ...USUAL[sheet.process].leastWall, origin: TYPICAL };
}

/** Thinnest wall (m) beside a channel of a depth (m); of an unknown depth what holds at any. */
export function minWallM({ leastWall }: Pick<Chip, 'leastWall'>, depthM: number): Sourced<number> | null {
  if (leastWall === null) return null;
  const { flatM, perDepth, origin } = leastWall;
  return { value: flatM + perDepth * (Number.isFinite(depthM) ? depthM : 0), origin };
}

/** The same in drawing units: mm, of a depth in mm. */
export function minWallMm(chip: Pick<Chip, 'leastWall'>, depthMm: number): Sourced<number> | null {
  const limit = minWallM(chip, depthMm / 1e3);
  return limit === null ? null : { value: limit.value * 1e3, origin: limit.origin };
}

/**
 * Every other limit with where it came from: the run sheet, else what is usual for the process, else none.
 * Only the port diameter and the Reynolds number have a default without a process.
 */
export function resolveLimits(sheet: RunSheet | null): Limits {
  const given: Partial<GivenLimits> = sheet?.limits ?? {};
  const usual: Partial<Usual> = sheet?.process == null ? {} : USUAL[sheet.process];
  return {
    minWidthM: choose(given.minWidthM, usual.minWidthM),
    maxWidthToDepth: choose(given.maxWidthToDepth, usual.maxWidthToDepth),
    maxDepthToWidth: choose(given.maxDepthToWidth, usual.maxDepthToWidth),
    edgeMarginM: choose(given.edgeMarginM, usual.edgeMarginM),
    portGapM: choose(given.portGapM, usual.portGapM),
    portDiameterM: choose(given.portDiameterM, null) ?? { value: DEFAULT_PORT_DIAMETER_M, origin: 'default' },
    portGridM: choose(given.portGridM, null),
    maxPressurePa: choose(given.maxPressurePa, usual.maxPressurePa),
    minPressurePa: choose(given.minPressurePa, null),
    maxReynolds: choose(given.maxReynolds, null) ?? { value: DEFAULT_MAX_REYNOLDS, origin: 'default' },
    minCornerAngleRad: choose(given.minCornerAngleRad, null),
    stiffnessPa: choose(given.stiffnessPa, usual.stiffnessPa),
  };
}

interface Usual {
  readonly minWidthM: number;
  readonly leastWall: Pick<LeastWall, 'flatM' | 'perDepth'>;
  readonly maxWidthToDepth: number | null;
  readonly maxDepthToWidth: number;
  readonly edgeMarginM: number;
  readonly portGapM: number;
  readonly maxPressurePa: number;
  readonly stiffnessPa: number | null;
}

/** Usual practice, no source. */
const USUAL: Readonly<Record<ProcessName, Usual>> = {
  'cast elastomer': {
    minWidthM: 20e-6,
    leastWall: { flatM: 30e-6, perDepth: 0 },
    maxWidthToDepth: 10,
    maxDepthToWidth: 2,
    edgeMarginM: 2e-3,
    portGapM: 2e-3,
    maxPressurePa: 100e3,
    stiffnessPa: 1.5e6,
  },
  'etched glass': {
    minWidthM: 20e-6,
    // An isotropic etch undercuts the mask by its depth on either side.
    leastWall: { flatM: 50e-6, perDepth: 2 },
    maxWidthToDepth: null,
    maxDepthToWidth: 0.5,
    edgeMarginM: 1e-3,
    portGapM: 1e-3,
    maxPressurePa: 500e3,
    stiffnessPa: null,
  },
  'etched silicon': {
    minWidthM: 5e-6,
    leastWall: { flatM: 10e-6, perDepth: 0 },
    maxWidthToDepth: null,
    maxDepthToWidth: 15,
    edgeMarginM: 1e-3,
    portGapM: 1e-3,
    maxPressurePa: 500e3,
    stiffnessPa: null,
  },
  'milled thermoplastic': {
    minWidthM: 200e-6,
    leastWall: { flatM: 200e-6, perDepth: 0 },
    maxWidthToDepth: 50,
    maxDepthToWidth: 2.5,
    edgeMarginM: 2e-3,
    portGapM: 2e-3,
    maxPressurePa: 200e3,
    stiffnessPa: null,
  },
  'moulded thermoplastic': {
    minWidthM: 50e-6,
    leastWall: { flatM: 100e-6, perDepth: 0 },
    maxWidthToDepth: 50,
    maxDepthToWidth: 2,
    edgeMarginM: 2e-3,
    portGapM: 2e-3,
    maxPressurePa: 300e3,
    stiffnessPa: null,
  },
};

const TYPICAL = 'typical value, not from your maker';

/** What the run sheet gives, else what is usual, else null. */
export function choose<T>(given: T | null | undefined, usual: T | null | undefined): Sourced<T> | null {
  if (given != null) return { value: given, origin: 'run sheet' };
  return usual == null ? null : { value: usual, origin: TYPICAL };
}
