import type { LabelWish } from './label-placement.ts';
import type { MapLabel, PictureOptions } from './map-types.ts';

export function labelWish(
  kind: MapLabel['kind'],
  text: string,
  anchors: LabelWish['anchors'],
  { labelSizeMm, measure }: PictureOptions,
): LabelWish {
  return { kind, text, widthMm: measure(text, labelSizeMm) + 0.5, sizeMm: labelSizeMm, anchors };
}

/** The first characters of a readable name, with an ellipsis where it is longer. A character's code "[U+1F9EA]" is never cut. */
export function shortName(name: string, readable: (name: string) => string, length = 24): string {
  const text = readable(name);
  if ([...text].length <= length) return text;
  let short = '';
  let used = 0;
  for (const [piece] of text.matchAll(/\[U\+[0-9A-F]{4,6}\]|[\s\S]/gu)) {
    used += [...piece].length;
    // a few letters at least, be one a code
    if (used > length - 1 && [...short].length >= length / 2) break;
    short += piece;
  }
  return `${short}…`;
}
