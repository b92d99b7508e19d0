import { realpath, stat } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { InputError } from '../errors.ts';
import type { InputFile } from './read-files.ts';

/** Where a file is to be written. */
export interface OutPlace {
  /** With its folder, from the root. */
  readonly path: string;
  /** What to do where it can't be written there: "choose another folder with --out". */
  readonly wayOut: string;
}

/**
 * Stops before anything is written when a file would be written over one that was read, or over another of the same run: the same
 * file by whatever name (symbolic and hard links), or a name that differs in letter case alone. The latter is refused on every
 * disk, also on one where it would be another file, so that a run goes alike everywhere.
 *
 * Errors: InputError with the way out.
 */
export async function refuseOverwriting(
  files: readonly OutPlace[],
  inputs: readonly InputFile[],
): Promise<void> {
  const read = await Promise.all(
    inputs.flatMap(({ path, shown }) => (path === null ? [] : lookAt(path, shown))),
  );
  const written = new Map<string, string>();
  for (const { path, wayOut } of files) {
    const place = await lookAt(path, basename(path));
    const input = read.find((candidate) => isSame(candidate, place));
    if (input !== undefined) {
      const name = place.shown === basename(input.shown) ? 'a file of that name' : place.shown;
      throw new InputError(
        input.shown,
        `it was read, and ${name} would be written over it; nothing was written: ${wayOut}`,
      );
    }
    const [key] = place.keys;
    if (written.has(key))
      throw new InputError(
        place.shown,
        `two files of this run would have this name; nothing was written: ${wayOut}`,
      );
    written.set(key, path);
  }
}

interface Place {
  readonly shown: string;
  /** Folder and name in one letter case: of the name itself, and of what it leads to. */
  readonly keys: readonly string[];
  /** "device:number" of the file there; null where there is none. */
  readonly file: string | null;
}

async function lookAt(path: string, shown: string): Promise<Place> {
  const target = await realpath(path).catch(() => path);
  return { shown, keys: [await keyOf(path), await keyOf(target)], file: await fileAt(path) };
}

/** Folders that differ in letter case alone are told apart where the disk does. */
async function keyOf(path: string): Promise<string> {
  const folder = dirname(path);
  return `${(await fileAt(folder)) ?? (await realFolder(folder))}/${foldCase(basename(path))}`;
}

async function fileAt(path: string): Promise<string | null> {
  // what can't be looked at can't have been read
  const info = await stat(path, { bigint: true }).catch(() => null);
  return info === null ? null : `${info.dev}:${info.ino}`;
}

/** Of a folder that is not there yet: what there is of it, and the rest as written. */
async function realFolder(folder: string): Promise<string> {
  try {
    return await realpath(folder);
  } catch {
    // whatever keeps it from being looked at, the folder above may be; the root ends the search
    const above = dirname(folder);
    return above === folder ? folder : join(await realFolder(above), basename(folder));
  }
}

/** File systems that do not tell letter cases apart do not tell composed letters from decomposed ones either. */
function foldCase(name: string): string {
  return name.normalize('NFC').toLowerCase();
}

function isSame(a: Place, b: Place): boolean {
  return (a.file !== null && a.file === b.file) || a.keys.some((key) => b.keys.includes(key));
}
