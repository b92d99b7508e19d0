// Builds dist/: one bundle split by what each command needs, declarations, the fonts and the JSON Schemas.
import { copyFileSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { build } from 'esbuild';
import { writePublishedTypes } from './published-types.mjs';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const dist = join(root, 'dist');
rmSync(dist, { recursive: true, force: true });

const { metafile } = await build({
  absWorkingDir: root,
  entryPoints: { bin: 'src/bin.ts', index: 'src/index.ts', schemas: 'src/schemas.ts' },
  bundle: true,
  splitting: true,
  format: 'esm',
  platform: 'node',
  target: 'node20',
  outdir: 'dist',
  metafile: true,
  minifySyntax: true,
  minifyWhitespace: true,
  legalComments: 'none',
  alias: { 'brotli/decompress.js': './.config/no-woff2.mjs' },
  // Some packages are CommonJS and ask for require and __dirname.
  banner: {
    js: "import{createRequire as __createRequire}from'node:module';import{fileURLToPath as __toPath}from'node:url';import{dirname as __dirnameOf}from'node:path';const require=__createRequire(import.meta.url),__filename=__toPath(import.meta.url),__dirname=__dirnameOf(__filename);",
  },
});

mkdirSync(join(dist, 'fonts'));
for (const name of ['DejaVuSans.ttf', 'DejaVuSans-Bold.ttf']) {
  copyFileSync(join(root, 'node_modules/dejavu-fonts-ttf/ttf', name), join(dist, 'fonts', name));
}
copyFileSync(join(root, 'node_modules/dejavu-fonts-ttf/LICENSE'), join(dist, 'fonts/LICENSE'));

const { resultJsonSchema, runSheetJsonSchema } = await import(pathToFileURL(join(dist, 'schemas.js')).href);
writeFileSync(join(dist, 'run-sheet.schema.json'), `${JSON.stringify(runSheetJsonSchema(), null, 2)}\n`);
writeFileSync(join(dist, 'result.schema.json'), `${JSON.stringify(resultJsonSchema(), null, 2)}\n`);
rmSync(join(dist, 'schemas.js'));
writeLicences(metafile);
writePublishedTypes(root, join(dist, 'types'));

/** The licences of every package whose code is in the bundle travel with it. */
function writeLicences({ inputs }) {
  const packages = new Set();
  for (const file of Object.keys(inputs)) {
    const match = /^node_modules\/((?:@[^/]+\/)?[^/]+)\//.exec(file);
    if (match) packages.add(match[1]);
  }
  const parts = ['Packages bundled into this program, with their licences.\n'];
  for (const name of [...packages].sort()) {
    const folder = join(root, 'node_modules', name);
    const { version, license } = JSON.parse(readFileSync(join(folder, 'package.json'), 'utf8'));
    parts.push(`\n=== ${name} ${version} (${license})\n\n${licenceText(folder)}\n`);
  }
  writeFileSync(join(dist, 'THIRD-PARTY-LICENCES.txt'), parts.join(''));
}

function licenceText(folder) {
  for (const name of [
    'LICENSE',
    'LICENSE.md',
    'LICENSE.txt',
    'LICENCE',
    'LICENCE.md',
    'license',
    'License.txt',
    'LICENSE-MIT',
    'LICENSE.mit',
  ]) {
    try {
      return readFileSync(join(folder, name), 'utf8').trim();
    } catch (error) {
      if (error.code !== 'ENOENT') throw error;
    }
  }
  return '(the package names its licence only in its package.json)';
}
