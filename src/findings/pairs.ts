/** One text for two centrelines, whichever comes first. */
export function pairKey(a: number, b: number): string {
  return a < b ? `${a} ${b}` : `${b} ${a}`;
}
