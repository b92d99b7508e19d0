/**
 * A value of the drawing that cannot be read: says what and why, not yet where.
 * Thrown by the small parsers (lengths, paths, transforms); the walk adds the line and the element and throws an InputError.
 */
export class ValueError extends Error {
  override readonly name = 'ValueError';
}

/** Text of the drawing as it may stand in a one-line message: quoted, at most 40 characters, no control or direction marks. */
export function quoted(text: string): string {
  const clean = text
    .slice(0, 200)
    .replace(/[\u0000-\u001f\u007f-\u009f\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff]+/g, ' ')
    .trim();
  return clean.length > 40 ? `"${clean.slice(0, 40)}…"` : `"${clean}"`;
}
