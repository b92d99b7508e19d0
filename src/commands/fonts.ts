import { existsSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Fonts } from '../report/pdf/options.ts';

/** The embedded font, read from beside the bundle (dist/fonts), or from the package when run from source. */
export async function readFonts(): Promise<Fonts> {
  const here = dirname(fileURLToPath(import.meta.url));
  const bundled = join(here, 'fonts');
  const folder = existsSync(bundled) ? bundled : join(here, '../../node_modules/dejavu-fonts-ttf/ttf');
  const [regular, bold] = await Promise.all([
    readFile(join(folder, 'DejaVuSans.ttf')),
    readFile(join(folder, 'DejaVuSans-Bold.ttf')),
  ]);
  return { regular, bold };
}
