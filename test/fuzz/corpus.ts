import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';

export interface Seed {
  readonly svg: Buffer;
  /** Its own run sheet, or one that fits many. */
  readonly sheet: Buffer;
}

const ROOT = join(import.meta.dirname, '../..');

const ANY_SHEET = Buffer.from('fluid: water\ndepth: 50 um\ntolerances: { depth: 5 % }\n');

/** Every drawing of the repository that is small, with its run sheet. */
export function readSeeds(): readonly Seed[] {
  const folders = ['test/corpus/fixtures', 'test/findings/fixtures', 'layouts-demo'];
  return folders.flatMap((folder) =>
    readdirSync(join(ROOT, folder), { recursive: true, encoding: 'utf8' })
      .filter((name) => name.endsWith('.svg'))
      .sort()
      .map((name): Seed => {
        const path = join(ROOT, folder, name);
        const sheet = path.replace(/\.svg$/, '.run.yaml');
        return { svg: readFileSync(path), sheet: existsSync(sheet) ? readFileSync(sheet) : ANY_SHEET };
      })
      .filter(({ svg }) => svg.length < 20_000),
  );
}
