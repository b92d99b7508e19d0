import { createHash } from 'node:crypto';
import { readFile, stat } from 'node:fs/promises';
import { basename, isAbsolute, join } from 'node:path';
import { InputError } from '../errors.ts';
import { MAX_RUN_SHEET_BYTES } from '../runsheet/tree.ts';
import { MAX_SVG_BYTES } from '../svg/limits.ts';
import { utf8Length } from '../utf8-length.ts';
import type { Io } from './io.ts';

export interface InputFile {
  /** As given on the command line, for messages. */
  readonly shown: string;
  /** From the root; null for standard input. */
  readonly path: string | null;
  /** Name without folders. */
  readonly name: string;
  readonly text: string;
  /** Of the bytes as they are in the file. */
  readonly sha256: string;
}

/** Reads the layout. Errors: InputError for a missing file, a folder, one that can't be read, one over the limit. */
export async function readLayout(path: string, io: Io): Promise<InputFile> {
  return readInput(path, io, MAX_SVG_BYTES, 'layout', 'the layout is an SVG file; check the path');
}

/**
 * Reads the run sheet: the named file, standard input for "-", or without a name LAYOUT with `.run.yaml`, which may be
 * absent (null): the geometry is then checked without one.
 */
export async function readRunSheet(
  layoutPath: string,
  named: string | undefined,
  io: Io,
): Promise<InputFile | null> {
  if (named === '-') {
    const text = await io.readStdin();
    if (utf8Length(text) > MAX_RUN_SHEET_BYTES) throw tooLarge('stdin', 'run sheet', MAX_RUN_SHEET_BYTES);
    return { shown: 'stdin', path: null, name: 'stdin', text, sha256: sha256(text) };
  }
  const path = named ?? defaultRunSheet(layoutPath);
  if (named === undefined) {
    try {
      await stat(resolveIn(io, path));
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null; // stat rejects with a system error
      throw cantRead(path, error);
    }
  }
  return readInput(path, io, MAX_RUN_SHEET_BYTES, 'run sheet', 'write one with: rillcheck draft LAYOUT');
}

/** `chips/culture.svg` → `chips/culture.run.yaml` */
export function defaultRunSheet(layoutPath: string): string {
  return `${layoutPath.replace(/\.svg$/i, '')}.run.yaml`;
}

/** What reports are named after: the layout, or the run sheet when it is not the layout's own. */
export function reportName(layoutPath: string, runSheet: string | undefined): string {
  const own = basename(layoutPath).replace(/\.svg$/i, '');
  if (runSheet === undefined || runSheet === '-') return own;
  return basename(runSheet).replace(/\.run\.ya?ml$|\.ya?ml$/i, '') || own;
}

async function readInput(
  path: string,
  io: Io,
  limit: number,
  what: string,
  hint: string,
): Promise<InputFile> {
  try {
    const full = resolveIn(io, path);
    const info = await stat(full);
    if (info.isDirectory()) throw new InputError(path, `this is a folder, not a ${what}; name a file in it`);
    if (info.size > limit) throw tooLarge(path, what, limit);
    const bytes = await readFile(full);
    return {
      shown: path,
      path: full,
      name: basename(path),
      text: decode(bytes, path),
      sha256: sha256(bytes),
    };
  } catch (error) {
    if (error instanceof InputError) throw error;
    if ((error as NodeJS.ErrnoException).code === 'ENOENT')
      throw new InputError(path, `there is no such ${what} file; ${hint}`, { cause: error });
    throw cantRead(path, error);
  }
}

/** UTF-8, or UTF-16 where a byte order mark says so (some editors write that). */
function decode(bytes: Uint8Array, path: string): string {
  const label =
    bytes[0] === 0xff && bytes[1] === 0xfe
      ? 'utf-16le'
      : bytes[0] === 0xfe && bytes[1] === 0xff
        ? 'utf-16be'
        : 'utf-8';
  try {
    return new TextDecoder(label, { fatal: true }).decode(bytes);
  } catch (error) {
    throw new InputError(path, `the file is not ${label.toUpperCase()} text; save it as UTF-8`, {
      cause: error,
    });
  }
}

function tooLarge(path: string, what: string, limit: number): InputError {
  return new InputError(
    path,
    `the ${what} is larger than ${limit / 1e6} MB (${what} size limit); remove what is not needed, such as embedded images`,
  );
}

function cantRead(path: string, error: unknown): InputError {
  const code = (error as NodeJS.ErrnoException).code ?? 'unknown error'; // file calls reject with system errors
  return new InputError(
    path,
    `the file can't be read (${code === 'EACCES' ? 'permission denied' : code}); check its permissions`,
    { cause: error },
  );
}

function sha256(content: Uint8Array | string): string {
  return createHash('sha256').update(content).digest('hex');
}

export function resolveIn(io: Io, path: string): string {
  return isAbsolute(path) ? path : join(io.cwd, path);
}
