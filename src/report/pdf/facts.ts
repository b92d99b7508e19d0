import { type Element, lineHeight, type Paper } from './paper.ts';

/** A two-column table of names and texts; long texts run over lines. Returns nothing; moves the paper down. */
export function writeFacts(
  paper: Paper,
  parent: Element,
  facts: readonly (readonly [string, string])[],
  options: {
    readonly keyWidth: number;
    readonly size?: number;
    readonly x?: number;
    readonly width?: number;
  },
): void {
  const style = { size: options.size ?? 7 };
  const bold = { ...style, weight: 'bold' } as const;
  const x = options.x ?? paper.left;
  const width = options.width ?? paper.right - x;
  const step = lineHeight(style);
  const table = paper.child(parent, 'Table');
  for (const [key, text] of facts) {
    const lines = paper.wrap(text, width - options.keyWidth, style);
    paper.need(step * Math.min(lines.length, 4));
    const row = paper.child(table, 'TR');
    paper.tagged(row, 'TH', () => paper.put(paper.clip(key, options.keyWidth - 4, bold), x, paper.y, bold), {
      scope: 'Row',
    });
    for (let done = 0; done < lines.length; ) {
      if (done > 0) paper.need(step);
      const room = Math.max(1, Math.floor((paper.bottom - paper.y) / step + 1e-9));
      const part = lines.slice(done, done + room);
      paper.tagged(row, 'TD', () => {
        for (const line of part) {
          paper.put(line, x + options.keyWidth, paper.y, style);
          paper.y += step;
        }
      });
      done += part.length;
    }
    row.end();
    paper.y += 0.8;
  }
  table.end();
}

/** Height that writeFacts will take on one page. */
export function factsHeight(
  paper: Paper,
  facts: readonly (readonly [string, string])[],
  options: { readonly keyWidth: number; readonly size?: number; readonly width: number },
): number {
  const style = { size: options.size ?? 7 };
  return facts.reduce(
    (sum, [, text]) =>
      sum + paper.wrap(text, options.width - options.keyWidth, style).length * lineHeight(style) + 0.8,
    0,
  );
}
