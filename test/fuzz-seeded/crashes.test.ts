/** What fuzzing once broke the program with, each a folder of fixtures/. */
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { faultsOf, runOn } from '../hostile/run-on.ts';

const FIXTURES = join(import.meta.dirname, 'fixtures');

it.each(readdirSync(FIXTURES).sort())(
  '%s',
  async (name) => {
    const read = (file: string): string => readFileSync(join(FIXTURES, name, file), 'utf8');
    const files = { 'chip.svg': read('chip.svg'), 'chip.run.yaml': read('chip.run.yaml') };
    const argv: unknown = JSON.parse(read('argv.json'));
    if (!Array.isArray(argv)) throw new Error('argv.json holds a list of words');
    const words = argv.map(String);
    expect(faultsOf(await runOn(files, words), words)).toEqual([]);
  },
  60_000,
);
