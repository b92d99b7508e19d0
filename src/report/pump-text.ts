import type { FoundTarget } from '../solve/targets.ts';
import { textOfCases } from './case-text.ts';
import { words } from './columns.ts';
import { cleanText, displayWidth, wrapText } from './plain-text.ts';
import {
  brokenRules,
  limitsText,
  limitTexts,
  portName,
  rangeText,
  settingColumns,
  targetColumns,
} from './pump-rows.ts';
import { ofCase, type Report, type ReportedCase } from './report.ts';
import { textTable } from './text-table.ts';

/** What the command pump adds to the summary of a check: each target with what is reached, and each port's settings. Ends with a line end. */
export function pumpText(report: Report, columns: number): string {
  return textOfCases(report, 'pump', columns, caseLines);
}

/** The table of settings. Where the limits do not fit into it, its cells say whether they are kept, and lines below what they are. */
function settingLines(one: ReportedCase, targets: readonly FoundTarget[], width: number): readonly string[] {
  const table = (limits: (target: FoundTarget) => string, columns: number): readonly string[] =>
    textTable(
      targets,
      [
        ...settingColumns(one, 'in the chip'),
        words('breaks', (target) => brokenRules(one, target)),
        words('pump limits', limits),
      ],
      columns,
    );
  const whole = table((target) => limitsText(one, target), Number.POSITIVE_INFINITY);
  if (whole.every((line) => displayWidth(line) <= width)) return whole;
  return [
    ...table((target) => limitTexts(one, target).kept, width),
    ...targets.flatMap((target) =>
      wrapText(
        cleanText(`pump limits of ${portName(one.network, target)}: ${limitTexts(one, target).limits}`),
        width,
      ),
    ),
  ];
}

function caseLines(one: ReportedCase, width: number): readonly string[] {
  const { network, pump, show } = one;
  const targets = pump?.targets ?? [];
  const broken = targets.flatMap((target) => {
    const rules = brokenRules(one, target);
    return rules === ''
      ? []
      : [`the setting of ${portName(network, target)} breaks ${rules}: see the blockers`];
  });
  const ranges = targets.flatMap((target) => rangeText(network, target, show) ?? []);
  return [
    ofCase('pump settings', one),
    ...textTable(targets, targetColumns(show), width),
    '',
    ...settingLines(one, targets, width),
    ...[...broken, ...ranges].flatMap((text) => wrapText(cleanText(text), width)),
  ];
}
