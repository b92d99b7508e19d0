/** Kept equal to package.json by a test. */
export const VERSION = '0.1.0';

/**
 * Version of every JSON document that leaves the program: 2 is the contract's format, in which keys may still be added as
 * more is computed, none changes its meaning and none goes. 1 had no joint shares of pressures and reaches.
 */
export const RESULT_VERSION = 2;
