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

/** The parts that there are, in one text. */
export function joined(parts: readonly (string | null)[], separator: string): string {
  return parts.filter(Boolean).join(separator);
}

/** Columns that a text takes in a terminal: 2 for wide East Asian characters and emoji, 0 for combining marks. */
export function displayWidth(text: string): number {
  let width = 0;
  for (const character of text) width += characterWidth(character);
  return width;
}

function characterWidth(character: string): number {
  if (/[\p{Mn}\p{Me}\p{Cf}\p{Cc}]/u.test(character)) return 0;
  return character >= '\u1100' && WIDE.test(character) ? 2 : 1;
}

/** East Asian Width W and F (Unicode TR 11), and emoji. */
const WIDE = new RegExp(
  [
    String.raw`[\u1100-\u115F\u231A-\u231B\u23E9-\u23F3\u25FD-\u25FE\u2614-\u2615\u2648-\u2653\u26A1\u2705`,
    String.raw`\u274C-\u274E\u2753-\u2757\u2B1B-\u2B1C\u2B50-\u2B55\u2E80-\u303E\u3041-\u33FF`,
    String.raw`\u3400-\u4DBF\u4E00-\u9FFF\uA000-\uA4CF\uA960-\uA97F\uAC00-\uD7A3\uF900-\uFAFF`,
    String.raw`\uFE30-\uFE6F\uFF00-\uFF60\uFFE0-\uFFE6\u{16FE0}-\u{18AFF}\u{1B000}-\u{1B2FF}`,
    String.raw`\u{1F004}-\u{1F0CF}\u{1F18E}-\u{1F19A}\u{1F200}-\u{1F320}\u{1F32D}-\u{1F64F}`,
    String.raw`\u{1F680}-\u{1F6FF}\u{1F7E0}-\u{1F7EB}\u{1F900}-\u{1F9FF}\u{1FA70}-\u{1FAFF}`,
    String.raw`\u{20000}-\u{3FFFD}]`,
  ].join(''),
  'u',
);

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
