import { readdirSync, readFileSync } from 'node:fs';
import { it } from 'vitest';
import { faultsOf, runOn } from '../hostile/run-on.ts';
it('one', async () => {
  for (const d of process.env.D!.split(' ')) {
    const files = Object.fromEntries(readdirSync(d).filter((n) => n.startsWith('chip')).map((n) => [n, readFileSync(`${d}/${n}`)]));
    const argv = JSON.parse(readFileSync(`${d}/argv.json`, 'utf8'));
    const ran = await runOn(files, argv, { env: { DEBUG: 'rillcheck' } });
    console.log(d, argv.join(' '), ran.code, ran.seconds, faultsOf(ran, argv), ran.err.slice(0, 1500));
  }
});
