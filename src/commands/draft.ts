import { stat } from 'node:fs/promises';
import { basename, dirname, isAbsolute, join } from 'node:path';
import { draftRunSheet } from '../draft/draft.ts';
import { InputError } from '../errors.ts';
import { layOut } from '../layout/layout.ts';
import { readSvg } from '../svg/read.ts';
import { VERSION } from '../version.ts';
import type { Io } from './io.ts';
import { defaultRunSheet, readLayout } from './read-files.ts';
import { writeFiles } from './write-files.ts';

export interface DraftOptions {
  /** Where to write; "-" for stdout. */
  readonly run?: string;
  readonly force?: boolean;
}

/**
 * `rillcheck draft`: a first run sheet beside the layout.
 * Errors: InputError for a layout that can't be read, or when there is a run sheet already and no --force; WriteError.
 */
export async function draft(layoutPath: string, options: DraftOptions, io: Io): Promise<number> {
  const layoutFile = await readLayout(layoutPath, io);
  const path = options.run ?? defaultRunSheet(layoutPath);
  const full = isAbsolute(path) ? path : join(io.cwd, path);
  if (path !== '-' && options.force !== true) await refuseExisting(path, full);
  const layout = layOut(readSvg(layoutFile.text, layoutFile.shown), layoutFile.shown);
  const text = draftRunSheet({ layout, file: layoutFile.name, tool: `rillcheck ${VERSION}` });
  if (path === '-') {
    await io.out(text);
    return 0;
  }
  await writeFiles(dirname(full), [{ name: basename(full), content: [text] }], io);
  await io.out(`${path} written: fill in what it marks, then run: rillcheck check ${layoutPath}\n`);
  return 0;
}

async function refuseExisting(path: string, full: string): Promise<void> {
  try {
    await stat(full);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return; // stat rejects with a system error
    throw new InputError(path, "the path can't be looked at; check its folder and permissions", {
      cause: error,
    });
  }
  throw new InputError(path, 'there is a run sheet already; it is left as it is (--force writes over it)');
}
