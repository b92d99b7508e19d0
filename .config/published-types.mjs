// Writes dist/types/: the declarations that the public API reaches, and no others.
import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join, relative } from 'node:path';

/**
 * Declares everything, then takes what src/index.ts leads to. They name each other by what stands beside them when installed
 * (`./x.js`), and may name no package: everything is bundled, so a user has none of them.
 */
export function writePublishedTypes(root, out) {
  const all = mkdtempSync(join(root, 'node_modules/.types-'));
  try {
    const project = join(root, '.config/tsconfig.types.json');
    execFileSync(process.execPath, [typescript(), '--project', project, '--outDir', all], {
      cwd: root,
      stdio: 'inherit',
    });
    const reached = new Set([join(all, 'index.d.ts')]);
    for (const file of reached) {
      const text = readFileSync(file, 'utf8');
      for (const [, name] of text.matchAll(SPECIFIER)) {
        if (!name.startsWith('.')) {
          throw new Error(
            `${relative(all, file)} names the package ${name}: give what is exported a type of our own`,
          );
        }
        reached.add(join(dirname(file), name.replace(/\.ts$/, '.d.ts')));
      }
      const place = join(out, relative(all, file));
      mkdirSync(dirname(place), { recursive: true });
      writeFileSync(
        place,
        text.replace(SPECIFIER, (found) => found.replace(/\.ts(['"])$/, '.js$1')),
      );
    }
  } finally {
    rmSync(all, { recursive: true, force: true });
  }
}

/** What a declaration names: `from './x.ts'`, `import './x.ts'`, `import('./x.ts')`, `<reference types="x" />`. */
const SPECIFIER = /(?:\bfrom|\bimport|\bimport\(|<reference types=)\s*['"]([^'"]+)['"]/g;

function typescript() {
  const require = createRequire(import.meta.url);
  const folder = dirname(require.resolve('typescript/package.json'));
  const { bin } = JSON.parse(readFileSync(join(folder, 'package.json'), 'utf8'));
  return join(folder, bin.tsc);
}
