import { existsSync } from 'node:fs';
import { cp, mkdir, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { basename, join, relative, resolve } from 'node:path';
import { run } from '../../src/cli.ts';
import { fakeIo } from '../commands/fake-io.ts';

const ROOT = join(import.meta.dirname, '../..');

/**
 * `npm run outputs -- FOLDER`: everything that the commands write about every demo and every drawing of the tests (files,
 * terminal, exit code), into a new folder. Made before and after a change, `diff -r` of the two folders says what it changed.
 */
export async function main([folder]: readonly string[]): Promise<void> {
  if (folder === undefined || existsSync(folder)) throw new Error('name a folder that does not exist yet');
  const out = resolve(folder);
  let done = 0;
  for (const svg of await drawings()) {
    const place = join(
      out,
      relative(ROOT, svg)
        .replace(/[/\\]/g, '_')
        .replace(/\.svg$/, ''),
    );
    await writeOutputs(svg, place);
    done++;
    if (done % 25 === 0) process.stderr.write(`${done} drawings\n`);
  }
  process.stderr.write(`${done} drawings in ${out}\n`);
}

async function drawings(): Promise<readonly string[]> {
  const found: string[] = [];
  for (const folder of ['layouts-demo', 'test']) {
    for (const entry of await readdir(join(ROOT, folder), { recursive: true })) {
      if (entry.endsWith('.svg')) found.push(join(ROOT, folder, entry));
    }
  }
  return found.sort();
}

/** The commands see only this drawing, in a folder that is named alike in every checkout. */
async function writeOutputs(svg: string, place: string): Promise<void> {
  await mkdir(place, { recursive: true });
  const sheet = svg.replace(/\.svg$/, '.run.yaml');
  const hasSheet = existsSync(sheet);
  for (const file of [svg, ...(hasSheet ? [sheet] : [])]) await cp(file, join(place, basename(file)));
  const name = basename(svg);
  const log: string[] = [];
  for (const argv of commandsFor(name, hasSheet ? await readFile(sheet, 'utf8') : null)) {
    const io = fakeIo(place);
    const code = await run(argv, io);
    log.push(`$ rillcheck ${argv.join(' ')}\n${io.stdout()}${io.stderr()}exit ${code}\n\n`);
  }
  await writeFile(join(place, 'terminal.txt'), log.join(''));
  for (const file of [name, basename(sheet)]) await rm(join(place, file), { force: true });
}

function commandsFor(svg: string, sheet: string | null): readonly (readonly string[])[] {
  const all = ['--formats', 'pdf,svg,csv,json'];
  return [
    ['check', svg, '--out', 'check', ...all],
    ['check', svg, '--out', 'flow', '--formats', 'svg', '--colour', 'flow', '--quiet'],
    ['check', svg, '--json', '--detail', 'ports'],
    ['draft', svg, '--run', '-'],
    ...(sheet !== null && /^targets:/m.test(sheet) ? [['pump', svg, '--out', 'pump', ...all]] : []),
    ...(sheet !== null && /tolerances:/.test(sheet)
      ? [['spread', svg, '--out', 'spread', '--draws', '200', '--samples', 'samples.csv', ...all]]
      : []),
  ];
}
