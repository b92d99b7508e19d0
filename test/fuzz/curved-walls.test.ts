/** RILLCHECK_FUZZ_RUNS sets how many drawings, RILLCHECK_FUZZ_SEED where they start. */
import { expect, it } from 'vitest';
import { ARRANGEMENTS, drawing, EXACT_MM, LIMIT_MM, seeded, walls } from '../findings/curved-drawings.ts';

const RUNS = Number(process.env.RILLCHECK_FUZZ_RUNS ?? 4_000);
const SEED = Number(process.env.RILLCHECK_FUZZ_SEED ?? Date.now() % 2 ** 31);

it(`${RUNS} walls beside arcs from seed ${SEED} are measured within 0.1 µm and judged so`, () => {
  const arrangements = Object.entries(ARRANGEMENTS);
  let worst = 0;
  for (let k = 0; k < RUNS; k++) {
    const random = seeded(1 + ((SEED + 7919 * k) % 2147483646));
    for (let skip = 0; skip < 5; skip++) random();
    const [name, arrangement] = arrangements[k % arrangements.length];
    const radius = 100 ** random();
    const gap = -0.02 + 0.14 * random();
    const svg = drawing(arrangement, random, radius, gap);
    const found = walls(svg);
    const what = `${name}: run ${k}, radius ${radius} mm, wall ${gap} mm\n${svg}`;
    const isClear = gap > LIMIT_MM - EXACT_MM;
    if (found.length === 0 && isClear) continue;
    expect(
      found.map(({ rule }) => rule),
      what,
    ).toEqual([
      expect.stringMatching(Math.abs(gap) < EXACT_MM ? /wall/ : gap > 0 ? /^thin-wall$/ : /^merged-walls$/),
    ]);
    const off = Math.abs((found[0].measured ?? Number.NaN) * 1e3 - gap);
    expect(off, what).toBeLessThan(EXACT_MM);
    expect(gap, what).toBeLessThan(LIMIT_MM);
    worst = Math.max(worst, off);
  }
  console.log(`worst: ${(worst * 1e3).toFixed(4)} µm`);
});
