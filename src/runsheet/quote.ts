/**
 * User text as one short quoted piece of a one-line message: control, line-separator and
 * direction-changing characters are escaped, and what is longer than 60 characters is cut.
 */
export function quote(text: string): string {
  const shown = text.length > LONGEST ? `${text.slice(0, LONGEST)}…` : text;
  return `"${shown.replace(UNPRINTABLE, escaped)}"`;
}

const LONGEST = 60;
const UNPRINTABLE = /[\u0000-\u001f\u007f-\u009f\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff\ud800-\udfff]/g;

function escaped(character: string): string {
  return `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`;
}

/** The end of a message: what would have been right. */
export function hint(example: string): string {
  return `write for example ${/^[{[]/.test(example) ? example : `"${example}"`}`;
}
