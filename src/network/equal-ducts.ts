import type { Channel } from '../chip/types.ts';

/** Widths and depths that differ by less than this share are equal, everywhere: drawings and units are rounded. */
const EQUAL = 1e-6;

/** Whether two widths or two depths (any one unit) are equal. */
export function isEqualSize(a: number, b: number): boolean {
  return Math.abs(a - b) <= EQUAL * Math.max(Math.abs(a), Math.abs(b));
}

/** Whether two channels are ducts of one width and depth; two depths that are not known count as equal. */
export function isEqualDuct(one: Channel, two: Channel): boolean {
  return (
    isEqualSize(one.ductWidthMm, two.ductWidthMm) &&
    (isEqualSize(one.depthMm, two.depthMm) || (Number.isNaN(one.depthMm) && Number.isNaN(two.depthMm)))
  );
}
