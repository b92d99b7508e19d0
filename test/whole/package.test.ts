import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import * as api from '../../src/index.ts';
import { VERSION } from '../../src/version.ts';

const root = new URL('../..', import.meta.url).pathname;
const packageJson = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8'));

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
});
