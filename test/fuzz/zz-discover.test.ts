import { appendFileSync, mkdirSync, writeFileSync } from 'node:fs';
import fc from 'fast-check';
import { it } from 'vitest';
import { faultsOf, runOn } from '../hostile/run-on.ts';
import { fuzzCase } from './cases.ts';

const N = Number(process.env.N ?? 2000),
  S = Number(process.env.S ?? 1);
it('discover', async () => {
  const groups = new Map<string, number>();
  const codes = new Map<number, number>();
  const slow: [number, string][] = [];
  let k = 0;
  for (const c of fc.sample(fuzzCase, { numRuns: N, seed: S })) {
    k++;
    const ran = await runOn(c.files, c.argv, { env: { DEBUG: 'rillcheck' } });
    codes.set(ran.code, (codes.get(ran.code) ?? 0) + 1);
    if (ran.seconds > 2) {
      slow.push([ran.seconds, `${S}/${k} ${c.argv.join(' ')}`]);
    }
    const f = faultsOf(ran, c.argv).filter(
      (x) => (x !== 'a stack trace' && !/several lines/.test(x)) || ran.code !== 70,
    );
    for (const x of f) {
      const key = (
        ran.code === 70 ? ran.err.replace(/[\d.e+-]+/g, '#').slice(0, 900) : x.replace(/[\d.e+-]+/g, '#')
      ).slice(0, 900);
      if (!groups.has(key) || groups.get(key)! < 2) {
        const d = `/tmp/fz/${S}-${k}`;
        mkdirSync(d, { recursive: true });
        for (const [n, b] of Object.entries(c.files)) writeFileSync(`${d}/${n}`, b);
        writeFileSync(`${d}/argv`, JSON.stringify(c.argv));
        writeFileSync(`${d}/fault`, f.join('\n') + '\n' + ran.err);
        if (!groups.has(key))
          appendFileSync(
            '/tmp/fz/summary',
            `\n=== ${d} ${c.argv.join(' ')}\n${f.join('\n').slice(0, 300)}\n${ran.err.slice(0, 1200)}\n`,
          );
      }
      groups.set(key, (groups.get(key) ?? 0) + 1);
    }
  }
  writeFileSync(
    `/tmp/fz/result-${S}`,
    JSON.stringify({ codes: [...codes], groups: [...groups], slow }, null, 1),
  );
});
