import type { Io } from '../../src/commands/io.ts';

export interface FakeIo extends Io {
  readonly stdout: () => string;
  readonly stderr: () => string;
}

/** A world in memory round a real folder: what was printed can be read back, and every part can be replaced. */
export function fakeIo(cwd: string, changes: Partial<Io> = {}): FakeIo {
  const out: string[] = [];
  const err: string[] = [];
  return {
    out: async (text) => {
      out.push(text);
    },
    err: (text) => {
      err.push(text);
    },
    outIsTerminal: false,
    errIsTerminal: false,
    columns: 100,
    env: {},
    cwd,
    readStdin: async () => '',
    now: new Date('2026-01-01T00:00:00Z'),
    isInterrupted: () => false,
    ...changes,
    stdout: () => out.join(''),
    stderr: () => err.join(''),
  };
}
