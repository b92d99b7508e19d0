import type { Layout } from '../layout/types.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';
import { SIZE_AGREEMENT } from './defaults.ts';
import type { DrawnEdge } from './edge.ts';

export interface Scale {
  readonly unitMm: number;
  readonly reason: string;
  /** Nobody stated the size of a unit, and nothing confirms it. */
  readonly assumed: boolean;
}

/**
 * Millimetres per drawing unit: what the drawing states, else the run sheet's `unit`, else the px rule, which counts as
 * known only when the chip edge then has the sides that `size` says.
 * @throws InputError when `unit` contradicts the drawing by more than 0.5 %
 */
export function resolveScale(layout: Layout, sheet: RunSheet | null, edge: DrawnEdge | null): Scale {
  const given = sheet?.unitMm ?? null;
  if (layout.unitStated) {
    if (sheet !== null && given !== null && Math.abs(given / layout.unitMm - 1) > SIZE_AGREEMENT) {
      refuse(
        sheet,
        ['unit'],
        `unit: one unit of the drawing is ${mm(layout.unitMm)} (${layout.unitReason}), the run sheet says ${mm(given)}; leave unit out, or mend the width of the drawing`,
      );
    }
    return { unitMm: layout.unitMm, reason: layout.unitReason, assumed: false };
  }
  if (given !== null) return { unitMm: given, reason: `run sheet: one unit is ${mm(given)}`, assumed: false };
  const size = sheet?.sizeMm ?? null;
  if (size !== null && edge !== null && agrees(edge.sides, size, layout.unitMm)) {
    return {
      unitMm: layout.unitMm,
      reason: `${layout.unitReason}; the chip edge has the run sheet's size`,
      assumed: false,
    };
  }
  return { unitMm: layout.unitMm, reason: layout.unitReason, assumed: true };
}

/** @param size in either order */
function agrees(sides: readonly [number, number], size: readonly [number, number], unitMm: number): boolean {
  const long = Math.max(...size);
  const short = Math.min(...size);
  const slack = SIZE_AGREEMENT * (1 + 1e-9);
  return (
    Math.abs((sides[0] * unitMm) / long - 1) <= slack && Math.abs((sides[1] * unitMm) / short - 1) <= slack
  );
}

function mm(value: number): string {
  return `${Number(value.toPrecision(6))} mm`;
}
