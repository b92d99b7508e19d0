import { cleanText } from '../plain-text.ts';
import { foundCells } from '../pump-rows.ts';
import type { ReportedCase } from '../report.ts';
import { BODY_BOLD, SMALL } from './context.ts';
import type { Element, Paper } from './paper.ts';
import { cells, drawTable } from './table.ts';

/** Settings told in the box; all are on the page of the settings. */
const MOST_ROWS = 6;
const INSET = 5;

/** Says in a box that these numbers are at settings that were found, the run sheet's beside them. Nothing for other commands. */
export function writeFoundBox(paper: Paper, section: Element, cases: readonly ReportedCase[]): void {
  const rows = cases.flatMap((one) =>
    (one.pump?.targets ?? []).map((target) => {
      const { port, given, found } = foundCells(one, target);
      return [
        ...(cases.length > 1 ? [cleanText(one.name ?? '')] : []),
        cleanText(port),
        given,
        found,
      ] as const;
    }),
  );
  if (rows.length === 0) return;
  const top = paper.y + 2;
  const inner = { x: paper.left + INSET, width: paper.width - 2 * INSET };
  paper.y = top + INSET;
  paper.paragraph(section, HEAD, BODY_BOLD, inner);
  drawTable(
    paper,
    section,
    [
      ...(cases.length > 1 ? [{ head: 'case', align: 'left', width: 'share' } as const] : []),
      { head: 'port', align: 'left', width: 'share' },
      { head: 'in the run sheet', align: 'left', width: 'fit' },
      { head: 'found, and used here', align: 'left', width: 'fit' },
    ],
    rows.slice(0, MOST_ROWS).map((row) => cells(...row)),
    { ...inner, size: 7.5 },
  );
  const more = rows.length - MOST_ROWS;
  if (more > 0)
    paper.paragraph(section, `… and ${more} more, on the page of the pump settings.`, SMALL, inner);
  paper.decoration(() => {
    paper.doc
      .rect(paper.left, top, paper.width, paper.y - top)
      .lineWidth(1)
      .strokeColor(EDGE)
      .stroke();
  });
  paper.y += 4;
}

const EDGE = '#8a5a00';
const HEAD =
  'These settings were found, not given: everything in this document is computed at them, and not at the values of the run sheet.';
