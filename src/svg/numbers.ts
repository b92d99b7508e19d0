/**
 * A number as SVG and CSS write it, as the source of a pattern without groups. Nothing in it can match in two ways, so
 * that a long run of digits costs linear time.
 */
export const NUMBER = '[+-]?(?:\\d+(?:\\.\\d*)?|\\.\\d+)(?:[eE][+-]?\\d+)?';

const WHOLE_NUMBER = new RegExp(`^${NUMBER}$`);

/** The finite number that the whole text is, or NaN. */
export function toNumber(text: string): number {
  const value = WHOLE_NUMBER.test(text) ? Number(text) : Number.NaN;
  return Number.isFinite(value) ? value : Number.NaN;
}
