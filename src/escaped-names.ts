/**
 * Names as vector editors write them in ids: what an id can't hold stands there as `_x` + hex code + `_`, so that `lane 1` is
 * `lane_x20_1` and `lane_1` is `lane_x5F_1`. Read until none is left, so that either form of a name comes to the same
 * (an editor that means `_x20_` itself writes `_x5F_x20_`; that too is read as a space).
 */
export function withoutEscapes(name: string): string {
  if (!name.includes('_x')) return name;
  let text = name;
  for (let before = ''; before !== text; ) {
    before = text;
    text = text.replace(ESCAPE, (whole, hex: string) => characterOf(Number.parseInt(hex, 16)) ?? whole);
  }
  if (text === name) return name;
  const trimmed = text.trim();
  // A name of nothing but escaped spaces stays as it is written: no name may be empty.
  return trimmed === '' ? name : trimmed;
}

const ESCAPE = /_x([0-9A-Fa-f]{2,6})_/g;

/** Null for what is no character of a text: controls, halves of a pair, beyond Unicode. */
function characterOf(code: number): string | null {
  const isControl = code < 0x20 || (code >= 0x7f && code < 0xa0);
  const isHalf = code >= 0xd800 && code < 0xe000;
  return isControl || isHalf || code > 0x10ffff ? null : String.fromCodePoint(code);
}
