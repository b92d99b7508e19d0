import { stat } from 'node:fs/promises';
import { draftRunSheet } from '../draft/draft.ts';
import { InputError } from '../errors.ts';
import { layOut } from '../layout/layout.ts';
import { readSvg } from '../svg/read.ts';
import { VERSION } from '../version.ts';
import type { Io } from './io.ts';
import { defaultRunSheet, readLayout, resolveIn } from './read-files.ts';
import { refuseOverwriting } from './refuse-overwriting.ts';
import { writeFiles } from './write-files.ts';

export interface DraftOptions {
  /** Where to write; "-" for stdout. */
  readonly run?: string;
  readonly force?: boolean;
}

/**
 * `rillcheck draft`: a first run sheet beside the layout.
 * Errors: InputError for a layout that can't be read, where it would write over it, or over a run sheet without --force; WriteError.
 */
export async function draft(layoutPath: string, options: DraftOptions, io: Io): Promise<number> {
  const layoutFile = await readLayout(layoutPath, io);
  const path = options.run ?? defaultRunSheet(layoutPath);
  const full = resolveIn(io, path);
  const out = { path: full, wayOut: 'name another file with --run' };
  if (path !== '-') await refuseOverwriting([out], [layoutFile]);
  if (path !== '-' && options.force !== true) await refuseExisting(path, full);
  const layout = layOut(readSvg(layoutFile.text, layoutFile.shown), layoutFile.shown);
  const text = draftRunSheet({ layout, file: layoutFile.name, tool: `rillcheck ${VERSION}` });
  if (path === '-') {
    await io.out(text);
    return 0;
  }
  await writeFiles([{ ...out, content: [text] }], [layoutFile], io);
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
