import { readFileSync } from 'node:fs';
import { checkLayout } from '../../src/check-layout.ts';
import type { Report } from '../../src/report/report.ts';

/** A report of a layout given as text, through all stages. */
export async function reportOf(name: string, svg: string, sheet: string | null): Promise<Report> {
  return checkLayout({
    layout: { name: `${name}.svg`, text: svg },
    runSheet: sheet === null ? null : { name: `${name}.run.yaml`, text: sheet },
  });
}

/** A report of one of the demo layouts. */
export function demoReport(name: string): Promise<Report> {
  const text = (file: string): string =>
    readFileSync(new URL(`../../layouts-demo/${file}`, import.meta.url), 'utf8');
  return reportOf(name, text(`${name}.svg`), text(`${name}.run.yaml`));
}

export const DEMOS: readonly string[] = ['culture', 'dilution', 'chamber'];
