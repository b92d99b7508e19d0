const encoder = new TextEncoder();

/** Bytes of a text as UTF-8, for size limits. */
export function utf8Length(text: string): number {
  return encoder.encode(text).length;
}
