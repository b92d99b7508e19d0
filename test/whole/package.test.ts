import { spawnSync } from 'node:child_process';
import { cpSync, existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import * as api from '../../src/index.ts';
import { VERSION } from '../../src/version.ts';

const root = new URL('../..', import.meta.url).pathname;
const packageJson = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8'));

const consumer = readFileSync(join(root, 'test/whole/consumer/main.ts'), 'utf8');

/** Exports as src/index.ts lists them, one by one, sorted by name. */
const exported = [
  ...readFileSync(join(root, 'src/index.ts'), 'utf8').matchAll(/^export (type )?\{([^}]+)\}/gm),
]
  .flatMap(([, isAllTypes, names]) =>
    names
      .split(',')
      .map((name) => name.trim())
      .filter((name) => name !== '')
      .map((name) => ({
        name: name.replace(/^type /, ''),
        isType: isAllTypes !== undefined || name.startsWith('type '),
      })),
  )
  .sort((a, b) => (a.name < b.name ? -1 : 1));

describe('the package', () => {
  it('has one version', () => {
    expect(VERSION).toBe(packageJson.version);
  });

  it('asks for no package at run time: everything is bundled', () => {
    expect(packageJson.dependencies).toBeUndefined();
  });

  it('records no registry address in the lock file', () => {
    expect(readFileSync(join(root, 'package-lock.json'), 'utf8')).not.toContain('"resolved"');
  });

  it('exports these functions and no others', () => {
    expect(Object.keys(api).sort()).toMatchSnapshot();
    const functions = exported.filter(({ isType }) => !isType).map(({ name }) => name);
    expect(functions).toEqual(Object.keys(api).sort());
  });

  it('exports these types and no others', () => {
    expect(exported.filter(({ isType }) => isType).map(({ name }) => name)).toMatchSnapshot();
  });

  it('has every export used by the program that is compiled against it', () => {
    const unused = exported.filter(({ name }) => !new RegExp(`\\brillcheck\\.${name}\\b`).test(consumer));
    expect(unused).toEqual([]);
  });
});

describe.skipIf(!existsSync(join(root, 'dist/bin.js')))('the packed tarball (skipped without dist/)', () => {
  let folder: string;
  let files: string[];

  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'rillcheck-pack-'));
    const packed = spawnSync('npm', ['pack', '--ignore-scripts', '--json', '--pack-destination', folder], {
      cwd: root,
      encoding: 'utf8',
    });
    expect(packed.status, packed.stderr).toBe(0);
    files = JSON.parse(packed.stdout)[0].files.map(({ path }: { path: string }) => path);
    writeFileSync(join(folder, 'package.json'), '{ "private": true }');
    const installed = spawnSync(
      'npm',
      ['install', '--offline', '--no-audit', '--no-fund', `./rillcheck-${VERSION}.tgz`],
      {
        cwd: folder,
        encoding: 'utf8',
      },
    );
    expect(installed.status, installed.stderr).toBe(0);
  }, 120_000);

  afterAll(() => {
    rmSync(folder, { recursive: true, force: true });
  });

  it('holds the bundle, declarations, schemas, fonts and licences, and nothing else', () => {
    const named = files.map((file) => file.replace(/^(dist\/)[\w-]+-[A-Z0-9]{8}\.js$/, '$1part.js'));
    const kinds = new Set(named.map((file) => file.replace(/^dist\/types\/.*\.d\.ts$/, 'dist/types/*.d.ts')));
    expect([...kinds].sort()).toEqual([
      'LICENSE',
      'README.md',
      'dist/THIRD-PARTY-LICENCES.txt',
      'dist/bin.js',
      'dist/fonts/DejaVuSans-Bold.ttf',
      'dist/fonts/DejaVuSans.ttf',
      'dist/fonts/LICENSE',
      'dist/index.js',
      'dist/part.js',
      'dist/result.schema.json',
      'dist/run-sheet.schema.json',
      'dist/types/*.d.ts',
      'package.json',
    ]);
  });

  it('installs into an empty folder without a registry and checks a layout', () => {
    for (const name of ['chamber.svg', 'chamber.run.yaml']) {
      writeFileSync(join(folder, name), readFileSync(join(root, 'layouts-demo', name)));
    }
    const bin = join(folder, 'node_modules/.bin/rillcheck');
    const { status, stdout, stderr } = spawnSync(bin, ['check', 'chamber.svg'], {
      cwd: folder,
      encoding: 'utf8',
    });
    expect(stderr).toBe('');
    expect(stdout).toMatch(/^chamber\.svg {2}ready/);
    expect(status).toBe(0);
    expect(existsSync(join(folder, 'reports/chamber.pdf'))).toBe(true);
    expect(existsSync(join(folder, 'reports/chamber.svg'))).toBe(true);
  }, 60_000);

  it('can be imported, with its schemas', () => {
    const program = `import { ductForm } from 'rillcheck'; import schema from 'rillcheck/run-sheet.schema.json' with { type: 'json' }; console.log(ductForm(1e-4, 1e-4).resistance * 1e-16, Object.keys(schema.properties).length > 20)`;
    const { stdout, stderr } = spawnSync(process.execPath, ['--input-type=module', '-e', program], {
      cwd: folder,
      encoding: 'utf8',
    });
    // Exact constant of the square duct, R h⁴/(µL) = 28.4541537695623 (computed from the series to many digits).
    expect(stdout, stderr).toMatch(/^28\.45415376956\d* true/);
  });

  it('compiles into a strict program that skips no declaration, and names no package that is not there', () => {
    // the user has no types but these: none of Node's, none of the packages bundled
    const compilerOptions = {
      target: 'ES2022',
      lib: ['ES2023'],
      types: [],
      module: 'NodeNext',
      strict: true,
      exactOptionalPropertyTypes: true,
      skipLibCheck: false,
      noEmitOnError: true,
      outDir: 'consumer',
    };
    cpSync(join(root, 'test/whole/consumer/main.ts'), join(folder, 'main.ts'));
    writeFileSync(join(folder, 'tsconfig.json'), JSON.stringify({ compilerOptions, files: ['main.ts'] }));
    writeFileSync(join(folder, 'package.json'), '{ "private": true, "type": "module" }');
    const compiled = node(folder, typescript(), '-p', '.');
    expect(compiled.stdout).toBe('');
    expect(compiled.status, compiled.stderr).toBe(0);

    const layout = join(root, 'layouts-demo/culture');
    const program = `
      import { readFileSync } from 'node:fs';
      import { useAll, whereOf } from './consumer/main.js';
      console.log(await useAll(readFileSync('${layout}.svg', 'utf8'), readFileSync('${layout}.run.yaml', 'utf8')));
      await useAll('<svg', '').catch((error) => console.log(whereOf(error)));`;
    const { stdout, stderr } = node(folder, '--input-type=module', '-e', program);
    expect(stderr).toBe('');
    expect(stdout).toMatch(
      /^chip\.svg {2}ready.*\n18 channels, 3 stages, 16 draws\nall written\nchip\.svg:1\n$/,
    );
  }, 60_000);

  it('runs the example of the README', () => {
    const readme = readFileSync(join(root, 'README.md'), 'utf8');
    const [, program, output] = /```js\n([\s\S]*?)```\n\n```text\n([\s\S]*?)```/.exec(readme) ?? [];
    cpSync(join(root, 'layouts-demo'), join(folder, 'layouts-demo'), { recursive: true });
    writeFileSync(join(folder, 'example.mjs'), program);
    const { stdout, stderr } = node(folder, 'example.mjs');
    expect(stderr).toBe('');
    expect(stdout).toBe(output);
  });

  it('loads no command line when it is imported', () => {
    const ofLibrary = loaded(folder, "import 'rillcheck'");
    const ofCommandLine = loaded(folder, "import './node_modules/rillcheck/dist/bin.js'");
    // what commander calls its errors
    const holding = (files: ReadonlyMap<string, string>) =>
      [...files].filter(([, text]) => text.includes('commander.')).map(([file]) => file);
    expect(holding(ofCommandLine)).toHaveLength(1);
    expect([...ofLibrary.keys()]).toContain('index.js');
    expect(holding(ofLibrary)).toEqual([]);
  });
});

function node(cwd: string, ...args: string[]) {
  return spawnSync(process.execPath, args, { cwd, encoding: 'utf8' });
}

function typescript(): string {
  const require = createRequire(import.meta.url);
  const file = require.resolve('typescript/package.json');
  return join(dirname(file), JSON.parse(readFileSync(file, 'utf8')).bin.tsc);
}

/** The files of dist/ that a program really loads, by a hook on Node's loader, with their texts. */
function loaded(folder: string, program: string): ReadonlyMap<string, string> {
  const hook = `export async function load(url, context, next) { console.error("loaded " + url); return next(url, context); }`;
  const url = `data:text/javascript,${encodeURIComponent(hook)}`;
  writeFileSync(join(folder, 'hook.mjs'), `import { register } from 'node:module'; register('${url}');`);
  writeFileSync(join(folder, 'loads.mjs'), program);
  const { stderr, status } = node(folder, '--import', './hook.mjs', 'loads.mjs', '--version');
  expect(status, stderr).toBe(0);
  const paths = [...stderr.matchAll(/^loaded file:\/\/(.*\/rillcheck\/dist\/(.*))$/gm)];
  return new Map(paths.map(([, path, name]) => [name, readFileSync(path, 'utf8')]));
}
