import { LIMIT_SLACK } from '../chip/limits.ts';

/** Whether a value falls below a limit by more than rounding could. */
export function isBelow(value: number, limit: number): boolean {
  return value < limit - LIMIT_SLACK * Math.abs(limit);
}

/** Whether a value passes a limit by more than rounding could. */
export function isAbove(value: number, limit: number): boolean {
  return value > limit + LIMIT_SLACK * Math.abs(limit);
}
