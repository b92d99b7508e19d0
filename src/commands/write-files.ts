import { randomBytes } from 'node:crypto';
import { existsSync } from 'node:fs';
import { mkdir, open, rename, rm, stat } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { inChunks } from './chunks.ts';
import { Interrupted, type Io, WriteError } from './io.ts';
import type { InputFile } from './read-files.ts';
import { type OutPlace, refuseOverwriting } from './refuse-overwriting.ts';

export interface OutFile extends OutPlace {
  readonly content: Uint8Array | Iterable<string>;
}

/**
 * Writes files whole or not at all: each to a temporary file beside its place, then renamed once all are written. On any
 * failure or interruption nothing of this call is left behind.
 *
 * @param inputs what was read: nothing is written over it
 * Errors: InputError (a file would be written over one that was read), WriteError (folder or file can't be written, disk full),
 * Interrupted.
 */
export async function writeFiles(
  files: readonly OutFile[],
  inputs: readonly InputFile[],
  io: Io,
): Promise<void> {
  await refuseOverwriting(files, inputs);
  const temporary: { readonly from: string; readonly file: OutFile }[] = [];
  let current: OutPlace | undefined;
  try {
    for (const file of files) {
      const folder = dirname(file.path);
      current = { ...file, path: folder };
      await makeFolder(folder);
      const from = join(
        folder,
        `.${basename(file.path)}.${process.pid}.${randomBytes(4).toString('hex')}.tmp`,
      );
      current = file;
      temporary.push({ from, file });
      await writeWhole(from, file.content, io);
    }
    if (io.isInterrupted()) throw new Interrupted();
    for (const { from, file } of temporary) {
      current = file;
      await rename(from, file.path);
    }
  } catch (error) {
    await Promise.all(temporary.map(({ from }) => rm(from, { force: true }).catch(() => undefined)));
    if (error instanceof Interrupted || !isSystemError(error)) throw error;
    throw new WriteError(`${current?.path}: can't be written (${reason(error)}); ${current?.wayOut}`, {
      cause: error,
    });
  }
}

/**
 * Makes a folder and those above it that are missing. Node's own recursive mkdir never ends where a file system answers
 * "no such file" below a folder that is there (as /proc does).
 */
async function makeFolder(folder: string): Promise<void> {
  try {
    await mkdir(folder);
  } catch (error) {
    if (!isSystemError(error)) throw error;
    if (error.code === 'EEXIST' && (await stat(folder)).isDirectory()) return;
    const above = dirname(folder);
    if (error.code !== 'ENOENT' || above === folder || existsSync(above)) throw error;
    await makeFolder(above);
    await mkdir(folder);
  }
}

const CHUNK_CHARACTERS = 1 << 20;

async function writeWhole(path: string, content: OutFile['content'], io: Io): Promise<void> {
  const handle = await open(path, 'wx');
  try {
    if (content instanceof Uint8Array) {
      await handle.writeFile(content);
    } else {
      for (const chunk of inChunks(content, CHUNK_CHARACTERS)) {
        await handle.appendFile(chunk, 'utf8');
        if (io.isInterrupted()) throw new Interrupted();
      }
    }
  } finally {
    await handle.close();
  }
}

function isSystemError(error: unknown): error is NodeJS.ErrnoException {
  return error instanceof Error && 'code' in error;
}

const REASONS: Readonly<Record<string, string>> = {
  EACCES: 'permission denied',
  EPERM: 'not permitted',
  EROFS: 'read-only file system',
  ENOSPC: 'no space left on the disk',
  ENOENT: 'no folder can be made there',
  ENOTDIR: 'a part of the path is a file',
  EEXIST: 'a file stands where the folder should be',
  EISDIR: 'a folder stands where the file should be',
  ENAMETOOLONG: 'the name is too long',
};

function reason(error: NodeJS.ErrnoException): string {
  return REASONS[error.code ?? ''] ?? error.code ?? error.message;
}
