import { mkdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { faultsOf, runOn } from '../hostile/run-on.ts';
import { type FuzzCase, fuzzCase } from './cases.ts';

/**
 * Runs the program on so many cases from a seed; fails with the smallest case that has a fault, whose files are left in a
 * temporary folder named in the message.
 * @returns how many runs ended with each exit code.
 */
export async function fuzz(runs: number, seed: number): Promise<ReadonlyMap<number, number>> {
  const codes = new Map<number, number>();
  await fc.assert(
    fc.asyncProperty(fuzzCase, async (one) => {
      const ran = await runOn(one.files, one.argv);
      codes.set(ran.code, (codes.get(ran.code) ?? 0) + 1);
      const faults = faultsOf(ran, one.argv);
      if (faults.length > 0) throw new Error(`${faults.join('; ')}; its files are in ${keep(one, seed)}`);
    }),
    { numRuns: runs, seed },
  );
  return codes;
}

/** While fast-check looks for a smaller case, each that fails too is smaller than the one before: the last stays. */
function keep({ files, argv }: FuzzCase, seed: number): string {
  const folder = join(tmpdir(), `rillcheck-fuzz-${seed}`);
  rmSync(folder, { recursive: true, force: true });
  mkdirSync(folder);
  for (const [name, content] of Object.entries(files)) writeFileSync(join(folder, name), content);
  writeFileSync(join(folder, 'argv.json'), `${JSON.stringify(argv)}\n`);
  return folder;
}
