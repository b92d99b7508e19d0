/**
 * Which characters a TrueType font has a glyph for, read from its `cmap` table (OpenType 1.9, formats 4 and 12): a second opinion
 * beside the library that the PDF writer asks. Throws a RangeError when the bytes hold no Unicode cmap.
 */
export function glyphCoverage(font: Uint8Array): (codePoint: number) => boolean {
  const view = new DataView(font.buffer, font.byteOffset, font.byteLength);
  const cmap = tableOffset(view, 'cmap');
  const subtable = cmap === null ? null : unicodeSubtable(view, cmap);
  if (subtable === null) throw new RangeError('the font has no Unicode character map');
  const ranges = view.getUint16(subtable) === 12 ? format12(view, subtable) : format4(view, subtable);
  return (codePoint) => contains(ranges, codePoint);
}

function tableOffset(view: DataView, wanted: string): number | null {
  const tables = view.getUint16(4);
  for (let i = 0; i < tables; i++) {
    const record = 12 + 16 * i;
    const tag = String.fromCharCode(...[0, 1, 2, 3].map((k) => view.getUint8(record + k)));
    if (tag === wanted) return view.getUint32(record + 8);
  }
  return null;
}

/** The subtable of format 12 where there is one, else format 4. */
function unicodeSubtable(view: DataView, cmap: number): number | null {
  const count = view.getUint16(cmap + 2);
  let best: number | null = null;
  for (let i = 0; i < count; i++) {
    const record = cmap + 4 + 8 * i;
    const platform = view.getUint16(record);
    const offset = cmap + view.getUint32(record + 4);
    const format = view.getUint16(offset);
    if (platform !== 0 && platform !== 3) continue;
    if (format === 12) return offset;
    if (format === 4) best = offset;
  }
  return best;
}

/** Sorted, closed ranges of code points: first0 last0 first1 last1 … */
type Ranges = readonly number[];

function format12(view: DataView, offset: number): Ranges {
  const groups = view.getUint32(offset + 12);
  return Array.from({ length: groups }, (_, i) => offset + 16 + 12 * i).flatMap((group) => [
    view.getUint32(group),
    view.getUint32(group + 4),
  ]);
}

function format4(view: DataView, offset: number): Ranges {
  const segments = view.getUint16(offset + 6) / 2;
  const ends = offset + 14;
  const starts = ends + 2 * segments + 2;
  const deltas = starts + 2 * segments;
  const glyphs = deltas + 2 * segments;
  const ranges: number[] = [];
  for (let i = 0; i < segments; i++) {
    const [first, last] = [view.getUint16(starts + 2 * i), view.getUint16(ends + 2 * i)];
    const rangeOffset = view.getUint16(glyphs + 2 * i);
    for (let code = first; code <= last && code < 0xffff; code++) {
      const listed =
        rangeOffset === 0 ? code : view.getUint16(glyphs + 2 * i + rangeOffset + 2 * (code - first));
      const glyph =
        rangeOffset !== 0 && listed === 0 ? 0 : (listed + view.getUint16(deltas + 2 * i)) & 0xffff;
      if (glyph !== 0) addCode(ranges, code);
    }
  }
  return ranges;
}

function addCode(ranges: number[], code: number): void {
  if (ranges.at(-1) === code - 1) ranges[ranges.length - 1] = code;
  else ranges.push(code, code);
}

function contains(ranges: Ranges, codePoint: number): boolean {
  let low = 0;
  let high = ranges.length / 2 - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    if (codePoint < ranges[2 * middle]) high = middle - 1;
    else if (codePoint > ranges[2 * middle + 1]) low = middle + 1;
    else return true;
  }
  return false;
}
