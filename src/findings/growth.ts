/** Growth below this (mm) over a whole step is none: far above rounding, far below anything drawn. */
const NO_GROWTH_MM = 1e-6;

/**
 * Whether two sides, walked from where they part, only move apart: their distance never falls by more than the slack, and
 * never stands still for longer than a step (mm along the way).
 */
export function onlyGrows(
  samples: readonly { readonly way: number; readonly apart: number }[],
  stepMm: number,
  slackMm: number,
): boolean {
  const sorted = [...samples].sort((p, q) => p.way - q.way || p.apart - q.apart);
  if (sorted.length === 0) return false;
  let { way, apart } = sorted[0];
  for (const sample of sorted) {
    const growth = sample.apart - apart;
    if (growth < -slackMm) return false;
    const steps = (sample.way - way) / stepMm;
    if (steps > 1 && growth <= NO_GROWTH_MM * steps) return false;
    if (growth > NO_GROWTH_MM) ({ way, apart } = sample);
  }
  return true;
}
