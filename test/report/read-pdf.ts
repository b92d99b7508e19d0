import { getDocument, OPS } from 'pdfjs-dist/legacy/build/pdf.mjs';

/** One run of text as a PDF reader reports it; points, y up from the lower left corner, x and y at the start of its baseline. */
export interface PdfText {
  readonly text: string;
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly size: number;
}

export interface PdfPage {
  readonly width: number;
  readonly height: number;
  readonly texts: readonly PdfText[];
}

export interface ReadPdf {
  readonly pages: readonly PdfPage[];
  readonly title: string;
  readonly language: string | null;
  readonly tagged: boolean;
  readonly bookmarks: readonly string[];
  /** Roles in the structure tree, with how many of each. */
  readonly roles: ReadonlyMap<string, number>;
  /** Names of all fonts that any page uses. */
  readonly fonts: ReadonlySet<string>;
}

/** Reads a PDF back with an independent reader. */
export async function readPdf(bytes: Uint8Array): Promise<ReadPdf> {
  const task = getDocument({ data: bytes.slice(), useSystemFonts: false, verbosity: 0 });
  const document = await task.promise;
  const pages: PdfPage[] = [];
  const roles = new Map<string, number>();
  const fonts = new Set<string>();
  for (let number = 1; number <= document.numPages; number++) {
    const page = await document.getPage(number);
    const { width, height } = page.getViewport({ scale: 1 });
    const content = await page.getTextContent({ disableNormalization: true });
    const operators = await page.getOperatorList();
    operators.fnArray.forEach((operator, i) => {
      if (operator === OPS.setFont) fonts.add(page.commonObjs.get(operators.argsArray[i][0]).name);
    });
    const texts = content.items.flatMap((item): PdfText[] =>
      'str' in item && item.str.trim() !== ''
        ? [
            {
              text: item.str,
              x: item.transform[4],
              y: item.transform[5],
              width: item.width,
              size: item.transform[3],
            },
          ]
        : [],
    );
    pages.push({ width, height, texts });
    countRoles(await page.getStructTree(), roles);
  }
  const { info } = await document.getMetadata();
  const outline = await document.getOutline();
  const mark = await document.getMarkInfo();
  const read = {
    pages,
    // the reader types document information as a plain object
    title: (info as { Title?: string }).Title ?? '',
    language: (info as { Language?: string }).Language ?? null,
    tagged: mark?.Marked === true,
    bookmarks: (outline ?? []).map(({ title }) => title),
    roles,
    fonts,
  };
  await task.destroy();
  return read;
}

function countRoles(node: unknown, roles: Map<string, number>): void {
  if (typeof node !== 'object' || node === null) return;
  if ('role' in node && typeof node.role === 'string') roles.set(node.role, (roles.get(node.role) ?? 0) + 1);
  if ('children' in node && Array.isArray(node.children))
    for (const child of node.children) countRoles(child, roles);
}

/** The box that the letters of a text fill: from below the baseline to the height of capitals. */
export function textBox({ x, y, width, size }: PdfText): {
  left: number;
  right: number;
  bottom: number;
  top: number;
} {
  return { left: x, right: x + width, bottom: y - 0.2 * size, top: y + 0.73 * size };
}

/** Texts that lie over each other by more than half a point both ways, as readable pairs. */
export function overlaps({ texts }: PdfPage): string[] {
  const boxes = texts.map((text) => ({ text, ...textBox(text) })).sort((a, b) => a.left - b.left);
  const found: string[] = [];
  boxes.forEach((one, i) => {
    for (let k = i + 1; k < boxes.length && boxes[k].left < one.right - 0.5; k++) {
      const other = boxes[k];
      if (Math.min(one.top, other.top) - Math.max(one.bottom, other.bottom) > 0.5)
        found.push(`"${one.text.text}" and "${other.text.text}"`);
    }
  });
  return found;
}

/** Texts that reach over the rim of the page. */
export function outside({ texts, width, height }: PdfPage): string[] {
  return texts
    .filter((text) => {
      const { left, right, bottom, top } = textBox(text);
      return left < 0 || right > width || bottom < 0 || top > height;
    })
    .map(({ text }) => text);
}
