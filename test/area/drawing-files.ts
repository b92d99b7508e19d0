import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { InputError } from '../../src/errors.ts';
import { type Checked, checkedOf } from './checked.ts';

const ROOT = new URL('../..', import.meta.url).pathname;

/** Every drawing of this repository that has a run sheet of its own or none: fixtures, corpus, demos. Paths from the root. */
export function drawingFiles(): readonly string[] {
  return ['test/findings/fixtures', 'test/corpus/fixtures', 'layouts-demo'].flatMap((folder) =>
    readdirSync(join(ROOT, folder), { recursive: true, encoding: 'utf8' })
      .filter((file) => file.endsWith('.svg'))
      .sort()
      .map((file) => join(folder, file)),
  );
}

/** A drawing checked with the run sheet beside it; null when it is there to be refused. */
export function checkedFile(file: string): Checked | null {
  const path = join(ROOT, file);
  const sheet = path.replace(/\.svg$/, '.run.yaml');
  try {
    return checkedOf(
      readFileSync(path, 'utf8'),
      existsSync(sheet) ? readFileSync(sheet, 'utf8') : null,
      file,
    );
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}
