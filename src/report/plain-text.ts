/**
 * Names and messages may come from anyone: this makes them one harmless line. Line ends and tabs become a space; control, bidi and
 * other invisible format characters go; half surrogate pairs become the replacement character.
 */
export function cleanText(text: string): string {
  return text
    .replace(/\p{Cs}/gu, '\uFFFD')
    .replace(/[\t\n\v\f\r\u0085\u2028\u2029]+/gu, ' ')
    .replace(/[\p{Cc}\p{Cf}]/gu, '')
    .replace(/\p{Variation_Selector}/gu, '');
}

/** Columns that a text takes in a terminal: 2 for wide East Asian characters and emoji, 0 for combining marks. */
export function displayWidth(text: string): number {
  let width = 0;
  for (const character of text) width += characterWidth(character);
  return width;
}

function characterWidth(character: string): number {
  if (/[\p{Mn}\p{Me}\p{Cf}\p{Cc}]/u.test(character)) return 0;
  return isWide(character.codePointAt(0) ?? 0) ? 2 : 1;
}

/** Ranges of East Asian Width W and F (Unicode TR 11), and emoji. */
const WIDE: readonly (readonly [number, number])[] = [
  [0x1100, 0x115f],
  [0x231a, 0x231b],
  [0x23e9, 0x23f3],
  [0x25fd, 0x25fe],
  [0x2614, 0x2615],
  [0x2648, 0x2653],
  [0x26a1, 0x26a1],
  [0x2705, 0x2705],
  [0x274c, 0x274e],
  [0x2753, 0x2757],
  [0x2b1b, 0x2b1c],
  [0x2b50, 0x2b55],
  [0x2e80, 0x303e],
  [0x3041, 0x33ff],
  [0x3400, 0x4dbf],
  [0x4e00, 0x9fff],
  [0xa000, 0xa4cf],
  [0xa960, 0xa97f],
  [0xac00, 0xd7a3],
  [0xf900, 0xfaff],
  [0xfe30, 0xfe6f],
  [0xff00, 0xff60],
  [0xffe0, 0xffe6],
  [0x16fe0, 0x18aff],
  [0x1b000, 0x1b2ff],
  [0x1f004, 0x1f0cf],
  [0x1f18e, 0x1f19a],
  [0x1f200, 0x1f320],
  [0x1f32d, 0x1f64f],
  [0x1f680, 0x1f6ff],
  [0x1f7e0, 0x1f7eb],
  [0x1f900, 0x1f9ff],
  [0x1fa70, 0x1faff],
  [0x20000, 0x3fffd],
];

function isWide(codePoint: number): boolean {
  if (codePoint < 0x1100) return false;
  return WIDE.some(([first, last]) => codePoint >= first && codePoint <= last);
}

/** Cuts to `width` columns with an ellipsis; shorter texts come back as they are. */
export function clipText(text: string, width: number): string {
  if (displayWidth(text) <= width) return text;
  let clipped = '';
  let used = 0;
  for (const character of text) {
    used += characterWidth(character);
    if (used > width - 1) break;
    clipped += character;
  }
  return `${clipped}…`;
}

export function padText(text: string, width: number, side: 'left' | 'right'): string {
  const space = ' '.repeat(Math.max(0, width - displayWidth(text)));
  return side === 'left' ? space + text : text + space;
}

/** Width of texts in a terminal of so many columns. */
export function textWidth(columns: number): number {
  return Math.max(40, Math.min(100, columns));
}

/** Lines of at most `width` columns, broken at spaces; a longer word is cut into pieces. */
export function wrapText(text: string, width: number): string[] {
  return wrapMeasured(text, width, displayWidth);
}

/** Lines of at most `width` in whatever unit `measure` answers, broken at spaces; a longer word is cut into pieces. */
export function wrapMeasured(text: string, width: number, measure: (text: string) => number): string[] {
  const lines: string[] = [];
  let line = '';
  for (const word of wordsOf(text)) {
    const longer = line === '' ? word : `${line} ${word}`;
    if (measure(longer) <= width) {
      line = longer;
      continue;
    }
    if (line !== '') lines.push(line);
    const pieces = cutWord(word, width, measure);
    line = pieces.pop() ?? '';
    lines.push(...pieces);
  }
  lines.push(line);
  return lines;
}

const UNIT = /^(?:%|°C|(?:[kMmµn]?(?:Pa|bar|m|s|L)|psi|mmHg|min|h|dyn)(?:[²³/·]\S*)?)[.,;:)]*$/;

/** What spaces part, a number and the unit behind it being one word. */
function wordsOf(text: string): readonly string[] {
  const words: string[] = [];
  for (const word of text.split(' ')) {
    const before = words.at(-1);
    if (before !== undefined && /\d$/.test(before) && UNIT.test(word))
      words[words.length - 1] = `${before} ${word}`;
    else words.push(word);
  }
  return words;
}

function cutWord(word: string, width: number, measure: (text: string) => number): string[] {
  if (measure(word) <= width) return [word];
  const pieces: string[] = [];
  let piece = '';
  for (const character of word) {
    if (piece !== '' && measure(piece + character) > width) {
      pieces.push(piece);
      piece = '';
    }
    piece += character;
  }
  pieces.push(piece);
  return pieces;
}
