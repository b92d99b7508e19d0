import PDFDocument from 'pdfkit';
import { cleanText, wrapMeasured } from '../plain-text.ts';
import { type EmbeddedFont, embeddedFont } from './embedded-font.ts';
import type { PaperSize, PdfOptions } from './options.ts';
import { layOutPlainly } from './plain-layout.ts';
import { visualChunks } from './visual-order.ts';

type Weight = 'regular' | 'bold';
export type Element = PDFKit.PDFStructureElement;

export interface TextStyle {
  readonly size: number;
  readonly weight?: Weight;
  readonly colour?: string;
}

/** Portrait sizes in points, 1/72 inch. */
const SIZES: Record<PaperSize, readonly [number, number]> = { a4: [595.28, 841.89], letter: [612, 792] };
export const POINTS_PER_MM = 72 / 25.4;
const MARGIN = 42;
const INK = '#111111';
/** Size at which widths are measured; a font's units are a thousandth or so of it. */
const UNIT_SIZE = 100;
const MOST_KNOWN_WIDTHS = 50_000;

/** A font, and what was asked of it so far: the search through its map and the measuring take their time. */
interface Embedded {
  readonly font: EmbeddedFont['font'];
  /** How each character is shown. */
  readonly shown: Map<string, string>;
  /** Widths of texts at size 1. */
  readonly widths: Map<string, number>;
}

/**
 * Sheets of paper with one embedded font in two weights, written from the top down. Everything drawn is either tagged with its
 * place in the document's structure or marked as decoration, so that a screen reader finds its way. Lengths in points.
 */
export class Paper {
  readonly doc: PDFKit.PDFDocument;
  /** Next free height on the page, from the top. */
  y = MARGIN;
  private readonly size: readonly [number, number];
  private readonly embedded: Readonly<Record<Weight, Embedded>>;
  private readonly root: Element;
  private readonly chunks: Uint8Array[] = [];
  /** Of the page that is written on; none yet. */
  private orientation: 'portrait' | 'landscape' | null = null;

  constructor(
    { fonts, paper, date }: PdfOptions,
    { title, subject, creator }: Readonly<Record<'title' | 'subject' | 'creator', string>>,
  ) {
    this.size = SIZES[paper];
    this.doc = new PDFDocument({
      autoFirstPage: false,
      bufferPages: true,
      pdfVersion: '1.7',
      tagged: true,
      lang: 'en',
      displayTitle: true,
      // an empty name: otherwise a standard font without the needed glyphs is loaded
      font: '',
      info: { Title: title, Subject: subject, Creator: creator, Producer: creator, CreationDate: date },
    });
    this.doc.on('data', (chunk: Uint8Array) => this.chunks.push(chunk));
    // pdfkit's own type wants a Buffer-like source; a Uint8Array is what it reads
    this.doc.registerFont('regular', fonts.regular as PDFKit.Mixins.PDFFontSource);
    this.doc.registerFont('bold', fonts.bold as PDFKit.Mixins.PDFFontSource);
    const embed = (weight: Weight): Embedded => {
      layOutPlainly(this.doc.font(weight));
      return { font: embeddedFont(this.doc).font, shown: new Map(), widths: new Map() };
    };
    this.embedded = { regular: embed('regular'), bold: embed('bold') };
    this.root = this.doc.struct('Document');
    this.doc.addStructure(this.root);
  }

  get left(): number {
    return MARGIN;
  }

  get right(): number {
    return this.doc.page.width - MARGIN;
  }

  get width(): number {
    return this.doc.page.width - 2 * MARGIN;
  }

  get top(): number {
    return MARGIN + 6;
  }

  get bottom(): number {
    return this.doc.page.height - MARGIN - 4;
  }

  newPage(orientation: 'portrait' | 'landscape' = this.orientation ?? 'portrait'): void {
    this.orientation = orientation;
    const [short, long] = this.size;
    this.doc.addPage({
      size: orientation === 'portrait' ? [short, long] : [long, short],
      margins: { left: 0, right: 0, top: 0, bottom: 0 },
    });
    this.y = this.top;
  }

  /** Turns to a new page unless this one is of the kind wanted and at least `height` is left on it. */
  part(orientation: 'portrait' | 'landscape', height: number): void {
    if (this.orientation !== orientation || this.y + height > this.bottom) this.newPage(orientation);
    else if (this.y > this.top) this.y += 10;
  }

  /** Turns to a new page when less than this is left. */
  need(height: number): void {
    if (this.y + height > this.bottom) this.newPage();
  }

  /** A part of the document in the structure tree. */
  section(): Element {
    const section = this.doc.struct('Sect');
    this.root.add(section);
    return section;
  }

  child(parent: Element, type: 'Table' | 'TR'): Element {
    const element = this.doc.struct(type);
    parent.add(element);
    return element;
  }

  /** Draws something that has a place in the structure. */
  tagged(
    parent: Element,
    type: 'H1' | 'H2' | 'H3' | 'P' | 'Figure' | 'TH' | 'TD' | 'Code',
    draw: () => void,
    options: { readonly alt?: string; readonly scope?: 'Row' | 'Column' } = {},
  ): void {
    const content = this.doc.markStructureContent(type);
    draw();
    this.doc.endMarkedContent();
    const element = this.doc.struct(type, options, [content]);
    parent.add(element);
  }

  /** Draws something that a reader who listens can do without. */
  decoration(draw: () => void): void {
    this.doc.markContent('Artifact', { type: 'Layout' });
    draw();
    this.doc.endMarkedContent();
  }

  bookmark(text: string): void {
    this.doc.outline.addItem(this.readable(text, 'regular'));
  }

  /** Lines of readable text below each other. Turns pages between them, and tags what stands on each. */
  lines(parent: Element, type: 'P' | 'TD', lines: readonly string[], x: number, style: TextStyle): void {
    const step = lineHeight(style);
    for (let done = 0; done < lines.length; ) {
      this.need(step);
      const room = Math.max(1, Math.floor((this.bottom - this.y) / step + 1e-9));
      const part = lines.slice(done, done + room);
      this.tagged(parent, type, () => {
        for (const line of part) {
          this.put(line, x, this.y, style);
          this.y += step;
        }
      });
      done += part.length;
    }
  }

  /** One line of readable text with its top left corner at x, y. Not tagged by itself. */
  put(text: string, x: number, y: number, style: TextStyle): void {
    if (text === '') return;
    this.use(style);
    this.doc.fillColor(style.colour ?? INK);
    let at = x;
    const chunks = visualChunks(text);
    for (const chunk of chunks) {
      this.doc.text(chunk, at, y, { lineBreak: false });
      if (chunks.length > 1) at += this.doc.widthOfString(chunk);
    }
  }

  putRight(text: string, right: number, y: number, style: TextStyle): void {
    this.put(text, right - this.widthOf(text, style), y, style);
  }

  putCentred(text: string, x: number, y: number, style: TextStyle): void {
    this.put(text, x - this.widthOf(text, style) / 2, y, style);
  }

  /** Width of readable text. */
  widthOf(text: string, style: TextStyle): number {
    // Tables ask for the same few texts again and again; a width is proportional to its size.
    const { widths } = this.embedded[style.weight ?? 'regular'];
    let width = widths.get(text);
    if (width === undefined) {
      this.use({ ...style, size: UNIT_SIZE });
      width = visualChunks(text).reduce((sum, chunk) => sum + this.doc.widthOfString(chunk), 0) / UNIT_SIZE;
      if (widths.size < MOST_KNOWN_WIDTHS) widths.set(text, width);
    }
    return width * style.size;
  }

  /**
   * Text made harmless (see cleanText), each character that the font lacks replaced by its code: "[U+1F9EA]". Put, clip and wrap
   * of a name start from this.
   */
  readable(text: string, weight: Weight = 'regular'): string {
    let readable = '';
    const { font, shown } = this.embedded[weight];
    for (const character of cleanText(text)) {
      let one = shown.get(character);
      if (one === undefined) {
        one = shownBy(font, character);
        shown.set(character, one);
      }
      readable += one;
    }
    return readable;
  }

  /** Readable text cut to a width with an ellipsis. */
  clip(text: string, width: number, style: TextStyle): string {
    const readable = this.readable(text, style.weight);
    if (this.widthOf(readable, style) <= width) return readable;
    const characters = [...readable];
    let [low, high] = [0, characters.length];
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.widthOf(`${characters.slice(0, middle).join('')}…`, style) <= width) low = middle;
      else high = middle - 1;
    }
    return `${characters.slice(0, low).join('')}…`;
  }

  /** Readable text in lines no wider than given. */
  wrap(text: string, width: number, style: TextStyle): string[] {
    return wrapMeasured(this.readable(text, style.weight), width, (line) => this.widthOf(line, style));
  }

  rule(y: number, from = this.left, to = this.right, colour = '#888888', thickness = 0.4): void {
    this.decoration(() => {
      this.doc.moveTo(from, y).lineTo(to, y).lineWidth(thickness).stroke(colour);
    });
  }

  /** Head and foot lines of every page, then the bytes. */
  async finish(
    head: string,
    foot: (page: number, pages: number) => readonly [string, string],
  ): Promise<Uint8Array> {
    const { doc } = this;
    const style = { size: 6.5, colour: '#444444' } as const;
    const { start, count } = doc.bufferedPageRange();
    for (let i = 0; i < count; i++) {
      doc.switchToPage(start + i);
      const [left, right] = foot(i + 1, count);
      const page = this.readable(right);
      const room = this.width - this.widthOf(page, style) - 12;
      doc.markContent('Artifact', { type: 'Pagination' });
      this.put(this.clip(head, this.width, style), this.left, MARGIN - 14, style);
      this.put(this.clip(left, room, style), this.left, doc.page.height - MARGIN + 8, style);
      this.putRight(page, this.right, doc.page.height - MARGIN + 8, style);
      doc.endMarkedContent();
    }
    await new Promise((resolve, reject) => {
      doc.on('error', reject).on('end', resolve).end();
    });
    return inOne(this.chunks);
  }

  private use({ size, weight = 'regular' }: TextStyle): void {
    this.doc.font(weight).fontSize(size);
  }
}

/** A character, or its code where the font lacks it. */
function shownBy(font: EmbeddedFont['font'], character: string): string {
  const codePoint = character.codePointAt(0) ?? 0;
  if (font.hasGlyphForCodePoint(codePoint)) return character;
  return `[U+${codePoint.toString(16).toUpperCase().padStart(4, '0')}]`;
}

/** Height of a line of text: the font's ascender to descender, and a little. */
export function lineHeight({ size }: TextStyle): number {
  return 1.26 * size;
}

function inOne(chunks: readonly Uint8Array[]): Uint8Array {
  const whole = new Uint8Array(chunks.reduce((sum, { length }) => sum + length, 0));
  let at = 0;
  for (const chunk of chunks) {
    whole.set(chunk, at);
    at += chunk.length;
  }
  return whole;
}
