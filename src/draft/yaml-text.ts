import { UNUSABLE_KEYS } from '../runsheet/names.ts';

/** Names of a drawing in YAML text. They may come from anyone, and must come out of a reader as they went in, or not go in at all. */

/** YAML reads a key on one line of at most 1024 characters; room is left for escapes. */
const LONGEST = 150;

/** Whether a name can be written as a key: not empty, not too long, no half characters, nothing that a record can't hold. */
export function isDraftable(name: string): boolean {
  return name.trim() !== '' && name.length <= LONGEST && !/\p{Cs}/u.test(name) && !UNUSABLE_KEYS.has(name);
}

/** A key or text: plain where nobody could read it as anything else, else in double quotes with escapes. */
export function keyText(name: string): string {
  if (PLAIN.test(name) && !RESERVED.has(name.toLowerCase())) return name;
  const quoted = JSON.stringify(name);
  // JSON leaves these as they are; YAML may break lines at them, or an editor hide them
  return quoted.replace(
    /[\u007f-\u00a0\u00ad\u200b-\u200f\u2028-\u202f\u2060-\u206f\ufeff]/g,
    (character) => `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`,
  );
}

const PLAIN = /^[A-Za-z_][A-Za-z0-9_-]*$/;
/** Words that some readers of YAML take for something other than text. */
const RESERVED: ReadonlySet<string> = new Set(['true', 'false', 'yes', 'no', 'on', 'off', 'y', 'n', 'null']);

/** A name within a comment: one harmless line. */
export function commentText(name: string): string {
  const clean = name.replace(/[\p{Cc}\p{Cf}\p{Cs}\p{Zl}\p{Zp}]+/gu, ' ').trim();
  return clean.length > 60 ? `${[...clean].slice(0, 60).join('')}…` : clean;
}
