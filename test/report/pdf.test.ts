import { describe, expect, test } from 'vitest';
import { writePdf } from '../../src/report/pdf/document.ts';
import type { Report } from '../../src/report/report.ts';
import { DEMOS, demoReport, reportOf } from './demo.ts';
import { fonts } from './fonts.ts';
import { glyphCoverage } from './glyph-coverage.ts';
import { outside, overlaps, type PdfPage, type PdfText, type ReadPdf, readPdf } from './read-pdf.ts';
import { sampleCasesReport, sampleReport } from './sample.ts';

const date = new Date('2026-05-04T08:00:00Z');
const write = (report: Report, paper: 'a4' | 'letter' = 'a4'): Promise<Uint8Array> =>
  writePdf(report, { fonts, paper, date });
const read = async (report: Report, paper: 'a4' | 'letter' = 'a4'): Promise<ReadPdf> =>
  readPdf(await write(report, paper));

/** Report and document of the sample or a demo layout, written and read once for all tests. */
const documents = new Map<string, Promise<{ report: Report; pdf: ReadPdf }>>();
function documentOf(name: string): Promise<{ report: Report; pdf: ReadPdf }> {
  let made = documents.get(name);
  if (made === undefined) {
    made = (name === 'sample' ? Promise.resolve(sampleReport()) : demoReport(name)).then(async (report) => ({
      report,
      pdf: await read(report),
    }));
    documents.set(name, made);
  }
  return made;
}

const pageText = ({ texts }: PdfPage): string => texts.map(({ text }) => text).join(' ');
const allText = (pdf: ReadPdf): string => pdf.pages.map(pageText).join(' ');

function expectTidy(pdf: ReadPdf): void {
  pdf.pages.forEach((page, i) => {
    expect(outside(page), `outside page ${i + 1}`).toEqual([]);
    expect(overlaps(page), `over each other on page ${i + 1}`).toEqual([]);
  });
}

describe('the PDF', () => {
  test('is the same bytes for the same report, and other bytes for another date', async () => {
    const report = sampleReport();
    const once = await write(report);
    expect(Buffer.compare(Buffer.from(once), Buffer.from(await write(sampleReport())))).toBe(0);
    const later = await writePdf(report, { fonts, paper: 'a4', date: new Date('2026-05-05T08:00:00Z') });
    expect(Buffer.compare(Buffer.from(once), Buffer.from(later))).not.toBe(0);
  });

  test('has title, language, bookmarks, tagged tables, headings and figures, and one embedded font in two weights', async () => {
    const pdf = (await documentOf('sample')).pdf;
    expect([pdf.title, pdf.language, pdf.tagged]).toEqual(['Two-lane sample', 'en', true]);
    expect(pdf.bookmarks).toEqual([
      'Verdict',
      'Findings',
      'Maps',
      'Reaches',
      'Segments',
      'Hand check',
      'Holes',
      'Model',
      'Cautions',
      'Run sheet',
    ]);
    for (const role of ['H1', 'H2', 'P', 'Figure', 'Table', 'TR', 'TH', 'TD'])
      expect(pdf.roles.get(role), role).toBeGreaterThan(0);
    expect([...pdf.fonts].map((name) => name.replace(/^[A-Z]{6}\+/, '')).sort()).toEqual([
      'DejaVuSans',
      'DejaVuSans-Bold',
    ]);
  });

  test('says on every page which inputs it is of and which page of how many', async () => {
    const pdf = (await documentOf('sample')).pdf;
    pdf.pages.forEach((page, i) => {
      const text = pageText(page);
      expect(text).toContain(`page ${i + 1} of ${pdf.pages.length}`);
      expect(text).toContain(`sample.svg ${'a'.repeat(12)}`);
      expect(text).toContain(`sample.run.yaml ${'b'.repeat(12)}`);
    });
  });

  test('page 1 holds verdict with counts, what was not checked, inputs with their hashes, and lines to sign', async () => {
    const [first] = (await documentOf('sample')).pdf.pages;
    const text = pageText(first);
    for (const part of [
      'HOLD',
      '1 blocker, 1 caution, 1 accepted, 1 rule not run',
      'port-grid (no port_grid is given)',
      'drawing C-200, revision B',
      '10 mm',
      'As drawn, seen from the channel side',
      'a'.repeat(64),
      'b'.repeat(64),
      'viscosity 0.6913 mPa s, density 993.3 kg/m³ (IAPWS SR6-08(2011))',
      'lanes 120 µm (run sheet)',
      '76 × 26 mm as read from chip-edge; 76 × 26 mm wanted',
      'rillcheck 0.1.0 on 2026-05-04',
      'checked',
      'approved',
      'date',
    ]) {
      expect(text).toContain(part);
    }
  });

  test('numbers each finding on the map of page 1 and beside its close-up, with measure, limit and way out', async () => {
    const pdf = (await documentOf('sample')).pdf;
    const numbers = pdf.pages[0].texts
      .filter(({ text, size }) => /^\d$/.test(text) && size < 7)
      .map(({ text }) => text);
    expect(numbers).toEqual(expect.arrayContaining(['1', '2', '3']));
    const text = pageText(pdf.pages[1]);
    for (const part of [
      'measured 31 µm',
      'limit 40 µm',
      'move lane-1 0.009 mm away',
      'Accepted by AM on 2026-05-04, up to 1.2 mm',
      'Rules not run',
    ]) {
      expect(text).toContain(part);
    }
  });

  test('holds the hand check that follows from the exact exponents', async () => {
    // a 0.5 × 0.12 mm duct: d ln R/d ln depth by central difference of the series, independent of the analytic derivative
    const text = allText((await documentOf('sample')).pdf);
    const exponent = Number(/goes with depth to the power (-[\d.]+)/.exec(text)?.[1]);
    const { ductForm } = await import('../../src/physics/duct.ts');
    const { resistancePerLength } = await import('../../src/physics/duct-state.ts');
    const step = 1e-5;
    const difference =
      (Math.log(resistancePerLength(ductForm(0.5e-3, 0.12e-3 * (1 + step)), { viscosityPaS: 1 })) -
        Math.log(resistancePerLength(ductForm(0.5e-3, 0.12e-3 * (1 - step)), { viscosityPaS: 1 }))) /
      (Math.log1p(step) - Math.log1p(-step));
    expect(exponent).toBeCloseTo(difference, 3);
  });

  test('holds the run sheet in full and the usual cautions', async () => {
    const text = allText((await documentOf('sample')).pdf);
    expect(text).toMatch(/feed: +\{ pressure: 1 kPa, tubing: \{ bore: 0\.5 mm, length: 300 mm \} \}/);
    expect(text).toContain('can burst or jet under pressure');
    expect(text).toContain('not a qualification of a medical or diagnostic device');
  });

  test('shows each case under a bookmark of its own', async () => {
    const pdf = await read(sampleCasesReport());
    expect(pdf.bookmarks.filter((title) => title.startsWith('Case '))).toEqual([
      'Case seed: verdict',
      'Case culture: verdict',
    ]);
    expect(allText(pdf)).toContain('2 cases: hold');
    expectTidy(pdf);
    // one verdict, signed once and on page 1, with what it is of
    const first = pageText(pdf.pages[0]);
    for (const part of ['HOLD', 'drawing C-200, revision B', 'a'.repeat(64), 'b'.repeat(64), 'approved'])
      expect(first).toContain(part);
    expect(pdf.pages.filter((page) => pageText(page).includes('approved'))).toHaveLength(1);
  });

  test.each(['a4', 'letter'] as const)(
    'keeps every text inside the page and off every other on %s',
    async (paper) => {
      const pdf = await read(sampleReport(), paper);
      expect(Math.round(pdf.pages[0].width)).toBe(paper === 'a4' ? 595 : 612);
      expectTidy(pdf);
    },
  );

  test('without a run sheet says so', async () => {
    const pdf = await read(sampleReport({ bare: true }));
    expect(pageText(pdf.pages[0])).toContain('none: geometry rules only');
    expectTidy(pdf);
  });

  test('shows – and not a wrong number where the chip is at rest', async () => {
    const pdf = await read(sampleReport({ feedPa: 0 }));
    expect(allText(pdf)).not.toMatch(/NaN|Infinity|undefined|null/);
    expectTidy(pdf);
  });

  test('brings names with markup, Greek, emoji, right-to-left text and 200 characters through harmless and legible', async () => {
    const names = {
      feed: '<script>alert(1)</script>',
      upper: 'αβγ-λ 🧪\u202e evil\u0007',
      lower: 'ה'.repeat(20) + 'مرحبا',
      title: 'T'.repeat(200),
    };
    const pdf = await read(sampleReport({ names }));
    const text = allText(pdf);
    expect(text).toContain('<script>alert(1)</script>');
    expect(text).toContain('αβγ-λ [U+1F9EA] evil');
    expect(text).not.toContain('\u202e');
    expect(pageText(pdf.pages[0])).toMatch(/T{20,}…/);
    expectTidy(pdf);
  });

  test('words of a right-to-left name read back in the order they are written', async () => {
    // a reader orders text by where it stands, so words set the wrong way round come back swapped
    const pdf = await read(sampleReport({ names: { title: 'p קצר ארוך end' } }));
    expect(pageText(pdf.pages[0])).toContain('קצר ארוך');
  });

  test('uses no glyph that its font lacks', async () => {
    const has = glyphCoverage(fonts.regular);
    const hasBold = glyphCoverage(fonts.bold);
    for (const name of ['sample', ...DEMOS]) {
      for (const character of new Set(allText((await documentOf(name)).pdf))) {
        const codePoint = character.codePointAt(0) ?? 0;
        expect(has(codePoint) && hasBold(codePoint), `U+${codePoint.toString(16)} ${character}`).toBe(true);
      }
    }
    expect(has(0x1f9ea)).toBe(false);
    for (const character of 'µ·₁₂²³¹⁰⁹±×→–—…≤≥√Σπρζ✗°')
      expect(has(character.codePointAt(0) ?? 0), character).toBe(true);
  });
});

describe('the PDF of every shape of chip', () => {
  const frame = (w: number, h: number, inner: string): string =>
    `<svg xmlns="http://www.w3.org/2000/svg" width="${w}mm" height="${h}mm" viewBox="0 0 ${w} ${h}"><g fill="none" stroke="black">` +
    `<rect id="chip-edge" width="${w}" height="${h}"/>${inner}</g></svg>`;
  const run = 'depth: 50 um\n';

  test.each([
    [
      'a square',
      frame(
        40,
        40,
        '<path id="a" stroke-width="0.2" d="M5 5V35H35"/><circle id="in" cx="5" cy="5" r="1"/><circle id="out" cx="35" cy="35" r="1"/>',
      ),
    ],
    [
      'a lying 5:1 strip',
      frame(
        100,
        20,
        '<path id="a" stroke-width="0.2" d="M5 10H95"/><circle id="in" cx="5" cy="10" r="1"/><circle id="out" cx="95" cy="10" r="1"/>',
      ),
    ],
    [
      'a standing 5:1 strip',
      frame(
        20,
        100,
        '<path id="a" stroke-width="0.2" d="M10 5V95"/><circle id="in" cx="10" cy="5" r="1"/><circle id="out" cx="10" cy="95" r="1"/>',
      ),
    ],
  ])('%s fits the page, its texts clear of each other', async (_, svg) => {
    const pdf = await read(
      await reportOf('shape', svg, `${run}ports: { in: { pressure: 1 kPa }, out: open }\n`),
    );
    expectTidy(pdf);
    expect(pageText(pdf.pages[0])).toContain('10 mm');
  });

  test('300 ports: the table continues, and every port is in it', async () => {
    const columns = Array.from({ length: 150 }, (_, i) => i);
    const inner = columns
      .map(
        (i) =>
          `<path id="c${i}" stroke-width="0.1" d="M${2 + i} 5V45"/><circle id="in${i}" cx="${2 + i}" cy="5" r="0.3"/><circle id="out${i}" cx="${2 + i}" cy="45" r="0.3"/>`,
      )
      .join('');
    const ports = columns.map((i) => `  in${i}: { pressure: 1 kPa }\n  out${i}: open\n`).join('');
    const pdf = await read(await reportOf('many', frame(155, 50, inner), `${run}ports:\n${ports}`));
    expectTidy(pdf);
    const text = allText(pdf);
    for (const i of [0, 77, 149]) expect(text).toMatch(new RegExp(`\\bout${i} open`));
    expect(pageText(pdf.pages[0])).toContain('more ports on the next page');
  });
});

/** SI value of one of each unit that the tables may head a column with. */
const UNITS: Readonly<Record<string, number>> = {
  mm: 1e-3,
  µm: 1e-6,
  m: 1,
  'µL/min': 1e-9 / 60,
  'nL/min': 1e-12 / 60,
  'mL/min': 1e-6 / 60,
  kPa: 1e3,
  Pa: 1,
  mPa: 1e-3,
  mbar: 100,
  'dyn/cm²': 0.1,
  'mm/s': 1e-3,
  'µm/s': 1e-6,
  'm/s': 1,
  s: 1,
  ms: 1e-3,
  min: 60,
  h: 3600,
  µL: 1e-9,
  mL: 1e-6,
  nL: 1e-12,
  '10⁹ Pa s/m³': 1e9,
  '10¹² Pa s/m³': 1e12,
  '10¹⁵ Pa s/m³': 1e15,
  '': 1,
};

interface ReadRow {
  readonly first: string;
  /** By head, SI; null for –. */
  readonly values: ReadonlyMap<string, number | null>;
}

/** Rows of the tables on the pages whose first column is headed `first`: a head with units under it, cells at its right edges. */
function readTable(pdf: ReadPdf, first: string, second: string): ReadRow[] {
  const rows: ReadRow[] = [];
  for (const page of pdf.pages) {
    const heads = page.texts.filter(
      ({ text, y }) =>
        text === first && page.texts.some((other) => other.text === second && Math.abs(other.y - y) < 0.1),
    );
    for (const head of heads) {
      const columns = headColumns(page, head);
      const below = page.texts
        .filter(({ y, x }) => y < head.y - 1.5 * head.size && Math.abs(x - head.x) < 0.5)
        .sort((a, b) => b.y - a.y);
      for (const name of below) {
        const values = new Map<string, number | null>();
        for (const { text, x, y, width } of page.texts) {
          if (Math.abs(y - name.y) > 0.1 || !/^(–|-?[\d.]+(e-?\d+)?( %)?)$/.test(text)) continue;
          const column = columns.find(({ right }) => Math.abs(right - x - width) < 0.3);
          if (column === undefined) continue;
          const number = Number(text.replace(' %', '')) * (text.endsWith('%') ? 0.01 : 1);
          values.set(column.head, text === '–' ? null : number * column.unit);
        }
        // lines over the whole width, and what stands below the table
        if (values.size < columns.length - 1) continue;
        rows.push({ first: name.text, values });
      }
    }
  }
  return rows;
}

function headColumns(page: PdfPage, head: PdfText): { head: string; unit: number; right: number }[] {
  return page.texts
    .filter(({ y, x }) => Math.abs(y - head.y) < 0.1 && x > head.x + 0.1)
    .flatMap(({ text, x, width, y }) => {
      const right = x + width;
      const unit = page.texts.find(
        (other) =>
          Math.abs(other.x + other.width - right) < 0.3 && other.y < y - 1 && other.y > y - 1.5 * head.size,
      );
      if (unit !== undefined && !(unit.text in UNITS) && unit.text !== 'window') return [];
      return [
        { head: text, unit: unit === undefined || unit.text === 'window' ? 1 : UNITS[unit.text], right },
      ];
    });
}

function expectClose(read: number | null | undefined, value: number | null, what: string): void {
  if (value === null) expect(read, what).toBeNull();
  else {
    expect(read, what).toBeTypeOf('number');
    // four significant digits
    expect(Math.abs((read ?? 0) - value), `${what}: ${read} for ${value}`).toBeLessThanOrEqual(
      Math.max(5.001e-4 * Math.abs(value), 1e-300),
    );
  }
}

describe.each(['sample', ...DEMOS])('the numbers of the PDF of %s', (name) => {
  test('equal the JSON in ports, reaches, segments and holes, and no text lies over another', async () => {
    const { report, pdf } = await documentOf(name);
    expectTidy(pdf);
    const [{ part }] = report.cases;

    const ports = readTable(pdf, 'port', 'condition');
    expect(ports.map(({ first }) => first)).toEqual(part.ports.map((port) => port.name));
    part.ports.forEach((port, i) => {
      const { values } = ports[i];
      expectClose(values.get('in the chip'), port.pressure_pa, `${port.name} pressure`);
      expectClose(values.get('at the supply'), port.supply_pressure_pa, `${port.name} supply`);
      expectClose(values.get('flow into chip'), port.flow_m3_s, `${port.name} flow`);
      if (values.has('time in tubing'))
        expectClose(values.get('time in tubing'), port.tubing_time_s, `${port.name} tubing time`);
      if (values.has('tubing holds'))
        expectClose(values.get('tubing holds'), port.tubing_volume_m3, `${port.name} tubing volume`);
    });

    const reaches = new Map(
      readTable(pdf, 'reach', 'from → to').map((row) => [row.first.replace(/^✗ /, ''), row.values]),
    );
    expect(reaches.size).toBe(part.reaches.length);
    for (const reach of part.reaches) {
      const values = reaches.get(reach.name);
      const check = (head: string, value: number | null): void =>
        expectClose(values?.get(head), value, `${reach.name} ${head}`);
      check('drawn', reach.drawn_length_m);
      check('duct', reach.length_m);
      check('width', reach.width_m);
      check('depth', reach.depth_m);
      check('resistance', reach.resistance_pa_s_m3);
      check('flow', reach.flow_m3_s);
      check('drop', reach.pressure_drop_pa);
      check('v mean', reach.mean_velocity_m_s);
      check('v peak', reach.peak_velocity_m_s);
      check('Re', reach.reynolds);
      check('floor mean', reach.wall_shear_floor_mean_pa);
      check('floor peak', reach.wall_shear_floor_peak_pa);
      check('side mean', reach.wall_shear_side_mean_pa);
      check('side peak', reach.wall_shear_side_peak_pa);
      if (values?.has('floor in')) check('floor in', reach.floor_share_inside_window);
      check('time mean', reach.residence_time_s);
      check('fastest', reach.fastest_time_s);
    }

    const segments = new Map([...part.segments].map((segment) => [segment.name, segment]));
    const printed = readTable(pdf, 'segment', 'x₁');
    let length = 0;
    for (const { first, values } of printed) {
      length += values.get('length') ?? 0;
      const segment = segments.get(first);
      if (segment === undefined) continue;
      expectClose(values.get('length'), segment.length_m, `${first} length`);
      expectClose(values.get('drop'), segment.pressure_drop_pa, `${first} drop`);
      expectClose(values.get('resistance'), segment.resistance_pa_s_m3, `${first} resistance`);
      expectClose(values.get('floor mean'), segment.wall_shear_floor_mean_pa, `${first} shear`);
      expectClose(values.get('time'), segment.residence_time_s, `${first} time`);
      expect(values.get('x₁')).toBeCloseTo(segment.x1_mm / 1000, 6);
      expect(values.get('y₂')).toBeCloseTo(segment.y2_mm / 1000, 6);
    }
    const total = [...part.segments].reduce((sum, segment) => sum + segment.length_m, 0);
    expect(Math.abs(length - total)).toBeLessThan(1e-3 * total);

    const holes = readTable(pdf, 'hole', 'x from corner');
    expect(holes.map(({ first }) => first)).toEqual(part.ports.map((port) => port.name));
    part.ports.forEach((port, i) => {
      expect(holes[i].values.get('x in drawing')).toBeCloseTo(port.x_mm / 1000, 6);
      expect(holes[i].values.get('y in drawing')).toBeCloseTo(port.y_mm / 1000, 6);
      expect(holes[i].values.get('diameter')).toBeCloseTo(port.diameter_mm / 1000, 6);
    });
  });
});
