import { Bounds } from '../geometry/bounds.ts';
import { formatNumber } from '../runsheet/shown.ts';
import type { Chip } from './types.ts';

/** Programs draw with 96 pixels to the inch (CSS), or with 72 (older vector editors): the larger unit over the smaller. */
const AT_72_OVER_AT_96 = 96 / 72;

/**
 * How large a chip drawn in pixels is under both usual sizes of a pixel, and what `unit:` would then be:
 * "the chip edge is 20.1 by 6.88 mm at 96 pixels per inch (unit: 0.264583 mm), 26.8 by 9.17 mm at 72 (unit: 0.352778 mm)".
 * Of a chip read at 96 pixels per inch.
 */
export function sizesByPixel(chip: Chip): string {
  const { what, sides } = sizeOf(chip);
  const at = (factor: number): string =>
    `${sides.map((side) => formatNumber(side * factor)).join(' by ')} mm at ${factor === 1 ? '96 pixels per inch' : '72'} (unit: ${Number((chip.unitMm * factor).toPrecision(6))} mm)`;
  return `${what} is ${at(1)}, ${at(AT_72_OVER_AT_96)}`;
}

function sizeOf({ edge, widthMm, heightMm, channels, ports }: Chip): {
  readonly what: string;
  readonly sides: readonly [number, number];
} {
  if (edge !== null) return { what: 'the chip edge', sides: edge.sidesMm };
  if (widthMm !== null && heightMm !== null) return { what: 'the drawing', sides: [widthMm, heightMm] };
  const bounds = new Bounds();
  for (const { centrelines, drawnWidthMm } of channels)
    for (const { points } of centrelines) bounds.addLine(points, drawnWidthMm / 2);
  for (const { xMm, yMm, radiusMm } of ports) bounds.add(xMm, yMm, radiusMm);
  const { left, top, right, bottom } = bounds;
  const sides: [number, number] = left > right ? [0, 0] : [right - left, bottom - top];
  return { what: 'all that is drawn', sides };
}
