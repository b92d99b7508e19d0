import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import * as v from 'valibot';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { run } from '../../src/cli.ts';
import { resultSchema } from '../../src/report/result-schema.ts';
import { readPdf } from '../report/read-pdf.ts';
import { type Grid, gridDrawing } from '../solve/grid-drawing.ts';
import { fakeIo } from './fake-io.ts';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'rillcheck-'));
});

afterEach(() => {
  rmSync(folder, { recursive: true, force: true });
});

function put(name: string, text: string): void {
  writeFileSync(join(folder, name), text);
}

async function rillcheck(...args: string[]) {
  const io = fakeIo(folder);
  const code = await run(args, io);
  return { code, out: io.stdout(), err: io.stderr() };
}

const CHIP =
  '<svg xmlns="http://www.w3.org/2000/svg" width="30mm" height="20mm" viewBox="0 0 30 20"><rect id="chip-edge" width="30" height="20" fill="none" stroke="#000" stroke-width=".1"/><path id="lane" fill="none" stroke="#000" stroke-width="1" d="M5 10H25"/><circle id="in" cx="5" cy="10" r="1"/><circle id="out" cx="25" cy="10" r="1"/></svg>';

const SHEET = `depth: 100 um
ports:
  in: { pressure: 1 kPa, tubing: { bore: 0.2 mm, length: 200 mm } }
  out: open
targets:
  - { channel: lane, wall_shear: 0.5 Pa, by: in }
`;

describe('rillcheck pump', () => {
  it('finds the setting of both kinds of pump, and ends as a check at that setting does', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    const { code, out, err } = await rillcheck('pump', 'chip.svg', '-f', 'none');
    expect(err).toBe('');
    expect(code).toBe(0);
    expect(out).toMatch(/^pump settings\n/);
    expect(out).toMatch(/lane\s+wall shear, mean\s+0\.5 Pa\s+0\.5 Pa\s+in/);
    expect(out).toContain('chip.svg  ready: 0 blockers');
  });

  it('prints one JSON document that its schema holds, with exact settings', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', SHEET);
    const { out } = await rillcheck('pump', 'chip.svg', '--json', '--detail', 'ports');
    const result = v.parse(resultSchema, JSON.parse(out));
    if (!('pump' in result)) throw new Error('no pump part');
    expect(result.pump?.targets).toMatchObject([
      {
        channel: 'lane',
        reach: 'lane',
        quantity: 'wall_shear',
        at: 'mean',
        wanted: 0.5,
        unit: 'Pa',
        by: 'in',
      },
    ]);
    const [setting] = result.pump?.settings ?? [];
    expect(setting.supply_pressure_pa).toBeGreaterThan(setting.pressure_pa ?? Number.NaN);
    expect(setting.within_limits).toBe(true);
    expect(result.ports[0]).toMatchObject({ condition: 'pressure', flow_m3_s: setting.flow_m3_s });
  });

  it('blocks a setting beyond its pump, says the nearest it can do, and what the target then is', async () => {
    put('chip.svg', CHIP);
    put('chip.run.yaml', `${SHEET}pump_limits: { in: { max_pressure: 1 kPa, max_flow: 1 mL/min } }\n`);
    const { code, out } = await rillcheck('pump', 'chip.svg', '--json');
    expect(code).toBe(1);
    const { findings, pump } = JSON.parse(out);
    expect(pump.settings[0].within_limits).toBe(false);
    const [finding] = findings.filter(({ rule }: { rule: string }) => rule === 'pump-limit');
    expect(finding).toMatchObject({ severity: 'blocker', limit: 1000, unit: 'Pa', names: ['in', 'lane'] });
    expect(finding.measured).toBe(pump.settings[0].supply_pressure_pa);
    expect(finding.message).toMatch(
      /^to reach 0\.5 Pa of mean wall shear in lane, the pump at in would have to hold .* more than the 1 kPa that it can$/,
    );
    const share = 1000 / pump.settings[0].supply_pressure_pa;
    expect(finding.fix).toContain(`mean wall shear of lane is ${Number((0.5 * share).toPrecision(4))} Pa`);
  });

  it('holds a setting for which no limit is given against what is usual, as a caution', async () => {
    put('chip.svg', CHIP);
    const pumped = async (target: string, limits = '', depth = '100 um') => {
      put(
        'chip.run.yaml',
        `${SHEET.replace('wall_shear: 0.5 Pa', target).replace('100 um', depth).replace(', tubing: { bore: 0.2 mm, length: 200 mm }', '')}${limits}`,
      );
      const { out, code } = await rillcheck('pump', 'chip.svg', '--json', '--detail', 'ports');
      const { findings, pump } = JSON.parse(out);
      return {
        code,
        within: pump.settings[0].within_limits,
        findings: findings.filter(({ rule }: { rule: string }) => rule === 'pump-limit'),
      };
    };
    expect(await pumped('flow: 9 mL/min')).toMatchObject({ within: true, findings: [] });
    const much = await pumped('flow: 11 mL/min');
    expect(much).toMatchObject({
      code: 0,
      within: false,
      findings: [{ severity: 'caution', limit: 10e-6 / 60, unit: 'm³/s', names: ['in', 'lane'] }],
    });
    expect(much.findings[0].message).toContain(
      'give 11 mL/min, more than the 10 mL/min (typical value, not from your maker)',
    );
    expect(much.findings[0].fix).toMatch(/^write under pump_limits what the pump at in can do/);
    expect((await pumped('flow: 9 mL/min', '', '4 um')).findings).toMatchObject([
      { severity: 'caution', limit: 700e3 },
    ]);
    expect((await pumped('flow: -9 mL/min', '', '8 um')).findings).toMatchObject([
      { severity: 'caution', limit: -80e3 },
    ]);
    // a limit that is given stands in the place of the usual one; the others stay
    expect(await pumped('flow: 11 mL/min', 'pump_limits: { in: { max_flow: 20 mL/min } }\n')).toMatchObject({
      within: true,
      findings: [],
    });
    const both = await pumped('flow: 11 mL/min', 'pump_limits: { in: { max_pressure: 1 Pa } }\n');
    expect(both.findings.map(({ severity }: { severity: string }) => severity)).toEqual([
      'blocker',
      'caution',
    ]);
    expect(both.within).toBe(false);
  });

  it('says in its row which blockers a setting breaks: an inlet that must draw, a chip that bursts, a window', async () => {
    put('chip.svg', CHIP);
    const row = async (target: string, more = '') => {
      put(
        'chip.run.yaml',
        `${SHEET.replace('wall_shear: 0.5 Pa', target).replace('1 kPa', '1 kPa, expect: in')}${more}`,
      );
      const { out } = await rillcheck('pump', 'chip.svg', '-f', 'none');
      const [settings] = out.split('\n\n').slice(1);
      return settings;
    };
    expect(await row('flow: -5 uL/min')).toMatch(/\nin .* backflow {2}within/);
    expect(await row('flow: 5 uL/min')).not.toContain('breaks');
    // limits are never cut off
    expect(await row('flow: -5 uL/min')).toMatch(/\npump limits of in: -80 to 700 kPa, at most 10 mL\/min/);
    expect(await row('flow: 5 uL/min')).toContain('-80 to 700 kPa, at most 10 mL/min');
    expect(await row('flow: 5 uL/min', 'limits: { max_pressure: 1 Pa }\n')).toMatch(
      /\nin .* over-pressure {2}within/,
    );
    const both = await row(
      'flow: -5 uL/min',
      'channels: { lane: { flow: { max: 1 uL/min } } }\npump_limits: { in: { max_flow: 1 uL/min } }\n',
    );
    expect(both.replace(/\s+/g, ' ')).toContain(
      'the setting of in breaks backflow, flow-window, pump-limit: see the blockers',
    );
    // a blocker of the drawing is no fault of the setting
    expect(await row('flow: 5 uL/min', 'limits: { min_width: 2 mm }\n')).not.toContain('breaks');
  });

  it('says in a box on page 1 that the settings were found, the old beside the new, and at the head of every page', async () => {
    put('chip.svg', CHIP);
    const page1 = async (more: string) => {
      put('chip.run.yaml', `${SHEET}${more}`);
      await rillcheck('pump', 'chip.svg', '-f', 'pdf', '-o', 'out');
      const { pages } = await readPdf(new Uint8Array(readFileSync(join(folder, 'out/chip.pump.pdf'))));
      for (const { texts } of pages)
        expect(texts.map(({ text }) => text).join(' ')).toContain('at settings found, not given');
      return pages[0].texts.map(({ text }) => text);
    };
    const texts = await page1('');
    expect(texts.join(' ')).toContain(
      'These settings were found, not given: everything in this document is computed at them, and not at the values of the run sheet.',
    );
    const { out } = await rillcheck('pump', 'chip.svg', '-f', 'none');
    const [, pressure, flow] = /\nin +(\S+ kPa) +(\S+ µL\/min)/.exec(out) ?? [];
    expect(texts).toContain('1 kPa');
    expect(texts).toContain(`${pressure}, or ${flow}`);
    const cases = await page1('cases: { one: {}, two: { ports: { in: { flow: 3 uL/min } } } }\n');
    expect(cases).toEqual(
      expect.arrayContaining(['Cases compared', 'in the run sheet', '1 kPa', '3 µL/min']),
    );
    await rillcheck('pump', 'chip.svg', '-f', 'svg', '-o', 'out');
    expect(readFileSync(join(folder, 'out/chip.pump.case-one.svg'), 'utf8')).toMatch(
      /<title>[^<]*at settings found, not given<\/title>[\s\S]*Computed at settings found, not given\.<\/text>/,
    );
    await rillcheck('check', 'chip.svg', '-f', 'pdf', '-o', 'out');
    const plain = await readPdf(new Uint8Array(readFileSync(join(folder, 'out/chip.pdf'))));
    expect(plain.pages.flatMap((page) => page.texts.map(({ text }) => text)).join(' ')).not.toContain(
      'found, not given',
    );
  });

  it('draws a page with targets, settings and a curve for each', async () => {
    put('chip.svg', CHIP);
    put(
      'chip.run.yaml',
      `${SHEET}channels: { lane: { wall_shear: { max: 0.8 Pa } } }\npump_limits: { in: { max_pressure: 20 kPa } }\n`,
    );
    const { code, err } = await rillcheck('pump', 'chip.svg', '-f', 'pdf', '-o', 'out');
    expect(err).toBe('');
    expect(code).toBe(0);
    const { pages } = await readPdf(new Uint8Array(readFileSync(join(folder, 'out/chip.pump.pdf'))));
    const page = pages.find(({ texts }) => texts.some(({ text }) => text === 'Pump settings'));
    const texts = page?.texts.map(({ text }) => text) ?? [];
    for (const text of [
      'Targets',
      'Settings',
      'Setting against target',
      'lane: wall shear (mean) by in',
      'window of lane',
      'wall shear, Pa',
    ])
      expect(texts).toContain(text);
    const [curve] = texts.filter((text) => text.startsWith('pressure at the pump'));
    expect(curve).toBe('pressure at the pump, kPa');
  });

  it('solves each case with its own targets, leaves a case without any as it stands, and compares them on a page', async () => {
    put('chip.svg', CHIP);
    put(
      'chip.run.yaml',
      `${SHEET}channels: { lane: { residence_time: { max: 60 s } } }\ncases:\n  grow:\n  seed: { ports: { in: { flow: 1 uL/min } }, targets: [{ channel: lane, residence_time: { min: 20 s, max: 40 s }, by: in }] }\n  rest: { targets: [] }\n`,
    );
    const { code, out, err } = await rillcheck('pump', 'chip.svg', '-f', 'pdf,json', '-o', 'out');
    expect(err).toBe('');
    expect(code).toBe(0);
    expect(out).toContain('pump settings, case grow');
    expect(out).toContain('residence time of lane keeps its window while in holds');
    const result = v.parse(
      resultSchema,
      JSON.parse(readFileSync(join(folder, 'out/chip.pump.json'), 'utf8')),
    );
    if (!('cases' in result)) throw new Error('no cases');
    expect(result.cases.map((one) => one.pump?.settings.length ?? null)).toEqual([1, 1, null]);
    const range = result.cases[1].pump?.settings[0].range;
    const setting = result.cases[1].pump?.settings[0];
    // the middle of the settings, so of the flows: 2 mm³ in 20 s and in 40 s
    expect(setting?.flow_m3_s).toBeCloseTo(
      ((range?.flow_min_m3_s ?? 0) + (range?.flow_max_m3_s ?? 0)) / 2,
      18,
    );
    const { pages } = await readPdf(new Uint8Array(readFileSync(join(folder, 'out/chip.pump.pdf'))));
    const texts = pages.flatMap((page) => page.texts.map(({ text }) => text));
    expect(pages[0].texts.map(({ text }) => text)).toContain('Cases compared');
    expect(texts).toContain('Pump settings, case seed');
    expect(texts).not.toContain('Pump settings, case rest');

    const one = await rillcheck('pump', 'chip.svg', '--case', 'seed', '--json', '--detail', 'ports');
    expect(JSON.parse(one.out).cases.map(({ case: name }: { case: string }) => name)).toEqual(['seed']);
    const wrong = await rillcheck('pump', 'chip.svg', '--case', 'sead');
    expect(wrong).toMatchObject({ code: 2, out: '' });
    expect(wrong.err).toContain('there is no case "sead"; did you mean "seed"?');
    const far = await rillcheck('pump', 'chip.svg', '--case', 'incubation');
    expect(far.err).toMatch(/there is no case "incubation"; its cases are \w/);
  });

  it('ends 2 with one line where there is nothing to find', async () => {
    put('chip.svg', CHIP);
    const none = await rillcheck('pump', 'chip.svg');
    expect(none).toMatchObject({ code: 2, out: '' });
    expect(none.err).toMatch(
      /^rillcheck: chip\.run\.yaml: there is no such run sheet; pump needs one with targets[^\n]*\n$/,
    );
    put('chip.run.yaml', 'depth: 100 um\n');
    expect((await rillcheck('pump', 'chip.svg')).err).toMatch(
      /^rillcheck: chip\.run\.yaml: targets: there are none/,
    );
    put('chip.run.yaml', SHEET.replace('by: in', 'by: inn'));
    const wrong = await rillcheck('pump', 'chip.svg');
    expect(wrong.code).toBe(2);
    expect(wrong.err).toMatch(/^rillcheck: chip\.run\.yaml:6: .*did you mean "in"\?\n$/);
    expect(readdirSync(folder).sort()).toEqual(['chip.run.yaml', 'chip.svg']);
  });

  it('runs the examples of its help', async () => {
    const help = await rillcheck('pump', '--help');
    expect(help.code).toBe(0);
    put('chip.svg', CHIP);
    put('chip.run.yaml', `${SHEET}cases: { culture: { temperature: 37 degC } }\n`);
    const examples = help.out.split('\n').filter((line) => line.startsWith('  rillcheck pump'));
    expect(examples.length).toBeGreaterThanOrEqual(3);
    for (const example of examples) {
      const words = example.trim().split(/ {2,}/)[0].split(' ').slice(1);
      expect((await rillcheck(...words)).code).toBe(0);
    }
  });

  it('is undone by a check: what it says, set by either kind of pump, gives the targets to 1e-9 on random networks with tubing', async () => {
    let met = 0;
    let refused = 0;
    await fc.assert(
      fc.asyncProperty(plan, async (chosen) => {
        const grid = gridOf(chosen);
        put('grid.svg', grid.svg);
        put('grid.run.yaml', sheetOf(chosen.ports.map(portText), ''));
        const before = JSON.parse(
          (await rillcheck('check', 'grid.svg', '--json', '--detail', 'reaches')).out,
        );
        const targets = targetsOf(chosen, grid, before);
        put('grid.run.yaml', sheetOf(chosen.ports.map(portText), targets.map(targetText).join('')));
        const pumped = await rillcheck('pump', 'grid.svg', '--json', '--detail', 'reaches');
        if (pumped.code === 2) {
          // two targets in one chain, or a target where nothing passes: refused, never half answered
          expect(pumped.err).toMatch(/depends on|does not feel|nothing can flow/);
          refused++;
          return;
        }
        const { pump } = JSON.parse(pumped.out);
        const ports = chosen.ports.map((port, i) => {
          const setting = pump.settings.find((candidate: { port: string }) => candidate.port === `p${i}`);
          if (setting === undefined) return portText(port);
          const drive = port.setByFlow
            ? `flow: ${setting.flow_m3_s} m^3/s`
            : `pressure: ${setting.supply_pressure_pa} Pa`;
          return `{ ${drive}${tubingText(port)} }`;
        });
        put('grid.run.yaml', sheetOf(ports, ''));
        const after = JSON.parse((await rillcheck('check', 'grid.svg', '--json', '--detail', 'reaches')).out);
        for (const [i, target] of targets.entries()) {
          const reached = valueIn(after, target);
          expect(Math.abs(reached / target.value - 1)).toBeLessThan(1e-9);
          expect(Math.abs(pump.targets[i].reached / target.value - 1)).toBeLessThan(1e-9);
        }
        met++;
      }),
      { seed: 20260504, numRuns: 60 },
    );
    expect(met).toBeGreaterThan(40);
    expect(met + refused).toBe(60);
  }, 120_000);
});

/* ---------- random networks ---------- */

interface PlannedPort {
  readonly kind: 'pressure' | 'flow' | 'head' | 'unset';
  readonly amount: number;
  readonly boreUm: number;
  readonly lengthMm: number;
  readonly setByFlow: boolean;
}

const plannedPort: fc.Arbitrary<PlannedPort> = fc.record({
  kind: fc.constantFrom('pressure', 'flow', 'head', 'unset'),
  amount: fc.integer({ min: 1, max: 40 }),
  boreUm: fc.integer({ min: 50, max: 500 }),
  lengthMm: fc.integer({ min: 0, max: 500 }),
  setByFlow: fc.boolean(),
});

const QUANTITIES = [
  'flow',
  'wall_shear mean',
  'wall_shear peak',
  'velocity',
  'residence_time',
  'port flow',
  'port pressure',
] as const;

const plan = fc.record({
  columns: fc.integer({ min: 2, max: 4 }),
  rows: fc.integer({ min: 2, max: 3 }),
  widthsUm: fc.array(fc.integer({ min: 60, max: 400 }), { minLength: 17, maxLength: 17 }),
  depthsUm: fc.array(fc.integer({ min: 20, max: 120 }), { minLength: 17, maxLength: 17 }),
  // the last port is open, so that there is always a way out
  ports: fc.array(plannedPort, { minLength: 3, maxLength: 3 }),
  targets: fc.uniqueArray(
    fc.record({
      by: fc.integer({ min: 0, max: 2 }),
      edge: fc.nat(16),
      quantity: fc.constantFrom(...QUANTITIES),
      factor: fc.double({ min: 0.3, max: 3, noNaN: true }),
    }),
    { minLength: 1, maxLength: 3, selector: ({ by }) => by },
  ),
});

type Plan = typeof plan extends fc.Arbitrary<infer T> ? T : never;

interface PlannedTarget {
  readonly on: 'channel' | 'port';
  readonly name: string;
  readonly quantity: string;
  readonly at: string | null;
  readonly value: number;
  readonly by: string;
}

function gridOf({ columns, rows, widthsUm, depthsUm }: Plan): Grid {
  return gridDrawing(
    columns,
    rows,
    (edge) => widthsUm[edge] / 1000,
    (edge) => depthsUm[edge],
  );
}

function tubingText({ boreUm, lengthMm }: PlannedPort): string {
  return lengthMm === 0 ? '' : `, tubing: { bore: ${boreUm} um, length: ${lengthMm} mm }`;
}

function portText(port: PlannedPort): string {
  const tubing = tubingText(port);
  switch (port.kind) {
    case 'pressure':
      return `{ pressure: ${port.amount * 100} Pa${tubing} }`;
    case 'flow':
      return `{ flow: ${port.amount} uL/min${tubing} }`;
    case 'head':
      return `{ head: ${port.amount} mm${tubing} }`;
    case 'unset':
      return `{ ${tubing.slice(2)} }`;
    default:
      return port.kind satisfies never;
  }
}

function sheetOf(ports: readonly string[], targets: string): string {
  const all = [...ports, 'open'].map((text, i) => `  p${i}: ${text}\n`).join('');
  return `ports:\n${all}${targets === '' ? '' : `targets:\n${targets}`}`;
}

interface Document {
  readonly reaches: readonly Record<string, number & string>[];
  readonly ports: readonly Record<string, number & string>[];
}

/** Targets near what the network does as written, so that they are of a usual size. */
function targetsOf({ targets }: Plan, { edges }: Grid, before: Document): PlannedTarget[] {
  return targets.map(({ by, edge, quantity, factor }): PlannedTarget => {
    const common = { by: `p${by}` };
    if (quantity === 'port flow' || quantity === 'port pressure') {
      const what = quantity === 'port flow' ? 'flow' : 'pressure';
      return {
        ...common,
        on: 'port',
        name: `p${by}`,
        quantity: what,
        at: null,
        value: factor * (what === 'flow' ? 1e-10 : 500),
      };
    }
    const [kind, at = null] = quantity.split(' ');
    const target = {
      ...common,
      on: 'channel' as const,
      name: edges[edge % edges.length].name,
      quantity: kind,
      at,
      value: 0,
    };
    const usual = Math.abs(valueIn(before, target));
    const fallback = { flow: 1e-10, wall_shear: 0.1, velocity: 1e-3, residence_time: 3 }[kind] ?? 1;
    const sane = usual > 1e-3 * fallback && usual < 1e3 * fallback;
    return { ...target, value: factor * (sane ? usual : fallback) };
  });
}

function valueIn({ reaches, ports }: Document, { on, name, quantity, at }: PlannedTarget): number {
  if (on === 'port') {
    const port = ports.find((candidate) => candidate.name === name);
    return (quantity === 'flow' ? port?.flow_m3_s : port?.pressure_pa) ?? Number.NaN;
  }
  const reach = reaches.find((candidate) => candidate.name === name);
  const key = {
    flow: 'flow_m3_s',
    wall_shear: `wall_shear_floor_${at}_pa`,
    velocity: 'mean_velocity_m_s',
    residence_time: 'residence_time_s',
  }[quantity];
  return reach?.[key ?? ''] ?? Number.NaN;
}

function targetText({ on, name, quantity, at, value, by }: PlannedTarget): string {
  const unit = { flow: 'm^3/s', wall_shear: 'Pa', velocity: 'm/s', residence_time: 's', pressure: 'Pa' }[
    quantity
  ];
  return `  - { ${on}: ${name}, ${quantity}: ${value} ${unit}${at === null ? '' : `, at: ${at}`}, by: ${by} }\n`;
}
