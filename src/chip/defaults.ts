/** What holds when neither the run sheet nor the drawing says otherwise. */

/** How corners and junctions are counted. */
export const DEFAULT_JOINTS: 'centreline' | 'resolved' = 'resolved';

/** 25 °C. */
export const DEFAULT_TEMPERATURE_K = 298.15;

/** Slack of every "on" and "inside": 1 µm. */
export const DEFAULT_JOIN_WITHIN_MM = 1e-3;

export const DEFAULT_PORT_DIAMETER_M: readonly [number, number] = [0.2e-3, 10e-3];

/** Above it, flow in a duct with joints can no longer be counted on to be laminar. */
export const DEFAULT_MAX_REYNOLDS = 1000;

/** The shape that is the chip edge when the run sheet names none. */
export const CHIP_EDGE_NAME = 'chip-edge';

/** The plane of every layer that names none. */
export const CHIP_PLANE = 'chip';

/** Two sizes of one thing agree within this share: the drawing's unit and the sheet's, the edge and `size`. */
export const SIZE_AGREEMENT = 0.005;

/** Widest stroke that counts as a hairline: just over one CSS px, 0.265 mm (common practice, no source). */
export const DEFAULT_HAIRLINE_MM = 0.3;

/** Key of obstacles in the count of what is not read; the finding of that name tells where they are. */
export const OBSTACLE_KIND = 'obstacle in a channel';
