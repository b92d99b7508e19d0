import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import * as v from 'valibot';
import { afterEach, beforeEach, expect, test } from 'vitest';
import { run } from '../../src/cli.ts';
import { singleSchema } from '../../src/report/result-schema.ts';
import { fakeIo } from '../commands/fake-io.ts';
import { readPdf } from '../report/read-pdf.ts';
import { oneDuct } from './spread-of.ts';

let folder = '';
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'rillcheck-spread-'));
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="60mm" height="40mm" viewBox="0 0 60 40"><rect id="chip-edge" fill="none" stroke="#888" stroke-width="0.1" width="60" height="40"/>${oneDuct()}</svg>`;
  writeFileSync(join(folder, 'chip.svg'), svg);
  writeFileSync(join(folder, 'chip.run.yaml'), SHEET);
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

const SHEET = `fluid: water
depth: 50 um
ports: { feed: { pressure: 1 kPa }, waste: open }
channels: { lane: { wall_shear: { max: 1.28 Pa } } }
tolerances: { depth: 5 %, width: 4 um, temperature: 1 degC }
`;

test('the result on stdout is one JSON document of the published shape, with the spread in it', async () => {
  const io = fakeIo(folder);
  expect(await run(['spread', 'chip.svg', '--json', '--draws', '500'], io)).toBe(0);
  const result = v.parse(singleSchema, JSON.parse(io.stdout()));
  expect(result.spread).toMatchObject({ draws: 500, draws_asked: 500, seed: 1, draws_outside_model: 0 });
  const flow = result.spread?.outputs.find(({ name, quantity }) => name === 'waste' && quantity === 'flow');
  expect(flow?.unit).toBe('m³/s');
  expect(flow?.nominal).toBeLessThan(0);
  const sum = Object.values(flow?.shares ?? {}).reduce((total, share) => total + share, 0);
  expect(sum).toBeCloseTo(1, 12);
  expect(Object.keys(flow?.shares ?? {})).toEqual(['depth:lanes', 'width', 'temperature']);
  expect(result.spread?.yield).toBeGreaterThan(0.5);
  expect(result.spread?.worst_corner).toMatchObject({
    name: 'lane',
    quantity: 'wall_shear_floor_peak',
    kept: false,
  });
  expect(io.stderr()).toBe('');
});

test('the same inputs give the same bytes in every file, and another seed gives others', async () => {
  const write = async (out: string, seed: string) => {
    const args = ['spread', 'chip.svg', '-o', out, '-f', 'pdf,csv,json', '--draws', '300', '--seed', seed];
    await run([...args, '--samples', `${out}/draws.csv`, '--quiet'], fakeIo(folder));
    const names = readdirSync(join(folder, out)).sort();
    return { names, files: names.map((name) => readFileSync(join(folder, out, name)).toString('latin1')) };
  };
  const [first, second, other] = [await write('a', '1'), await write('b', '1'), await write('c', '2')];
  expect(first.names).toEqual([
    'chip.spread.csv',
    'chip.spread.json',
    'chip.spread.pdf',
    'chip.spread.reaches.csv',
    'chip.spread.segments.csv',
    'draws.csv',
  ]);
  expect(second.files).toEqual(first.files);
  expect(other.files[5]).not.toBe(first.files[5]);
  const draws = first.files[5].split('\r\n');
  expect(draws).toHaveLength(302);
  expect(draws[0]).toMatch(/^draw,good,flow of port feed/);
  expect(draws[300]).toMatch(/^299,[01],/);
  expect(first.files[0]).toMatch(/share depth:lanes,share width,share temperature\r\n/);
});

test('the PDF has pages on the spread: yield, tolerances, causes as a figure, a distribution for each number of a window', async () => {
  await run(['spread', 'chip.svg', '-f', 'pdf', '--draws', '400'], fakeIo(folder));
  const pdf = await readPdf(new Uint8Array(readFileSync(join(folder, 'reports/chip.spread.pdf'))));
  const page = pdf.pages.find(({ texts }) => texts.some(({ text }) => text === 'Spread'));
  const text = page?.texts.map((run) => run.text).join(' ') ?? '';
  expect(pdf.bookmarks).toContain('Spread');
  expect(text).toContain('All windows and limits hold in');
  expect(text).toContain('Which tolerance to pay for');
  expect(text).toContain('±4 µm (2σ)');
  expect(text).toMatch(/floor shear, peak, kept in \d/);
});

test('the terminal says the yield, the tolerances, the worst corner and every number that moves, in 100 columns', async () => {
  const io = fakeIo(folder);
  await run(['spread', 'chip.svg', '-f', 'none', '--draws', '200'], io);
  const text = io.stdout();
  expect(text).toContain('spread: 200 draws, seed 1');
  expect(text).toContain('tolerances: depth:lanes ±5 % (2σ); width ±4 µm (2σ); temperature ±1 K (2σ)');
  expect(text).toMatch(/all windows and limits hold in \d+(\.\d+)? % of the draws/);
  expect(text).toMatch(/lane +floor shear, peak/);
  for (const line of text.split('\n')) expect(line.length).toBeLessThanOrEqual(100);
});

test('without tolerances there is nothing to do: exit 2, and what to write', async () => {
  const refused = async (sheet: string | null) => {
    if (sheet === null) rmSync(join(folder, 'chip.run.yaml'));
    else writeFileSync(join(folder, 'chip.run.yaml'), sheet);
    const io = fakeIo(folder);
    expect(await run(['spread', 'chip.svg'], io)).toBe(2);
    expect(readdirSync(folder)).not.toContain('reports');
    return io.stderr();
  };
  expect(await refused(SHEET.replace(/tolerances.*\n/, ''))).toBe(
    'rillcheck: chip.run.yaml: tolerances: there are none; write for example "tolerances: { depth: 5 %, width: 2 um, temperature: 1 degC }"\n',
  );
  expect(await refused(SHEET.replace(/tolerances.*\n/, 'tolerances: { bore: 5 % }\n'))).toContain(
    'chip.run.yaml:5: tolerances: nothing in them moves anything on this chip (bore: no port has tubing); write for',
  );
  expect(await refused(null)).toContain('there is no such run sheet; spread needs one with tolerances');
});

test('draws and seed are whole numbers, and the message says which', async () => {
  for (const [option, value] of [
    ['--draws', 'many'],
    ['--draws', '1'],
    ['--draws', '1e9'],
    ['--seed', '-1'],
    ['--seed', '0.5'],
  ]) {
    const io = fakeIo(folder);
    expect(await run(['spread', 'chip.svg', `${option}=${value}`], io)).toBe(2);
    expect(io.stderr()).toContain(`${option}: "${value}" is not a whole number`);
  }
});

test('Ctrl-C while drawing reports what was drawn, says so everywhere, and exits 130', async () => {
  let calls = 0;
  // the stages of the check pass; the next question comes from the drawing
  const io = fakeIo(folder, { isInterrupted: () => ++calls > 5 });
  expect(await run(['spread', 'chip.svg', '-f', 'json,pdf', '--draws', '1000000'], io)).toBe(130);
  const result = v.parse(
    singleSchema,
    JSON.parse(readFileSync(join(folder, 'reports/chip.spread.json'), 'utf8')),
  );
  const { draws, draws_asked } = result.spread ?? { draws: 0, draws_asked: 0 };
  expect(draws_asked).toBe(1_000_000);
  expect(draws).toBeLessThan(1_000_000);
  expect(io.stderr()).toContain('stopped before the end');
  expect(io.stdout()).toContain(`${draws} of 1000000 draws were made`);
  const pdf = await readPdf(new Uint8Array(readFileSync(join(folder, 'reports/chip.spread.pdf'))));
  const text = pdf.pages.flatMap(({ texts }) => texts.map((run) => run.text)).join(' ');
  expect(text).toContain(`Stopped before its end: ${draws} of 1000000 draws were made.`);
});

test('each case has a spread of its own', async () => {
  writeFileSync(
    join(folder, 'chip.run.yaml'),
    `${SHEET}cases: { slow: { ports: { feed: { pressure: 100 Pa } } }, fast: { ports: { feed: { flow: 3 uL/min } } } }\n`,
  );
  const io = fakeIo(folder);
  await run(['spread', 'chip.svg', '-f', 'csv', '--draws', '100', '--samples', 'draws.csv', '--json'], io);
  const { cases } = JSON.parse(io.stdout());
  expect(
    cases.map((one: { case: string; spread: { yield: number } }) => [one.case, one.spread.yield]),
  ).toEqual([
    ['slow', 1],
    ['fast', expect.any(Number)],
  ]);
  expect(readdirSync(folder)).toEqual(expect.arrayContaining(['draws.case-slow.csv', 'draws.case-fast.csv']));
  expect(readdirSync(join(folder, 'reports'))).toEqual(
    expect.arrayContaining(['chip.spread.case-slow.csv', 'chip.spread.case-fast.csv']),
  );
});

test('names from the drawing stay text in the CSV of draws', async () => {
  const svg = readFileSync(join(folder, 'chip.svg'), 'utf8').replace('id="feed"', 'data-name="=1+1"');
  writeFileSync(join(folder, 'chip.svg'), svg);
  writeFileSync(join(folder, 'chip.run.yaml'), SHEET.replace('feed:', '"=1+1":'));
  await run(
    ['spread', 'chip.svg', '-f', 'csv', '--draws', '10', '--samples', 'draws.csv', '-q'],
    fakeIo(folder),
  );
  const cells = [
    ...readFileSync(join(folder, 'draws.csv'), 'utf8').split(/[,\r\n]/),
    ...readFileSync(join(folder, 'reports/chip.spread.csv'), 'utf8').split(/[,\r\n]/),
  ];
  for (const cell of cells) expect(cell).not.toMatch(/^"?=/);
});
