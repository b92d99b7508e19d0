import { hasWindow } from '../../asked/windows.ts';
import { reachName } from '../../network/names.ts';
import { formatNumber, type Show } from '../../runsheet/shown.ts';
import { type Column, figures, words } from '../columns.ts';
import { cleanText, joined } from '../plain-text.ts';
import { quantityTexts } from '../quantities.ts';
import { outsideWindows, windowTexts } from '../reach-values.ts';
import type { ReportedCase } from '../report.ts';
import type { CountsRow, ReachRow } from '../result-rows.ts';
import { portQuantity, reachQuantity } from '../result-schema.ts';
import { verdictCounts } from '../verdict-line.ts';
import { type PageContext, SMALL } from './context.ts';
import { drawingText } from './drawing-text.ts';
import { factsHeight, writeFacts } from './facts.ts';
import { writeFoundBox } from './found-box.ts';
import { inputFacts } from './input-facts.ts';
import { writePressureMap } from './pressure-map.ts';
import { chapter, type Section } from './section.ts';
import { SIGN_HEIGHT, writeBanner, writeSignatures } from './sign-off.ts';

/** Cases beside each other in one table; more run on in tables below. */
const CASES_ABREAST = 4;
/** Windowed reaches compared; further ones are in the tables of reaches. */
const MOST_REACHES = 40;
const MOST_PORTS = 40;

/**
 * The cases of one layout beside each other: verdict, fluid, ports, and what each channel with a window gets; then what went in and
 * the lines to sign, since the cases have one verdict. Nothing for a single state.
 */
export function writeCases(contexts: readonly PageContext[]): void {
  if (contexts.length < 2) return;
  const [{ paper, report, one }] = contexts;
  const { cases } = report;
  const section = chapter(paper, 'Cases compared', 'portrait');
  const { sheet } = one.run;
  const drawing = sheet === null ? null : drawingText(sheet.drawing);
  section.paragraph(joined([sheet?.title ?? null, drawing, `layout ${report.result.layout.file}`], ', '));
  const total = (key: keyof CountsRow): number => cases.reduce((sum, { part }) => sum + part.counts[key], 0);
  const counts = verdictCounts({
    blockers: total('blockers'),
    cautions: total('cautions'),
    accepted: total('accepted'),
    rules_not_run: total('rules_not_run'),
  });
  writeBanner(section, report.result.verdict, `all cases together: ${counts}`);
  writeFoundBox(section, cases);
  section.paragraph(
    `${cases.length} cases of one chip, each solved and judged on its own; the chip is ${report.result.verdict === 'ready' ? 'ready: no case has a blocker' : 'on hold: at least one case has a blocker'}.`,
    SMALL,
  );
  for (let from = 0; from < cases.length; from += CASES_ABREAST)
    writeTable(section, cases.slice(from, from + CASES_ABREAST));
  const facts = inputFacts(contexts[0]).filter(([key]) => !OF_EACH_CASE.has(key));
  const height = factsHeight(paper, facts) + SIGN_HEIGHT + 24;
  if (paper.y + height > paper.bottom) paper.newPage();
  writePicture(contexts, section, height);
  paper.y = Math.max(paper.y, paper.bottom - height);
  section.heading(3, 'What went in');
  writeFacts(section, facts);
  writeSignatures(section);
}

/** Less room than this above the inputs is left empty, points. */
const PICTURE_ROOM = 240;

/** The chip itself, in the first case that is on hold, else in the first; every case has such a picture on its own page. */
function writePicture(contexts: readonly PageContext[], section: Section, below: number): void {
  const context = contexts.find(({ one }) => one.part.verdict === 'hold') ?? contexts[0];
  const { paper, one } = context;
  if (paper.bottom - below - paper.y < PICTURE_ROOM) return;
  section.heading(3, `The chip in case ${cleanText(one.name ?? '')}`);
  writePressureMap(context, section, below);
}

/** What a case may change is on its own page. */
const OF_EACH_CASE: ReadonlySet<string> = new Set(['fluid', 'depth', 'joints']);

/** One line of the comparison, a text a case. */
interface Line {
  readonly label: string;
  readonly texts: readonly string[];
  /** What stands above it and heads the lines below. */
  readonly group: string | null;
}

function writeTable(section: Section, cases: readonly ReportedCase[]): void {
  const { names, more } = windowedReaches(cases);
  const line = (label: string, text: (one: ReportedCase) => string, group: string | null = null): Line => ({
    label,
    texts: cases.map(text),
    group,
  });
  const verdict = line('verdict', ({ part }) => part.verdict);
  const lines = [
    verdict,
    line(
      'blockers, cautions, notes',
      ({ part: { counts } }) => `${counts.blockers}, ${counts.cautions}, ${counts.notes}`,
    ),
    line('accepted', ({ part }) => String(part.counts.accepted)),
    line('rules not run', ({ part }) => String(part.counts.rules_not_run)),
    line('rules of blockers', ({ part }) => blockersText(part.findings)),
    line('fluid', ({ part }) => part.fluid.name, 'Fluid'),
    line('temperature', ({ part }) => `${formatNumber(part.fluid.temperature_c)} °C`),
    line('viscosity', ({ part }) => `${formatNumber(part.fluid.viscosity_pa_s * 1e3)} mPa s`),
    ...cases[0].part.ports
      .slice(0, MOST_PORTS)
      .map(({ name }, i) => line(name, (one) => portText(one, name), i === 0 ? PORTS : null)),
    ...reachLines(cases, names),
  ];
  section.table(
    lines,
    [
      words('', ({ label }) => label, 'wrap'),
      ...cases.map(
        ({ name }, i): Column<Line> => ({
          ...figures(cleanText(name ?? ''), ({ texts }) => texts[i]),
          width: 'wrap',
        }),
      ),
    ],
    { size: 7, group: ({ group }) => group, isBold: (one) => one === verdict },
  );
  section.more(more, 'more reaches with a window: see the tables of reaches.');
}

const PORTS = 'Ports: condition; pressure at the pump; flow into the chip';
const REACHES = 'Reaches with a window: flow; mean to peak floor shear; mean residence time';

function reachLines(cases: readonly ReportedCase[], names: readonly string[]): readonly Line[] {
  const textOf = cases.map((one) => reachTexts(one, new Set(names)));
  return names.map((name, i) => {
    const texts = textOf.map((texts) => texts.get(name));
    const windows = new Set(texts.map((text) => text?.windows ?? ''));
    // a window that all cases share is said once
    const [shared] = windows.size === 1 ? windows : [''];
    return {
      label: shared === '' ? name : `${name}: ${shared}`,
      texts: texts.map((text) => {
        if (text === undefined) return '–';
        return `${text.verdict}${shared === '' ? ` ${text.windows}` : ''}: ${text.values}`;
      }),
      group: i === 0 ? REACHES : null,
    };
  });
}

const MOST_RULES = 6;

function blockersText(findings: ReportedCase['part']['findings']): string {
  const rules = [
    ...new Set(
      findings
        .filter(({ severity, accepted }) => severity === 'blocker' && accepted === null)
        .map(({ rule }) => rule),
    ),
  ];
  if (rules.length === 0) return 'none';
  const more = rules.length - MOST_RULES;
  return `${rules.slice(0, MOST_RULES).join(', ')}${more > 0 ? ` and ${more} more` : ''}`;
}

function portText({ part, show }: ReportedCase, name: string): string {
  const port = part.ports.find((candidate) => candidate.name === name);
  if (port === undefined) return '–';
  const text = quantityTexts(portQuantity, port, show);
  return `${port.condition}; ${text('supply_pressure_pa')}; ${text('flow_m3_s')}`;
}

/** Names of reaches whose channel has a window in any of the cases, in drawn order of the first case that has it. */
function windowedReaches(cases: readonly ReportedCase[]): {
  readonly names: readonly string[];
  readonly more: number;
} {
  const names = new Set<string>();
  for (const { network, run } of cases) {
    for (let reach = 0; reach < network.reachCount; reach++) {
      if (hasWindow(run.channels[network.reachChannel[reach]])) names.add(reachName(network, reach));
    }
  }
  return { names: [...names].slice(0, MOST_REACHES), more: Math.max(0, names.size - MOST_REACHES) };
}

/** By name: what flows, and what the windows say to it. */
function reachTexts(
  one: ReportedCase,
  wanted: ReadonlySet<string>,
): ReadonlyMap<string, Readonly<Record<'values' | 'windows' | 'verdict', string>>> {
  const { network, run, part, show } = one;
  const outside = outsideWindows(one);
  const reaches = Array.from({ length: network.reachCount }, (_, reach) => reach);
  return new Map(
    reaches
      .filter((reach) => wanted.has(reachName(network, reach)))
      .map((reach) => {
        const name = reachName(network, reach);
        const channel = network.reachChannel[reach];
        const windows = windowTexts(run.channels[channel], show).join('; ');
        const isOutside = outside(network.chip.channels[channel].name, name);
        const verdict = windows === '' ? 'no window' : isOutside ? 'OUTSIDE' : 'inside';
        return [name, { values: valuesText(part.reaches.at(reach), show), windows, verdict }];
      }),
  );
}

function valuesText(row: ReachRow, show: Show): string {
  const text = quantityTexts(reachQuantity, row, show);
  return [
    text('flow_m3_s'),
    `${text('wall_shear_floor_mean_pa')} to ${text('wall_shear_floor_peak_pa')}`,
    text('residence_time_s'),
  ].join('; ');
}
