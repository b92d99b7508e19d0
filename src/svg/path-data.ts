/**
 * Path data (SVG 2, 9.3) and lists of points: text → absolute commands, arcs kept as arcs.
 * A browser draws a path up to its first error; here the error is raised, because half a channel is a wrong chip.
 * Cost: linear in the text.
 */
import type { PathCommand } from './types.ts';
import { quoted, ValueError } from './value-error.ts';

/**
 * The commands of a `d` attribute; none for an empty one.
 * @throws ValueError naming the text that cannot be read, or a number that no double holds.
 */
export function parsePath(d: string): readonly PathCommand[] {
  const reader = new NumberReader(d, 'd');
  const commands: PathCommand[] = [];
  const pen: Pen = { x: 0, y: 0, startX: 0, startY: 0, controlX: 0, controlY: 0, last: '' };
  reader.spaces();
  while (!reader.done()) {
    const letter = reader.letter();
    const count = PARAMETERS[letter.toLowerCase()];
    if (count === undefined || (commands.length === 0 && letter.toLowerCase() !== 'm')) {
      throw reader.fault(
        commands.length === 0 ? 'it must begin with M' : 'a command letter is needed',
        letter,
      );
    }
    let current = letter;
    do {
      commands.push(readCommand(current, reader, pen));
      // Further pairs after a move are lines.
      if (current === 'm') current = 'l';
      else if (current === 'M') current = 'L';
    } while (count > 0 && reader.another());
  }
  return commands;
}

/**
 * The points of a polyline or polygon as x, y, x, y …
 * @throws ValueError for rubbish or an odd count of numbers.
 */
export function parsePoints(text: string): readonly number[] {
  const reader = new NumberReader(text, 'points');
  const points: number[] = [];
  reader.spaces();
  if (reader.done()) return points;
  do {
    points.push(reader.number());
  } while (reader.another());
  if (!reader.done()) throw reader.fault('a number is needed', text[reader.at]);
  if (points.length % 2 === 1) {
    throw new ValueError(
      `points ${quoted(text)} are ${points.length} numbers, not pairs; add the missing coordinate`,
    );
  }
  return points;
}

const PARAMETERS: Readonly<Record<string, number>> = {
  m: 2,
  l: 2,
  h: 1,
  v: 1,
  c: 6,
  s: 4,
  q: 4,
  t: 2,
  a: 7,
  z: 0,
};

interface Pen {
  x: number;
  y: number;
  startX: number;
  startY: number;
  /** Last control point, for the smooth curves. */
  controlX: number;
  controlY: number;
  /** Last command in lower case. */
  last: string;
}

function readCommand(letter: string, reader: NumberReader, pen: Pen): PathCommand {
  const kind = letter.toLowerCase();
  const relative = letter === kind;
  const dx = relative ? pen.x : 0;
  const dy = relative ? pen.y : 0;
  const command = readAbsolute(kind, reader, pen, dx, dy);
  if (command.kind === 'close') {
    pen.x = pen.startX;
    pen.y = pen.startY;
  } else {
    if (!Number.isFinite(command.x) || !Number.isFinite(command.y))
      throw reader.fault('the point is too far away', letter);
    pen.x = command.x;
    pen.y = command.y;
    if (command.kind === 'move') {
      pen.startX = command.x;
      pen.startY = command.y;
    }
  }
  pen.last = kind;
  return command;
}

function readAbsolute(kind: string, reader: NumberReader, pen: Pen, dx: number, dy: number): PathCommand {
  switch (kind) {
    case 'm':
      return { kind: 'move', x: dx + reader.next(), y: dy + reader.next() };
    case 'l':
      return { kind: 'line', x: dx + reader.next(), y: dy + reader.next() };
    case 'h':
      return { kind: 'line', x: dx + reader.next(), y: pen.y };
    case 'v':
      return { kind: 'line', x: pen.x, y: dy + reader.next() };
    case 'c':
    case 's': {
      const [x1, y1] = kind === 's' ? reflected(pen, 'cs') : [dx + reader.next(), dy + reader.next()];
      const [x2, y2] = [dx + reader.next(), dy + reader.next()];
      pen.controlX = x2;
      pen.controlY = y2;
      return { kind: 'cubic', x1, y1, x2, y2, x: dx + reader.next(), y: dy + reader.next() };
    }
    case 'q':
    case 't': {
      const [x1, y1] = kind === 't' ? reflected(pen, 'qt') : [dx + reader.next(), dy + reader.next()];
      pen.controlX = x1;
      pen.controlY = y1;
      return { kind: 'quadratic', x1, y1, x: dx + reader.next(), y: dy + reader.next() };
    }
    case 'a':
      return {
        kind: 'arc',
        rx: Math.abs(reader.next()),
        ry: Math.abs(reader.next()),
        rotationDeg: reader.next(),
        large: reader.flag(),
        sweep: reader.flag(),
        x: dx + reader.next(),
        y: dy + reader.next(),
      };
    default:
      return { kind: 'close' };
  }
}

/** First control point of a smooth curve: the last one mirrored in the pen, or the pen after anything but its own kinds. */
function reflected({ x, y, controlX, controlY, last }: Pen, kinds: string): readonly [number, number] {
  return last !== '' && kinds.includes(last) ? [2 * x - controlX, 2 * y - controlY] : [x, y];
}

/** Numbers with SVG's separators: blanks, one comma, or nothing where the next sign or point says enough. */
class NumberReader {
  readonly #text: string;
  /** What the text is, for messages: d, points. */
  readonly #what: string;
  at = 0;
  /** No separator is due before the next number: it follows a command letter or has been passed. */
  #fresh = true;

  constructor(text: string, what: string) {
    this.#text = text;
    this.#what = what;
  }

  done(): boolean {
    return this.at >= this.#text.length;
  }

  letter(): string {
    const letter = this.#text[this.at++];
    this.#fresh = true;
    this.spaces();
    return letter;
  }

  spaces(): void {
    while (isSpace(this.#text.charCodeAt(this.at))) this.at++;
  }

  /** Passes a separator; true when a further number must or can follow. */
  another(): boolean {
    this.spaces();
    const comma = this.#text[this.at] === ',';
    if (comma) {
      this.at++;
      this.spaces();
    }
    this.#fresh = true;
    return comma || startsNumber(this.#text.charCodeAt(this.at));
  }

  /** The next number, after its separator. */
  next(): number {
    if (!this.#fresh) this.another();
    return this.number();
  }

  flag(): boolean {
    if (!this.#fresh) this.another();
    const digit = this.#text[this.at];
    if (digit !== '0' && digit !== '1') throw this.fault('an arc flag is 0 or 1', digit);
    this.at++;
    this.#fresh = false;
    return digit === '1';
  }

  number(): number {
    const text = this.#text;
    const start = this.at;
    let i = start;
    let c = text.charCodeAt(i);
    if (c === PLUS || c === MINUS) c = text.charCodeAt(++i);
    const firstDigit = i;
    while (isDigit(c)) c = text.charCodeAt(++i);
    let digits = i - firstDigit;
    if (c === POINT) {
      const fraction = i + 1;
      c = text.charCodeAt(++i);
      while (isDigit(c)) c = text.charCodeAt(++i);
      digits += i - fraction;
    }
    if (digits === 0) throw this.fault('a number is needed', text[i]);
    if (c === 0x65 || c === 0x45) {
      let j = i + 1;
      const sign = text.charCodeAt(j);
      if (sign === PLUS || sign === MINUS) j++;
      if (!isDigit(text.charCodeAt(j))) throw this.fault('an exponent needs digits', text[j]);
      while (isDigit(text.charCodeAt(j))) j++;
      i = j;
    }
    const value = Number(text.slice(start, i));
    if (!Number.isFinite(value)) throw this.fault('the number is too large', text[start]);
    this.at = i;
    this.#fresh = false;
    return value;
  }

  fault(why: string, found: string | undefined): ValueError {
    const at = Math.min(this.at, this.#text.length);
    const excerpt = quoted(this.#text.slice(Math.max(0, at - 12), at + 20));
    const place = found === undefined ? 'ends too early' : `cannot be read at character ${at + 1}`;
    return new ValueError(`${this.#what} ${place}, near ${excerpt}: ${why}`);
  }
}

const PLUS = 0x2b;
const MINUS = 0x2d;
const POINT = 0x2e;

function isDigit(code: number): boolean {
  return code >= 0x30 && code <= 0x39;
}

function isSpace(code: number): boolean {
  return code === 0x20 || code === 0x0a || code === 0x09 || code === 0x0d || code === 0x0c;
}

function startsNumber(code: number): boolean {
  return isDigit(code) || code === PLUS || code === MINUS || code === POINT;
}
