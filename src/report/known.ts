/** A number of the result: null for what does not exist (nothing, NaN, or a division by no flow), and no −0. */
export function known(value: number | null | undefined): number | null {
  return value !== null && value !== undefined && Number.isFinite(value) ? value + 0 : null;
}
