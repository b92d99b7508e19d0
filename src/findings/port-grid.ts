import { isAbove, isBelow } from '../asked/within.ts';
import type { Port, Sourced } from '../chip/types.ts';
import { Bounds } from '../geometry/bounds.ts';
import { linesAlong } from './closest.ts';
import type { FindingContext } from './context.ts';
import { lengthMeasure, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText, limitText, listText, moveText, placeText } from './words.ts';

/** A centre may be off its grid point by this much. */
const OFF_GRID_MM = 0.05;

/** The first grid point, from two edges of the chip. */
const FIRST_POINT_MM = 3;

/**
 * Hole diameters (mm) by pitch of the interconnect grid that ISO 22916:2022 grew out of: an open guideline of 2017, seen
 * reprinted. The clauses of the standard itself were not seen. Other pitches have no published range.
 */
const HOLE_DIAMETERS_MM: readonly {
  readonly pitch: number;
  readonly least: number;
  readonly most: number;
}[] = [
  { pitch: 1.5, least: 0.4, most: 0.7 },
  { pitch: 3, least: 0.4, most: 2 },
  { pitch: 4.5, least: 0.4, most: 3.5 },
];

/**
 * Ports off the interconnect grid, and holes outside the diameters for its pitch.
 *
 * The grid starts 3 mm from two edges of the chip; of the four corners that one counts which most ports agree with. On a
 * drawing without a chip edge it lies along the drawing's axes, through the port that most others agree with.
 */
export function portGridFaults(context: FindingContext, limit: Sourced<number>): Finding[] {
  const { ports } = context.chip;
  const pitchMm = limit.value * 1e3;
  const grid = bestGrid(context, pitchMm);
  const pitchText = limitText(distanceText(pitchMm), limit);
  const range = HOLE_DIAMETERS_MM.find(({ pitch }) => Math.abs(pitch - pitchMm) < 1e-6);
  return ports.flatMap((port) => {
    const { name, xMm, yMm } = port;
    const off = grid === null ? NOT_OFF : offset(grid, port, pitchMm);
    const offMm = Math.hypot(off.x, off.y);
    const diameterMm = 2 * port.radiusMm;
    const faults: string[] = [];
    const fixes: string[] = [];
    const isOff = isAbove(offMm, OFF_GRID_MM);
    if (isOff) {
      faults.push(`its centre is ${distanceText(offMm)} off the ${pitchText} grid`);
      fixes.push(`move ${name} ${moveText(offMm)} to ${placeText(xMm - off.x, yMm - off.y)}`);
    }
    const fitting = range === undefined ? diameterMm : diameterMm < range.least ? range.least : range.most;
    if (range !== undefined && (isBelow(diameterMm, range.least) || isAbove(diameterMm, range.most))) {
      faults.push(
        `its hole is ${distanceText(diameterMm)} wide, and at this pitch ${distanceText(range.least)} to ${distanceText(range.most)} is usual`,
      );
      fixes.push(`make its hole ${distanceText(fitting)} wide`);
    }
    if (faults.length === 0) return [];
    return [
      toFinding('port-grid', 'caution', {
        message: `${name} does not fit the port grid: ${listText(faults)}`,
        fix: listText(fixes),
        at: port,
        names: [name],
        measure: isOff ? lengthMeasure(offMm, OFF_GRID_MM) : lengthMeasure(diameterMm, fitting),
      }),
    ];
  });
}

const NOT_OFF = { x: 0, y: 0 };

interface Grid {
  /** A point of the grid, and unit vectors of its rows and columns. */
  readonly x: number;
  readonly y: number;
  readonly ux: number;
  readonly uy: number;
}

/** At most this many ports are tried as the one that the grid goes through. */
const MOST_TRIED = 64;

function bestGrid({ chip }: FindingContext, pitchMm: number): Grid | null {
  const { ports, edge } = chip;
  if (ports.length === 0) return null;
  const grids =
    edge === null
      ? ports.slice(0, MOST_TRIED).map(({ xMm, yMm }): Grid => ({ x: xMm, y: yMm, ux: 1, uy: 0 }))
      : cornerGrids(edge.rings);
  let best: Grid | null = null;
  let most = -1;
  for (const grid of grids) {
    const agreeing = ports.filter((port) => {
      const { x, y } = offset(grid, port, pitchMm);
      return !isAbove(Math.hypot(x, y), OFF_GRID_MM);
    }).length;
    if (agreeing > most) {
      most = agreeing;
      best = grid;
    }
  }
  return best;
}

/** How far a port's centre is from the nearest grid point, in the drawing's axes. */
function offset(grid: Grid, port: Port, pitchMm: number): { readonly x: number; readonly y: number } {
  const dx = port.xMm - grid.x;
  const dy = port.yMm - grid.y;
  const along = dx * grid.ux + dy * grid.uy;
  const across = dy * grid.ux - dx * grid.uy;
  const a = along - Math.round(along / pitchMm) * pitchMm;
  const b = across - Math.round(across / pitchMm) * pitchMm;
  return { x: a * grid.ux - b * grid.uy, y: a * grid.uy + b * grid.ux };
}

/** Grids from the four corners of the smallest rectangle along the longest straight side of the chip edge. */
function cornerGrids(rings: readonly Float64Array[]): Grid[] {
  let longest = 0;
  let ux = 1;
  let uy = 0;
  for (const [ax, ay, bx, by] of rings.flatMap(linesAlong)) {
    const length = Math.hypot(bx - ax, by - ay);
    if (length <= longest * (1 + 1e-9)) continue;
    longest = length;
    ux = (bx - ax) / length;
    uy = (by - ay) / length;
  }
  const bounds = new Bounds();
  for (const ring of rings) {
    for (let k = 0; k + 1 < ring.length; k += 2)
      bounds.add(ring[k] * ux + ring[k + 1] * uy, ring[k + 1] * ux - ring[k] * uy);
  }
  const { left, right, top: low, bottom: high } = bounds;
  const corners = [
    [left + FIRST_POINT_MM, low + FIRST_POINT_MM],
    [right - FIRST_POINT_MM, low + FIRST_POINT_MM],
    [left + FIRST_POINT_MM, high - FIRST_POINT_MM],
    [right - FIRST_POINT_MM, high - FIRST_POINT_MM],
  ];
  return corners.map(([along, across]) => ({
    x: along * ux - across * uy,
    y: along * uy + across * ux,
    ux,
    uy,
  }));
}
