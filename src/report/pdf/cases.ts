import { reachName } from '../../network/names.ts';
import { formatNumber, type Show } from '../../runsheet/shown.ts';
import { cleanText } from '../plain-text.ts';
import { hasWindow, outsideWindows, windowTexts } from '../reach-values.ts';
import type { ReportedCase } from '../report.ts';
import type { CountsRow, ReachRow } from '../result-rows.ts';
import { verdictCounts } from '../verdict-line.ts';
import { BODY, type PageContext, SMALL } from './context.ts';
import { drawingText } from './drawing-text.ts';
import { factsHeight, writeFacts } from './facts.ts';
import { writeFoundBox } from './found-box.ts';
import { FACTS, inputFacts } from './input-facts.ts';
import type { Element, Paper } from './paper.ts';
import { writePressureMap } from './pressure-map.ts';
import { SIGN_HEIGHT, writeBanner, writeSignatures } from './sign-off.ts';
import { cells, drawTable, type TableRow } from './table.ts';

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
  paper.newPage('portrait');
  const section = paper.section();
  paper.heading(section, 1, 'Cases compared');
  const { sheet } = one.run;
  const drawing = [sheet?.title ?? '', sheet === null ? '' : drawingText(sheet.drawing)];
  paper.paragraph(
    section,
    [...drawing, `layout ${report.result.layout.file}`].filter(Boolean).join(', '),
    BODY,
  );
  const total = (pick: (counts: CountsRow) => number): number =>
    cases.reduce((sum, { part }) => sum + pick(part.counts), 0);
  const counts = verdictCounts({
    blockers: total(({ blockers }) => blockers),
    cautions: total(({ cautions }) => cautions),
    accepted: total(({ accepted }) => accepted),
    rules_not_run: total(({ rules_not_run }) => rules_not_run),
  });
  writeBanner(paper, section, report.result.verdict, `all cases together: ${counts}`);
  writeFoundBox(paper, section, cases);
  paper.paragraph(
    section,
    `${cases.length} cases of one chip, each solved and judged on its own; the chip is ${report.result.verdict === 'ready' ? 'ready: no case has a blocker' : 'on hold: at least one case has a blocker'}.`,
    SMALL,
  );
  for (let from = 0; from < cases.length; from += CASES_ABREAST)
    writeTable(paper, section, cases.slice(from, from + CASES_ABREAST));
  const facts = inputFacts(contexts[0]).filter(([key]) => !OF_EACH_CASE.has(key));
  const height = factsHeight(paper, facts, { ...FACTS, width: paper.width }) + SIGN_HEIGHT + 24;
  if (paper.y + height > paper.bottom) paper.newPage();
  writePicture(contexts, section, height);
  paper.y = Math.max(paper.y, paper.bottom - height);
  paper.heading(section, 3, 'What went in');
  writeFacts(paper, section, facts, FACTS);
  writeSignatures(paper, section);
}

/** Less room than this above the inputs is left empty, points. */
const PICTURE_ROOM = 240;

/** The chip itself, in the first case that is on hold, else in the first; every case has such a picture on its own page. */
function writePicture(contexts: readonly PageContext[], section: Element, below: number): void {
  const context = contexts.find(({ one }) => one.part.verdict === 'hold') ?? contexts[0];
  const { paper, one } = context;
  if (paper.bottom - below - paper.y < PICTURE_ROOM) return;
  paper.heading(section, 3, `The chip in case ${cleanText(one.name ?? '')}`);
  writePressureMap(context, section, below);
}

/** What a case may change is on its own page. */
const OF_EACH_CASE: ReadonlySet<string> = new Set(['fluid', 'depth', 'joints']);

function writeTable(paper: Paper, section: Element, cases: readonly ReportedCase[]): void {
  const { rows, more } = rowsOf(cases);
  drawTable(
    paper,
    section,
    [
      { head: '', align: 'left', width: 'wrap' },
      ...cases.map(({ name }) => ({ head: cleanText(name ?? ''), align: 'right', width: 'wrap' }) as const),
    ],
    rows,
    { size: 7 },
  );
  if (more > 0)
    paper.paragraph(section, `… and ${more} more reaches with a window: see the tables of reaches.`, SMALL);
}

function rowsOf(cases: readonly ReportedCase[]): {
  readonly rows: readonly TableRow[];
  readonly more: number;
} {
  const row = (label: string, text: (one: ReportedCase, i: number) => string): TableRow =>
    cells(label, ...cases.map(text));
  const rows: TableRow[] = [
    { kind: 'cells', cells: ['verdict', ...cases.map(({ part }) => part.verdict)], weight: 'bold' },
    row(
      'blockers, cautions, notes',
      ({ part: { counts } }) => `${counts.blockers}, ${counts.cautions}, ${counts.notes}`,
    ),
    row('accepted', ({ part }) => String(part.counts.accepted)),
    row('rules not run', ({ part }) => String(part.counts.rules_not_run)),
    row('rules of blockers', ({ part }) => blockersText(part.findings)),
    { kind: 'group', text: 'Fluid' },
    row('fluid', ({ part }) => part.fluid.name),
    row('temperature', ({ part }) => `${formatNumber(part.fluid.temperature_c)} °C`),
    row('viscosity', ({ part }) => `${formatNumber(part.fluid.viscosity_pa_s * 1e3)} mPa s`),
    { kind: 'group', text: 'Ports: condition; pressure at the pump; flow into the chip' },
  ];
  const [first] = cases;
  first.part.ports.slice(0, MOST_PORTS).forEach(({ name }) => {
    rows.push(row(name, (one) => portText(one, name)));
  });
  const { names, more } = windowedReaches(cases);
  if (names.length > 0) {
    rows.push({
      kind: 'group',
      text: 'Reaches with a window: flow; mean to peak floor shear; mean residence time',
    });
    const values = cases.map((one) => reachTexts(one, new Set(names)));
    for (const name of names) {
      const texts = values.map((value) => value.get(name) ?? null);
      const windows = new Set(texts.map((text) => text?.windows ?? ''));
      // a window that all cases share is said once
      const [shared] = windows.size === 1 ? windows : [''];
      rows.push(
        cells(
          shared === '' ? name : `${name}: ${shared}`,
          ...texts.map((text) => {
            if (text === null) return '–';
            const own = shared === '' ? ` ${text.windows}` : '';
            return `${text.verdict}${own}: ${text.values}`;
          }),
        ),
      );
    }
  }
  return { rows, more };
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
  return `${port.condition}; ${show.text('pressure', port.supply_pressure_pa)}; ${show.text('flow', port.flow_m3_s)}`;
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

interface ReachText {
  readonly values: string;
  readonly windows: string;
  readonly verdict: 'inside' | 'OUTSIDE' | 'no window';
}

/** By name: what flows, and what the windows say to it. */
function reachTexts(one: ReportedCase, wanted: ReadonlySet<string>): ReadonlyMap<string, ReachText> {
  const { network, run, part, show } = one;
  const outside = outsideWindows(one);
  const texts = new Map<string, ReachText>();
  for (let reach = 0; reach < network.reachCount; reach++) {
    const name = reachName(network, reach);
    if (!wanted.has(name)) continue;
    const channel = network.reachChannel[reach];
    const windows = windowTexts(run.channels[channel], show).join('; ');
    texts.set(name, {
      values: valuesText(part.reaches.at(reach), show),
      windows,
      verdict:
        windows === ''
          ? 'no window'
          : outside(network.chip.channels[channel].name, name)
            ? 'OUTSIDE'
            : 'inside',
    });
  }
  return texts;
}

function valuesText(row: ReachRow, show: Show): string {
  return [
    show.text('flow', row.flow_m3_s),
    `${show.text('wall_shear', row.wall_shear_floor_mean_pa)} to ${show.text('wall_shear', row.wall_shear_floor_peak_pa)}`,
    show.text('residence_time', row.residence_time_s),
  ].join('; ');
}
