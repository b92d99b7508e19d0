import { listText } from '../../findings/words.ts';
import {
  formatBound,
  formatNumber,
  largestMagnitude,
  type Show,
  type Shown,
  type Unit,
} from '../../runsheet/shown.ts';
import { cleanText } from '../plain-text.ts';
import { outsideWindows, reachesThatMatter, windowedChannels, windowTexts } from '../reach-values.ts';
import { casesLeftOut } from '../report.ts';
import type { PortRow, ReachRow } from '../result-rows.ts';
import { plural, verdictCounts } from '../verdict-line.ts';
import { BODY, BODY_BOLD, type PageContext, SMALL } from './context.ts';
import { drawingText } from './drawing-text.ts';
import { factsHeight, writeFacts } from './facts.ts';
import { writeFoundBox } from './found-box.ts';
import { FACTS, inputFacts } from './input-facts.ts';
import type { Element } from './paper.ts';
import { writePressureMap } from './pressure-map.ts';
import { SIGN_HEIGHT, writeBanner, writeSignatures } from './sign-off.ts';
import { type Column, cells, drawTable, type TableRow } from './table.ts';

/**
 * Page 1: verdict with all its counts and what was not checked, the chip coloured by pressure, ports, what went in, and lines to sign.
 * A long ports table runs on over the next pages.
 */
export function writeFrontPage(context: PageContext): void {
  const { paper, one } = context;
  paper.newPage('portrait');
  paper.bookmark(one.name === null ? 'Verdict' : `Case ${cleanText(one.name)}: verdict`);
  const section = paper.section();
  writeVerdict(context, section);
  const facts = inputFacts(context);
  const below = factsHeight(paper, facts, { ...FACTS, width: paper.width }) + SIGN_HEIGHT + 34;
  writePressureMap(context, section, below);
  // ports get what is left above the inputs, and continue overleaf
  const rowsHere = Math.max(2, Math.floor((paper.bottom - below - paper.y - 40) / 10));
  const ports = one.part.ports;
  const here = ports.length <= rowsHere ? ports : ports.slice(0, rowsHere);
  writePorts(context, section, 'Ports', here, ports.length - here.length);
  if (here.length === ports.length) writeReachesThatMatter(context, section, paper.bottom - below - paper.y);
  paper.y = Math.max(paper.y, paper.bottom - below + 6);
  paper.heading(section, 3, 'What went in');
  writeFacts(paper, section, facts, FACTS);
  // with cases there is one verdict, signed on page 1
  if (context.report.cases.length === 1) writeSignatures(paper, section);
  if (here.length < ports.length) {
    paper.newPage('portrait');
    writePorts(context, section, 'Ports, continued', ports.slice(here.length), 0);
  }
}

function writeVerdict({ paper, report, one }: PageContext, section: Element): void {
  const { sheet } = one.run;
  const { part } = one;
  const title = [
    sheet?.title ?? report.result.layout.file,
    one.name === null ? '' : `, case ${one.name}`,
  ].join('');
  paper.tagged(section, 'H1', () => {
    const style = { size: 14, weight: 'bold' } as const;
    paper.put(paper.clip(title, paper.width, style), paper.left, paper.y, style);
  });
  paper.y += 18;
  const drawing = [
    sheet === null ? '' : drawingText(sheet.drawing),
    sheet?.drawing.drawnBy == null ? '' : `drawn by ${sheet.drawing.drawnBy}`,
    `layout ${report.result.layout.file}`,
  ].filter((text) => text !== '');
  paper.paragraph(section, drawing.join(', '), BODY);
  const counts = `${verdictCounts(part.counts)}, ${plural(part.counts.notes, 'note')}`;
  writeBanner(paper, section, part.verdict, counts);
  writeFoundBox(paper, section, [one]);
  const leftOut = casesLeftOut(report);
  if (leftOut.length > 0) {
    paper.paragraph(
      section,
      `Of this case alone. Not looked at: ${plural(leftOut.length, 'other case')} of the run sheet (${cleanText(listText(leftOut, 8))}).`,
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
  paper.paragraph(section, shown, SMALL);
}

function writePorts(
  context: PageContext,
  section: Element,
  title: string,
  ports: readonly PortRow[],
  more: number,
): void {
  const { paper, one } = context;
  if (ports.length === 0) return;
  paper.heading(section, 3, title);
  const { columns, rows } = portsTable(one.part.ports, ports, one.show);
  drawTable(paper, section, columns, rows, { size: 6.8 });
  if (more > 0) {
    paper.y -= 4;
    paper.paragraph(section, `… and ${plural(more, 'more port')} on the next page.`, SMALL);
  }
}

/** Units fit all ports of the chip, so that they do not change over a page. */
export function portsTable(
  all: readonly PortRow[],
  shown: readonly PortRow[],
  show: Show,
): { columns: readonly Column[]; rows: readonly TableRow[] } {
  const largest = (pick: (port: PortRow) => number | null): number =>
    Math.max(0, ...all.map((port) => Math.abs(pick(port) ?? 0)));
  const pressure = show.unit(
    'pressure',
    Math.max(
      largest((port) => port.pressure_pa),
      largest((port) => port.supply_pressure_pa),
    ),
  );
  const flow = show.unit(
    'flow',
    largest((port) => port.flow_m3_s),
  );
  const volume = show.unit(
    'volume',
    largest((port) => port.tubing_volume_m3),
  );
  const time = show.unit(
    'residence_time',
    largest((port) => port.tubing_time_s),
  );
  const withTubing = all.some((port) => port.tubing_volume_m3 !== null);
  const withJoints = all.some(
    ({ joint_flow_share, joint_pressure_share }) =>
      joint_flow_share !== null || joint_pressure_share !== null,
  );
  const number = (value: number | null, si: number): string =>
    value === null ? '–' : formatNumber(value / si);
  const columns: Column[] = [
    { head: 'port', align: 'left', width: 'share' },
    { head: 'condition', align: 'left', width: 'fit' },
    { head: 'in the chip', unit: pressure.text, align: 'right', width: 'fit' },
    { head: 'at the supply', unit: pressure.text, align: 'right', width: 'fit' },
    { head: 'flow into chip', unit: flow.text, align: 'right', width: 'fit' },
    ...(withTubing
      ? ([
          { head: 'tubing holds', unit: volume.text, align: 'right', width: 'fit' },
          { head: 'time in tubing', unit: time.text, align: 'right', width: 'fit' },
        ] as const)
      : []),
    ...(withJoints
      ? ([{ head: 'joints not resolved', unit: 'could move by ±', align: 'right', width: 'fit' }] as const)
      : []),
  ];
  const rows = shown.map((port) =>
    cells(
      port.name,
      port.condition,
      number(port.pressure_pa, pressure.si),
      number(port.supply_pressure_pa, pressure.si),
      number(port.flow_m3_s, flow.si),
      ...(withTubing ? [number(port.tubing_volume_m3, volume.si), number(port.tubing_time_s, time.si)] : []),
      ...(withJoints ? [jointText(port)] : []),
    ),
  );
  return { columns, rows };
}

/** "flow 2.2 %, pressure 3 %": of what is given nothing is said, for it does not move. */
export function jointText({
  joint_flow_share,
  joint_pressure_share,
}: Pick<PortRow, 'joint_flow_share' | 'joint_pressure_share'>): string {
  const parts = [
    joint_flow_share ? `flow ${formatBound(joint_flow_share)}` : '',
    joint_pressure_share ? `pressure ${formatBound(joint_pressure_share)}` : '',
  ].filter((part) => part !== '');
  if (parts.length > 0) return parts.join(', ');
  return joint_flow_share === null && joint_pressure_share === null ? '–' : formatBound(0);
}

const REACHES_SHOWN = 14;

/** What the chip is for, in the room that is left: reaches with a window, or else the most sheared. */
function writeReachesThatMatter({ paper, one }: PageContext, section: Element, room: number): void {
  const count = Math.min(REACHES_SHOWN, Math.floor((room - 56) / 9.8));
  if (count < 2) return;
  const { show } = one;
  const { rows, windows, of } = reachesThatMatter(one, count);
  if (rows.length === 0) return;
  const outside = outsideWindows(one);
  const channels = windowedChannels(one);
  const unit = (shown: Shown, pick: (row: ReachRow) => number | null): Unit =>
    show.unit(shown, largestMagnitude(rows.map(pick)));
  const flow = unit('flow', (row) => row.flow_m3_s);
  const shear = unit('wall_shear', (row) => row.wall_shear_floor_peak_pa);
  const time = unit('residence_time', (row) => row.residence_time_s);
  const number = (value: number | null, { si }: Unit): string =>
    value === null ? '–' : formatNumber(value / si);
  const withJoints = rows.some(({ joint_flow_share }) => joint_flow_share !== null);
  paper.heading(section, 3, windows ? 'Reaches with a window' : 'The most sheared reaches');
  drawTable(
    paper,
    section,
    [
      { head: 'reach', align: 'left', width: 'share' },
      { head: 'flow', unit: flow.text, align: 'right', width: 'fit' },
      ...(withJoints
        ? ([{ head: 'joints move', unit: 'it by ±', align: 'right', width: 'fit' }] as const)
        : []),
      { head: 'floor shear mean', unit: shear.text, align: 'right', width: 'fit' },
      { head: 'peak', unit: shear.text, align: 'right', width: 'fit' },
      { head: 'time mean', unit: time.text, align: 'right', width: 'fit' },
      { head: 'fastest', unit: time.text, align: 'right', width: 'fit' },
      ...(windows ? [{ head: 'window', align: 'left', width: 'fit' } as const] : []),
    ],
    rows.map((row) => {
      const texts = windowTexts(channels.get(row.channel) ?? null, show);
      const isOutside = outside(row.channel, row.name);
      return {
        kind: 'cells',
        ...(isOutside ? { weight: 'bold' } : {}),
        cells: [
          isOutside ? `✗ ${row.name}` : row.name,
          number(row.flow_m3_s, flow),
          ...(withJoints ? [formatBound(row.joint_flow_share)] : []),
          number(row.wall_shear_floor_mean_pa, shear),
          number(row.wall_shear_floor_peak_pa, shear),
          number(row.residence_time_s, time),
          number(row.fastest_time_s, time),
          ...(windows ? [`${isOutside ? 'outside: ' : ''}${texts.join('; ')}`] : []),
        ],
      };
    }),
    { size: 6.8 },
  );
  if (of > rows.length) {
    paper.y -= 4;
    paper.paragraph(section, `… and ${of - rows.length} more in the table of reaches.`, SMALL);
  }
}
