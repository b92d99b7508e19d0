import picocolors from 'picocolors';
import { formatMm } from '../runsheet/shown.ts';
import { cleanText, clipText, displayWidth, padText, wrapText } from './plain-text.ts';
import { outsideWindows, reachesThatMatter, windowedChannels, windowTexts } from './reach-values.ts';
import type { Report, ReportedCase } from './report.ts';
import type { FindingRow } from './result-rows.ts';
import { casesLine, verdictCounts } from './verdict-line.ts';

export interface TerminalOptions {
  readonly colour: boolean;
  /** Width of the terminal; at most 100 columns are used. */
  readonly columns: number;
  /** Only the verdict, one line per case. */
  readonly quiet: boolean;
}

/**
 * What a person reads at a glance: the verdict with its counts, ports, the channels that matter, findings (blockers first) and the
 * rules not run. Never wider than 100 columns; colour only adds to words. Ends with a line end.
 */
export function terminalSummary(report: Report, options: TerminalOptions): string {
  const paint = picocolors.createColors(options.colour);
  const width = Math.max(40, Math.min(100, options.columns));
  const lines = report.cases.flatMap((one) => {
    const title = [
      cleanText(report.result.layout.file),
      one.name === null ? '' : `, case ${cleanText(one.name)}`,
    ].join('');
    const verdict = verdictLines(one, title, width, paint);
    return options.quiet ? verdict : [...verdict, ...caseLines(one, width, paint)];
  });
  if ('cases' in report.result) lines.push(...wrapText(casesLine(report), width));
  return `${lines.join('\n')}\n`;
}

type Paint = ReturnType<typeof picocolors.createColors>;

function verdictLines({ part }: ReportedCase, title: string, width: number, paint: Paint): string[] {
  const counts = verdictCounts(part.counts);
  const room = width - displayWidth(part.verdict) - displayWidth(counts) - 4;
  const colour = part.verdict === 'ready' ? paint.green : paint.red;
  if (room >= Math.min(12, displayWidth(title))) {
    return [`${clipText(title, room)}  ${colour(paint.bold(part.verdict))}: ${counts}`];
  }
  const [first, ...rest] = wrapText(`${part.verdict}: ${counts}`, width);
  return [clipText(title, width), first.replace(part.verdict, (word) => colour(paint.bold(word))), ...rest];
}

function caseLines(one: ReportedCase, width: number, paint: Paint): string[] {
  const { part } = one;
  return [
    '',
    ...portLines(one, width, paint),
    ...channelLines(one, width, paint),
    ...findingLines(part.findings, width, paint),
    ...notRunLines(one, width, paint),
  ];
}

const PORT_LINES = 24;
const CHANNEL_LINES = 12;
const FINDING_LINES = 20;

function portLines({ part, show }: ReportedCase, width: number, paint: Paint): string[] {
  if (part.ports.length === 0) return [];
  const rows = part.ports
    .slice(0, PORT_LINES)
    .map((port) => [
      cleanText(port.name),
      port.condition,
      show.text('pressure', port.pressure_pa),
      port.tubing_volume_m3 === null ? '' : show.text('pressure', port.supply_pressure_pa),
      show.text('flow', port.flow_m3_s),
      port.tubing_time_s === null ? '' : show.text('residence_time', port.tubing_time_s),
    ]);
  return [
    ...tableLines(
      [
        { head: 'port', side: 'right' },
        { head: 'condition', side: 'right' },
        { head: 'in the chip', side: 'left' },
        { head: 'at the supply', side: 'left' },
        { head: 'flow into chip', side: 'left' },
        { head: 'in tubing', side: 'left' },
      ],
      rows,
      width,
      paint,
    ),
    ...moreLine(part.ports.length - rows.length, 'port'),
    '',
  ];
}

function channelLines(one: ReportedCase, width: number, paint: Paint): string[] {
  const { show } = one;
  const matter = reachesThatMatter(one, CHANNEL_LINES);
  if (matter.rows.length === 0) return [];
  const channels = windowedChannels(one);
  const outside = outsideWindows(one);
  const rows = matter.rows.map((row) => {
    const settings = channels.get(row.channel);
    return [
      cleanText(row.name),
      show.text('flow', row.flow_m3_s),
      show.text('wall_shear', row.wall_shear_floor_mean_pa),
      show.text('wall_shear', row.wall_shear_floor_peak_pa),
      show.text('residence_time', row.residence_time_s),
      settings === undefined
        ? ''
        : `${outside(row.channel, row.name) ? 'outside: ' : ''}${windowTexts(settings, show).join('; ')}`,
    ];
  });
  return [
    ...tableLines(
      [
        { head: matter.windows ? 'reach' : 'most sheared', side: 'right' },
        { head: 'flow', side: 'left' },
        { head: 'floor shear', side: 'left' },
        { head: 'peak', side: 'left' },
        { head: 'residence', side: 'left' },
        { head: matter.windows ? 'window' : '', side: 'right' },
      ],
      rows,
      width,
      paint,
    ),
    ...moreLine(matter.of - rows.length, matter.windows ? 'reach with a window' : 'reach', 'es'),
    '',
  ];
}

function moreLine(left: number, noun: string, ending = 's'): string[] {
  if (left <= 0) return [];
  const [first, ...rest] = noun.split(' ');
  const many = [left === 1 ? first : `${first}${ending}`, ...rest].join(' ');
  return [`… and ${left} more ${many}: see the reports`];
}

function findingLines(findings: readonly FindingRow[], width: number, paint: Paint): string[] {
  if (findings.length === 0) return [];
  const colours = { blocker: paint.red, caution: paint.yellow, note: paint.cyan };
  const digits = String(findings.length).length;
  const lines = findings.slice(0, FINDING_LINES).flatMap((finding, i) => {
    const number = padText(String(i + 1), digits, 'left');
    const indent = ' '.repeat(digits + 1);
    const label = finding.accepted === null ? finding.severity : 'accepted';
    const place =
      finding.x_mm === null || finding.y_mm === null
        ? ''
        : ` (${formatMm(finding.x_mm)}, ${formatMm(finding.y_mm)} mm)`;
    const [first, ...rest] = wrapText(
      `${label} ${finding.rule}: ${cleanText(finding.message)}${place}`,
      width - indent.length,
    );
    const fix =
      finding.accepted === null
        ? cleanText(finding.fix)
        : cleanText(`${finding.accepted.because} (${finding.accepted.by}, ${finding.accepted.on})`);
    return [
      `${number} ${first.replace(label, (word) => (finding.accepted === null ? colours[finding.severity](word) : paint.dim(word)))}`,
      ...[...rest, ...(fix === '' ? [] : wrapText(`→ ${fix}`, width - indent.length))].map(
        (line) => `${indent}${line}`,
      ),
    ];
  });
  return [...lines, ...moreLine(findings.length - FINDING_LINES, 'finding'), ''];
}

function notRunLines({ part }: ReportedCase, width: number, paint: Paint): string[] {
  if (part.not_run.length === 0) return [];
  const text = `not run: ${part.not_run.map(({ rule, why }) => `${rule} (${cleanText(why)})`).join('; ')}`;
  return wrapText(text, width).map((line) => paint.dim(line));
}

interface ColumnHead {
  readonly head: string;
  /** Where the padding goes: numbers are padded on the left. */
  readonly side: 'left' | 'right';
}

/** Aligned columns two spaces apart; a column without any cell is left out; the widest text column gives way to fit. */
function tableLines(
  heads: readonly ColumnHead[],
  cells: readonly (readonly string[])[],
  width: number,
  paint: Paint,
): string[] {
  const used = heads.map((_, i) => i).filter((i) => cells.some((row) => row[i] !== ''));
  const widths = used.map((i) =>
    Math.max(displayWidth(heads[i].head), ...cells.map((row) => displayWidth(row[i]))),
  );
  const total = (): number =>
    widths.reduce((sum, columnWidth) => sum + columnWidth, 0) + 2 * (widths.length - 1);
  for (let over = total() - width; over > 0; over = total() - width) {
    const widest = widths.indexOf(Math.max(...widths));
    widths[widest] = Math.max(
      4,
      widths[widest] - over,
      Math.max(...widths.filter((_, i) => i !== widest)) - 1,
    );
    if (widths.every((columnWidth) => columnWidth <= 4)) break;
  }
  const line = (row: readonly string[]): string =>
    used
      .map((i, k) => padText(clipText(row[i], widths[k]), widths[k], heads[i].side))
      .join('  ')
      .trimEnd();
  return [paint.bold(line(heads.map(({ head }) => head))), ...cells.map(line)];
}
