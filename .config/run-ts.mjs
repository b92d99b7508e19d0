// Runs a TypeScript program of this repository: node .config/run-ts.mjs test/bench/main.ts [arguments]
import { mkdtempSync, rmSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { build } from 'esbuild';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const folder = mkdtempSync(join(root, 'node_modules/.run-ts-'));
try {
  const outfile = join(folder, 'program.mjs');
  await build({
    entryPoints: [resolve(process.argv[2])],
    bundle: true,
    format: 'esm',
    platform: 'node',
    target: 'node20',
    packages: 'external',
    define: { 'import.meta.dirname': JSON.stringify(dirname(resolve(process.argv[2]))) },
    outfile,
  });
  process.argv.splice(1, 2, outfile);
  const { main } = await import(pathToFileURL(outfile).href);
  await main(process.argv.slice(2));
} finally {
  rmSync(folder, { recursive: true, force: true });
}
