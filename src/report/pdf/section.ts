import type { Column } from '../columns.ts';
import { BODY, SMALL } from './context.ts';
import type { Element, Paper, TextStyle } from './paper.ts';
import { drawTable, type TableOptions } from './table.ts';

/** A part of the document, written from the top down; all of it stands under the part's element in the structure. */
export class Section {
  readonly paper: Paper;
  readonly element: Element;

  constructor(paper: Paper) {
    this.paper = paper;
    this.element = paper.section();
  }

  /** Heading at the left margin, with a bookmark for level 1. */
  heading(level: 1 | 2 | 3, text: string): void {
    const { paper } = this;
    const style = { size: HEADING_SIZES[level], weight: 'bold' } as const;
    paper.need(style.size * 1.3 + 30);
    if (level === 1) paper.bookmark(text);
    paper.tagged(this.element, `H${level}`, () => {
      paper.put(paper.clip(text, paper.width, style), paper.left, paper.y, style);
    });
    paper.y += style.size * 1.3 + 3;
  }

  /** Wrapped text over the page's width, or a column's. Turns pages between lines. */
  paragraph(
    text: string,
    style: TextStyle = BODY,
    at: { readonly x?: number; readonly width?: number } = {},
  ): void {
    const { paper } = this;
    const x = at.x ?? paper.left;
    paper.lines(this.element, 'P', paper.wrap(text, at.width ?? paper.right - x, style), x, style);
    paper.y += 2;
  }

  /** Says of how many more than the ones above nothing stands here, and where they are; nothing when there are none. */
  more(count: number, where: string, at?: { readonly x?: number; readonly width?: number }): void {
    if (count > 0) this.paragraph(`… and ${count} ${where}`, SMALL, at);
  }

  table<Row>(rows: readonly Row[], columns: readonly Column<Row>[], options?: TableOptions<Row>): void {
    drawTable(this.paper, this.element, rows, columns, options);
  }

  figure(alt: string, draw: () => void): void {
    this.paper.tagged(this.element, 'Figure', draw, { alt });
  }
}

const HEADING_SIZES = { 1: 13, 2: 10, 3: 8.5 } as const;

/** A section with its title at the top of a page, or below the last one where `height` is left on a page of this kind. */
export function chapter(
  paper: Paper,
  title: string,
  orientation: 'portrait' | 'landscape',
  height = Number.POSITIVE_INFINITY,
): Section {
  paper.part(orientation, height);
  const section = new Section(paper);
  section.heading(1, title);
  return section;
}
