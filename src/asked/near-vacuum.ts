/** Gauge pressure at which water at 37 °C boils (its vapour pressure is 6.28 kPa); it gives off its gas well before that. */
export const NEAR_VACUUM_PA = -95e3;
