import picocolors from 'picocolors';
import { countText } from '../findings/words.ts';
import { formatMm } from '../runsheet/shown.ts';
import { figures, words } from './columns.ts';
import { cleanText, clipText, displayWidth, padText, textWidth, wrapText } from './plain-text.ts';
import { valueColumns } from './quantities.ts';
import { reachesThatMatter, windowCell } from './reach-values.ts';
import { ofCase, type Report, type ReportedCase } from './report.ts';
import type { FindingRow } from './result-rows.ts';
import { portQuantity, reachQuantity } from './result-schema.ts';
import { textTable } from './text-table.ts';
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
  const width = textWidth(options.columns);
  const lines = report.cases.flatMap((one) => {
    const verdict = verdictLines(one, ofCase(cleanText(report.result.layout.file), one), width, paint);
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

function portLines({ part: { ports }, show }: ReportedCase, width: number, paint: Paint): string[] {
  if (ports.length === 0) return [];
  const listed = ports.slice(0, PORT_LINES);
  const value = valueColumns(portQuantity, show);
  const supply = value('supply_pressure_pa');
  const time = value('tubing_time_s');
  const table = textTable(
    listed,
    [
      words('port', ({ name }) => name),
      words('condition', ({ condition }) => condition),
      value('pressure_pa'),
      figures(supply.head, (port) => (port.tubing_volume_m3 === null ? '' : supply.text(port))),
      value('flow_m3_s'),
      figures('in tubing', (port) => (port.tubing_time_s === null ? '' : time.text(port))),
    ],
    width,
  );
  return [...headed(table, paint), ...moreLine(ports.length - listed.length, 'port'), ''];
}

function channelLines(one: ReportedCase, width: number, paint: Paint): string[] {
  const { show } = one;
  const { rows, windows, of } = reachesThatMatter(one, CHANNEL_LINES);
  if (rows.length === 0) return [];
  const value = valueColumns(reachQuantity, show);
  const table = textTable(
    rows,
    [
      words(windows ? 'reach' : 'most sheared', ({ name }) => name),
      value('flow_m3_s'),
      value('wall_shear_floor_mean_pa', 'floor shear'),
      value('wall_shear_floor_peak_pa', 'peak'),
      value('residence_time_s', 'residence'),
      words('window', windowCell(one)),
    ],
    width,
  );
  return [
    ...headed(table, paint),
    ...moreLine(
      of - rows.length,
      windows ? 'reach with a window' : 'reach',
      windows ? 'reaches with a window' : 'reaches',
    ),
    '',
  ];
}

function headed([head, ...lines]: readonly string[], paint: Paint): string[] {
  return [paint.bold(head), ...lines];
}

function moreLine(left: number, one: string, many?: string): string[] {
  return left <= 0
    ? []
    : [`… and ${countText(left, `more ${one}`, many && `more ${many}`)}: see the reports`];
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
