/**
 * Text in the order in which it is seen, for a line that runs left to right: the part of the Unicode Bidirectional Algorithm
 * (UAX #9) that names need. A stretch of right-to-left letters, with what stands between them, is turned as a whole; numbers and
 * left-to-right words within keep their own direction, brackets are mirrored. What follows the last such letter is left to right,
 * so that a value beside a name stays beside it. Linear in the text.
 */

const RIGHT_TO_LEFT = String.raw`\p{Script=Hebrew}\p{Script=Arabic}\p{Script=Syriac}\p{Script=Thaana}\p{Script=Nko}`;
const LETTER = new RegExp(`[${RIGHT_TO_LEFT}]`, 'u');
/** Right-to-left letters with their marks; a number; a left-to-right word; any other single character. */
const CHUNK = new RegExp(
  String.raw`[${RIGHT_TO_LEFT}][${RIGHT_TO_LEFT}\p{M}]*|\p{Nd}+(?:[.,:]\p{Nd}+)*|(?:(?![${RIGHT_TO_LEFT}])[\p{L}\p{M}])+|[\s\S]`,
  'gu',
);
/** Each bracket beside the one that mirrors it. */
const BRACKETS = '()[]{}<>«»';

/** Chunks from left to right; a text without right-to-left letters is one. Each holds letters of one direction only. */
export function visualChunks(text: string): readonly string[] {
  if (!LETTER.test(text)) return [text];
  const chunks = text.match(CHUNK) ?? [];
  const visual: string[] = [];
  let leftToRight = '';
  for (let i = 0; i < chunks.length; ) {
    if (!LETTER.test(chunks[i])) {
      leftToRight += chunks[i++];
      continue;
    }
    if (leftToRight !== '') visual.push(leftToRight);
    leftToRight = '';
    const end = stretchEnd(chunks, i);
    for (let k = end - 1; k >= i; k--) visual.push(mirrored(chunks[k]));
    i = end;
  }
  if (leftToRight !== '') visual.push(leftToRight);
  return visual;
}

function mirrored(chunk: string): string {
  const at = BRACKETS.indexOf(chunk);
  return at < 0 ? chunk : BRACKETS[at ^ 1];
}

/** One past the last right-to-left chunk that no left-to-right word parts from the first. */
function stretchEnd(chunks: readonly string[], first: number): number {
  let end = first + 1;
  for (let i = end; i < chunks.length; i++) {
    if (LETTER.test(chunks[i])) end = i + 1;
    else if (/\p{L}/u.test(chunks[i])) break;
  }
  return end;
}
