/** A number of the result: null for what does not exist (NaN, or a division by no flow), and no −0. */
export function known(value: number): number | null {
  return Number.isFinite(value) ? value + 0 : null;
}
