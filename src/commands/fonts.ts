import { existsSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

/** The embedded font, read from beside the bundle (dist/fonts), or from the package when run from source. */
export async function readFonts(): Promise<{ readonly regular: Uint8Array; readonly bold: Uint8Array }> {
  const here = dirname(fileURLToPath(import.meta.url));
  const bundled = join(here, 'fonts');
  const folder = existsSync(bundled) ? bundled : join(here, '../../node_modules/dejavu-fonts-ttf/ttf');
  const [regular, bold] = await Promise.all([
    readFile(join(folder, 'DejaVuSans.ttf')),
    readFile(join(folder, 'DejaVuSans-Bold.ttf')),
  ]);
  return { regular, bold };
}
