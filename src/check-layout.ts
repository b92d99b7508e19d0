import { type Analysis, analyse } from './analyse.ts';
import { refuse } from './chip/complain.ts';
import { InputError } from './errors.ts';
import { settleAccepts } from './findings/check.ts';
import { layOut } from './layout/layout.ts';
import { buildReport, type Report } from './report/report.ts';
import { didYouMean } from './runsheet/nearest.ts';
import { parseRunSheet } from './runsheet/parse.ts';
import { quote } from './runsheet/quote.ts';
import type { RunSheet } from './runsheet/types.ts';
import { TARGETS_EXAMPLE } from './solve/targets.ts';
import { type Pace, type SpreadOptions, spreadOf, whyNoSpread } from './spread/spread.ts';
import type { Spread } from './spread/types.ts';
import { readSvg } from './svg/read.ts';
import { VERSION } from './version.ts';

export interface SourceFile {
  /** Without folders, as the report prints it. */
  readonly name: string;
  readonly text: string;
  /** As messages name it; the name when left out. */
  readonly shown?: string;
  /** Hexadecimal, of the file's bytes; of the text as UTF-8 when left out. */
  readonly sha256?: string;
}

export interface LayoutFiles {
  /** SVG. */
  readonly layout: SourceFile;
  /** YAML; null: the geometry is checked without one. */
  readonly runSheet: SourceFile | null;
}

export interface CheckLayoutOptions {
  /** Only this case of the run sheet. */
  readonly case?: string;
  /** Find the settings that meet the run sheet's targets first, and check the chip at them. */
  readonly pump?: boolean;
  /** Carry the run sheet's tolerances through to every result. */
  readonly spread?: SpreadOptions & { readonly paceOf?: (caseName: string | null) => Pace };
  /** Told which stage is about to begin; may show it, or throw to stop. */
  readonly onStage?: (stage: string, caseName: string | null) => Promise<void>;
}

/**
 * The whole job on texts: layout and run sheet in, report out; every case of the run sheet, or the one asked for. The report is what
 * all writers take (`writeJson`, `svgPicture`, `writePdf` …).
 *
 * Errors: InputError, whose `where` names file and line, for what can't be read, does not fit together or is not asked properly.
 */
export async function checkLayout(files: LayoutFiles, options: CheckLayoutOptions = {}): Promise<Report> {
  const { layout: drawn, runSheet } = files;
  const sheet = runSheet === null ? null : parseRunSheet(runSheet.text, runSheet.shown ?? runSheet.name);
  const layout = layOut(readSvg(drawn.text, drawn.shown ?? drawn.name), drawn.shown ?? drawn.name);
  const cases = casesOf(sheet, options.case);
  const sheetFile = sheet?.file ?? drawn.name;
  if (options.pump === true) refuseNoTargets(cases, sheetFile);
  if (options.spread !== undefined) for (const one of cases) refuseNoTolerances(one, sheetFile);
  const done: AnalysedCase[] = [];
  for (const one of cases) {
    const analysis = await analyse(
      { layout, sheet: one.sheet, file: drawn.name, ...alikeTo(done), pump: options.pump === true },
      async (stage) => options.onStage?.(stage, one.name),
    );
    done.push({ name: one.name, analysis, ...(await spreadPart(analysis, one, options)) });
  }
  const settled = settleAccepts(done.map(({ analysis }) => analysis.findings));
  return buildReport({
    tool: { name: 'rillcheck', version: VERSION },
    layout: { file: drawn.name, sha256: await sha256Of(drawn) },
    sheet: sheet === null || runSheet === null ? null : { ...sheet, sha256: await sha256Of(runSheet) },
    cases: done.map(({ name, analysis, ...more }, i) => ({
      name,
      ...analysis,
      findings: settled[i],
      ...more,
    })),
  });
}

/** One case of a run sheet; the name is null for a sheet without cases. */
interface SheetCase {
  readonly name: string | null;
  readonly sheet: RunSheet | null;
}

interface AnalysedCase {
  readonly name: string | null;
  readonly analysis: Analysis;
  readonly spread?: Spread;
}

/** The sheet itself when it has no cases, all of them, or the one asked for. */
function casesOf(sheet: RunSheet | null, wanted: string | undefined): readonly SheetCase[] {
  const cases = sheet?.cases ?? [];
  if (wanted !== undefined) {
    const found = cases.find(({ name }) => name === wanted);
    if (found !== undefined) return [found];
    const names = cases.map(({ name }) => name);
    const guess = didYouMean(wanted, names);
    const its = `${guess === null ? 'its' : `${guess} Its`} cases are ${names.join(', ')}`;
    const hint = names.length === 0 ? 'the run sheet has no cases' : its;
    throw new InputError('--case', `there is no case ${quote(wanted)}; ${hint}`);
  }
  return cases.length === 0 ? [{ name: null, sheet }] : cases;
}

/** The network of the first case, offered to the ones that follow. */
function alikeTo([first]: readonly AnalysedCase[]): Pick<Parameters<typeof analyse>[0], 'alike'> {
  return first === undefined ? {} : { alike: first.analysis.network };
}

async function spreadPart(
  analysis: Analysis,
  { name, sheet }: SheetCase,
  { spread: asked }: CheckLayoutOptions,
): Promise<{ readonly spread?: Spread }> {
  const tolerances = sheet?.tolerances ?? null;
  if (asked === undefined || sheet === null || tolerances === null) return {};
  const idle = whyNoSpread(analysis, tolerances);
  if (idle !== null) {
    refuse(
      sheet,
      ['tolerances'],
      `tolerances: nothing in them moves anything on this chip${inCase(name)}${idle.length === 0 ? '' : ` (${idle.slice(0, 3).join('; ')})`}; ${TOLERANCES_EXAMPLE}`,
    );
  }
  const pace = asked.paceOf?.(name);
  try {
    return { spread: await spreadOf(analysis, tolerances, asked, pace) };
  } finally {
    pace?.end?.();
  }
}

function refuseNoTargets(cases: readonly SheetCase[], file: string): void {
  if (cases.some(({ sheet }) => sheet !== null && sheet.targets.length > 0)) return;
  const none = cases.some(({ sheet }) => sheet !== null && sheet.concentrationTargets.length > 0)
    ? 'there are only concentrations, which are not computed yet'
    : 'there are none to find settings for';
  throw new InputError(file, `targets: ${none}; ${TARGETS_EXAMPLE}`);
}

/** How tolerances are written, for messages. */
export const TOLERANCES_EXAMPLE =
  'write for example "tolerances: { depth: 5 %, width: 2 um, temperature: 1 degC }"';

function refuseNoTolerances({ name, sheet }: SheetCase, file: string): void {
  if ((sheet?.tolerances ?? null) !== null) return;
  throw new InputError(file, `tolerances: there are none${inCase(name)}; ${TOLERANCES_EXAMPLE}`);
}

function inCase(name: string | null): string {
  return name === null ? '' : ` in case ${quote(name)}`;
}

async function sha256Of({ text, sha256 }: SourceFile): Promise<string> {
  if (sha256 !== undefined) return sha256;
  const digest = await crypto.subtle.digest('SHA-256', new TextEncoder().encode(text));
  return Array.from(new Uint8Array(digest), (byte) => byte.toString(16).padStart(2, '0')).join('');
}
