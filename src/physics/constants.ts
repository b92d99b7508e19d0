/** Standard acceleration of free fall, m/s² (3rd CGPM, 1901; exact by definition). */
export const GRAVITY_M_S2 = 9.80665;

/** 0 °C in kelvin (exact by definition). */
export const ZERO_CELSIUS_K = 273.15;
