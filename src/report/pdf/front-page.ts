import { countText, listText } from '../../findings/words.ts';
import { words } from '../columns.ts';
import { cleanText, joined } from '../plain-text.ts';
import { quantityColumns } from '../quantities.ts';
import { outsideWindows, reachesThatMatter, windowCell } from '../reach-values.ts';
import { casesLeftOut, ofCase } from '../report.ts';
import type { PortRow } from '../result-rows.ts';
import { reachQuantity } from '../result-schema.ts';
import { verdictCounts } from '../verdict-line.ts';
import { BODY_BOLD, type PageContext, SMALL } from './context.ts';
import { drawingText } from './drawing-text.ts';
import { factsHeight, writeFacts } from './facts.ts';
import { writeFoundBox } from './found-box.ts';
import { inputFacts } from './input-facts.ts';
import { portColumns } from './port-columns.ts';
import { writePressureMap } from './pressure-map.ts';
import { reachName } from './reaches.ts';
import { Section } from './section.ts';
import { SIGN_HEIGHT, writeBanner, writeSignatures } from './sign-off.ts';

/**
 * Page 1: verdict with all its counts and what was not checked, the chip coloured by pressure, ports, what went in, and lines to sign.
 * A long ports table runs on over the next pages.
 */
export function writeFrontPage(context: PageContext): void {
  const { paper, one } = context;
  paper.newPage('portrait');
  paper.bookmark(one.name === null ? 'Verdict' : `Case ${cleanText(one.name)}: verdict`);
  const section = new Section(paper);
  writeVerdict(context, section);
  const facts = inputFacts(context);
  const below = factsHeight(paper, facts) + SIGN_HEIGHT + 34;
  writePressureMap(context, section, below);
  // ports get what is left above the inputs, and continue overleaf
  const rowsHere = Math.max(2, Math.floor((paper.bottom - below - paper.y - 40) / 10));
  const ports = one.part.ports;
  const here = ports.length <= rowsHere ? ports : ports.slice(0, rowsHere);
  writePorts(context, section, 'Ports', here, ports.length - here.length);
  if (here.length === ports.length) writeReachesThatMatter(context, section, paper.bottom - below - paper.y);
  paper.y = Math.max(paper.y, paper.bottom - below + 6);
  section.heading(3, 'What went in');
  writeFacts(section, facts);
  // with cases there is one verdict, signed on page 1
  if (context.report.cases.length === 1) writeSignatures(section);
  if (here.length < ports.length) {
    paper.newPage('portrait');
    writePorts(context, section, 'Ports, continued', ports.slice(here.length), 0);
  }
}

function writeVerdict({ paper, report, one }: PageContext, section: Section): void {
  const { sheet } = one.run;
  const { part } = one;
  const title = ofCase(sheet?.title ?? report.result.layout.file, one);
  paper.tagged(section.element, 'H1', () => {
    const style = { size: 14, weight: 'bold' } as const;
    paper.put(paper.clip(title, paper.width, style), paper.left, paper.y, style);
  });
  paper.y += 18;
  const drawn = sheet === null ? null : drawingText(sheet.drawing);
  const by = sheet?.drawing.drawnBy == null ? null : `drawn by ${sheet.drawing.drawnBy}`;
  section.paragraph(joined([drawn, by, `layout ${report.result.layout.file}`], ', '));
  const counts = `${verdictCounts(part.counts)}, ${countText(part.counts.notes, 'note')}`;
  writeBanner(section, part.verdict, counts);
  writeFoundBox(section, [one]);
  const leftOut = casesLeftOut(report);
  if (leftOut.length > 0) {
    section.paragraph(
      `Of this case alone. Not looked at: ${countText(leftOut.length, 'other case')} of the run sheet (${cleanText(listText(leftOut, 8))}).`,
      BODY_BOLD,
    );
  }
  const listed =
    part.not_run.length === 0
      ? 'Every rule was run.'
      : `Not checked: ${part.not_run.map(({ rule, why }) => `${rule} (${why})`).join('; ')}.`;
  const lines = paper.wrap(listed, paper.width, SMALL);
  const shown =
    lines.length <= 3
      ? lines.join(' ')
      : `${lines.slice(0, 2).join(' ')} … All are listed with the findings.`;
  section.paragraph(shown, SMALL);
}

function writePorts(
  context: PageContext,
  section: Section,
  title: string,
  ports: readonly PortRow[],
  more: number,
): void {
  const { paper, one } = context;
  if (ports.length === 0) return;
  section.heading(3, title);
  section.table(ports, portColumns(one.part.ports, one.show), { size: 6.8 });
  if (more > 0) {
    paper.y -= 4;
    section.paragraph(`… and ${countText(more, 'more port')} on the next page.`, SMALL);
  }
}

const REACHES_SHOWN = 14;

/** What the chip is for, in the room that is left: reaches with a window, or else the most sheared. */
function writeReachesThatMatter({ paper, one }: PageContext, section: Section, room: number): void {
  const count = Math.min(REACHES_SHOWN, Math.floor((room - 56) / 9.8));
  if (count < 2) return;
  const { rows, windows, of } = reachesThatMatter(one, count);
  if (rows.length === 0) return;
  const outside = outsideWindows(one);
  const columns = quantityColumns(reachQuantity, rows, one.show);
  section.heading(3, windows ? 'Reaches with a window' : 'The most sheared reaches');
  section.table(
    rows,
    [
      reachName(outside),
      ...columns('flow_m3_s'),
      ...columns({ key: 'joint_flow_share', isOptional: true }),
      ...columns(
        { key: 'wall_shear_floor_mean_pa', head: 'floor shear mean' },
        { key: 'wall_shear_floor_peak_pa', head: 'peak' },
      ),
      ...columns('residence_time_s', 'fastest_time_s'),
      ...(windows ? [words('window', windowCell(one))] : []),
    ],
    { size: 6.8, isBold: (row) => outside(row.channel, row.name) },
  );
  if (of > rows.length) {
    paper.y -= 4;
    section.paragraph(`… and ${of - rows.length} more in the table of reaches.`, SMALL);
  }
}
