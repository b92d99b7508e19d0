import type { Limits, ProcessName, RunSheet } from '../runsheet/types.ts';
import { DEFAULT_MAX_REYNOLDS, DEFAULT_PORT_DIAMETER_M } from './defaults.ts';
import type { ChipLimits, Sourced } from './types.ts';

/** Rounding never decides against the drawing: every limit, window and ceiling is passed only by more than this share of it. */
export const LIMIT_SLACK = 1e-6;

/**
 * Every limit with where it came from: the run sheet, else what is usual for the process, else none.
 * Only the port diameter and the Reynolds number have a default without a process.
 */
export function resolveLimits(sheet: RunSheet | null): ChipLimits {
  const given: Partial<Limits> = sheet?.limits ?? {};
  const usual: Partial<Usual> = sheet?.process == null ? {} : USUAL[sheet.process];
  const wall = given.minWallM ?? null;
  const usualWall = usual.minWallM;
  return {
    minWidthM: choose(given.minWidthM, usual.minWidthM),
    minWallM: (depthM) => choose(wall, usualWall?.(Number.isFinite(depthM) ? depthM : 0)),
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
  readonly minWallM: (depthM: number) => number;
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
    minWallM: () => 30e-6,
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
    minWallM: (depthM) => 50e-6 + 2 * depthM,
    maxWidthToDepth: null,
    maxDepthToWidth: 0.5,
    edgeMarginM: 1e-3,
    portGapM: 1e-3,
    maxPressurePa: 500e3,
    stiffnessPa: null,
  },
  'etched silicon': {
    minWidthM: 5e-6,
    minWallM: () => 10e-6,
    maxWidthToDepth: null,
    maxDepthToWidth: 15,
    edgeMarginM: 1e-3,
    portGapM: 1e-3,
    maxPressurePa: 500e3,
    stiffnessPa: null,
  },
  'milled thermoplastic': {
    minWidthM: 200e-6,
    minWallM: () => 200e-6,
    maxWidthToDepth: 50,
    maxDepthToWidth: 2.5,
    edgeMarginM: 2e-3,
    portGapM: 2e-3,
    maxPressurePa: 200e3,
    stiffnessPa: null,
  },
  'moulded thermoplastic': {
    minWidthM: 50e-6,
    minWallM: () => 100e-6,
    maxWidthToDepth: 50,
    maxDepthToWidth: 2,
    edgeMarginM: 2e-3,
    portGapM: 2e-3,
    maxPressurePa: 300e3,
    stiffnessPa: null,
  },
};

function choose<T>(given: T | null | undefined, usual: T | null | undefined): Sourced<T> | null {
  if (given !== null && given !== undefined) return { value: given, origin: 'run sheet' };
  if (usual !== null && usual !== undefined) return { value: usual, origin: 'usual practice, no source' };
  return null;
}
