import { cleanText, displayWidth, wrapText } from './plain-text.ts';
import { rangeText, type SettingCells, settingCells, targetCells } from './pump-rows.ts';
import type { Report, ReportedCase } from './report.ts';
import { type TextColumn, textTable } from './text-table.ts';

/** What the command pump adds to the summary of a check: each target with what is reached, and each port's settings. Ends with a line end. */
export function pumpText(report: Report, columns: number): string {
  const width = Math.max(40, Math.min(100, columns));
  return report.cases
    .filter(({ pump }) => pump !== undefined)
    .map((one) => `${caseLines(one, width).join('\n')}\n\n`)
    .join('');
}

const SETTING_COLUMNS: readonly TextColumn[] = [
  { head: 'set', align: 'left' },
  { head: 'pressure to hold', align: 'right' },
  { head: 'or flow to give', align: 'right' },
  { head: 'in the chip', align: 'right' },
  { head: 'breaks', align: 'left' },
  { head: 'pump limits', align: 'left' },
];

/** The table of settings. Where the limits do not fit into it, its cells say whether they are kept, and lines below what they are. */
function settingLines(settings: readonly SettingCells[], width: number): readonly string[] {
  const table = (limitsOf: (setting: SettingCells) => string, columns: number): readonly string[] =>
    textTable(
      SETTING_COLUMNS,
      settings.map((setting) => {
        const { port, pressure, flow, inChip, breaks } = setting;
        return [cleanText(port), pressure, flow, inChip, breaks, limitsOf(setting)];
      }),
      columns,
    );
  const whole = table(({ kept, limits }) => `${kept}: ${limits}`, Number.POSITIVE_INFINITY);
  if (whole.every((line) => displayWidth(line) <= width)) return whole;
  return [
    ...table(({ kept }) => kept, width),
    ...settings.flatMap(({ port, limits }) =>
      wrapText(cleanText(`pump limits of ${port}: ${limits}`), width),
    ),
  ];
}

function caseLines(one: ReportedCase, width: number): readonly string[] {
  const { name, network, pump, show } = one;
  const targets = pump?.targets ?? [];
  const broken = targets.flatMap((target) => {
    const { port, breaks } = settingCells(one, target);
    return breaks === '' ? [] : [`the setting of ${port} breaks ${breaks}: see the blockers`];
  });
  const ranges = targets.flatMap((target) => rangeText(network, target, show) ?? []);
  return [
    name === null ? 'pump settings' : `pump settings, case ${cleanText(name)}`,
    ...textTable(
      [
        { head: 'target', align: 'left' },
        { head: 'quantity', align: 'left' },
        { head: 'wanted', align: 'right' },
        { head: 'reached', align: 'right' },
        { head: 'by', align: 'left' },
      ],
      targets.map((target) => {
        const { on, quantity, wanted, reached, by } = targetCells(target, show);
        return [cleanText(on), quantity, wanted, reached, cleanText(by)];
      }),
      width,
    ),
    '',
    ...settingLines(
      targets.map((target) => settingCells(one, target)),
      width,
    ),
    ...broken.flatMap((text) => wrapText(cleanText(text), width)),
    ...ranges.flatMap((text) => wrapText(cleanText(text), width)),
  ];
}
