import { readFileSync } from 'node:fs';
import { analyse } from '../../src/analyse.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildReport, type Report } from '../../src/report/report.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { readSvg } from '../../src/svg/read.ts';

/** A report of a layout given as text, through all stages; of the run sheet itself, whatever its cases. */
export async function reportOf(name: string, svg: string, text: string | null): Promise<Report> {
  const file = `${name}.svg`;
  const sheet = text === null ? null : parseRunSheet(text, `${name}.run.yaml`);
  const analysis = await analyse({ layout: layOut(readSvg(svg, file), file), sheet, file });
  return buildReport({
    tool: { name: 'rillcheck', version: '0.1.0' },
    layout: { file, sha256: 'a'.repeat(64) },
    sheet: sheet === null ? null : { ...sheet, sha256: 'b'.repeat(64) },
    cases: [{ name: null, ...analysis }],
  });
}

/** A report of one of the demo layouts. */
export function demoReport(name: string): Promise<Report> {
  const text = (file: string): string =>
    readFileSync(new URL(`../../layouts-demo/${file}`, import.meta.url), 'utf8');
  return reportOf(name, text(`${name}.svg`), text(`${name}.run.yaml`));
}

export const DEMOS: readonly string[] = ['culture', 'dilution', 'chamber'];
