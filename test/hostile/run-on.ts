import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { run } from '../../src/cli.ts';
// Loaded now, so that the first run is not timed while it loads what it needs.
import '../../src/commands/check.ts';
import '../../src/commands/draft.ts';
import '../../src/commands/pump.ts';
import '../../src/commands/section.ts';
import '../../src/commands/spread.ts';
import '../../src/report/pdf/document.ts';
import '../../src/report/svg.ts';
import type { Io } from '../../src/commands/io.ts';

export interface Ran {
  /** Text of all input files. */
  readonly given: string;
  readonly code: number;
  readonly out: string;
  readonly err: string;
  readonly seconds: number;
  /** Every file in the folder afterwards, the inputs left out: path → bytes. */
  readonly written: ReadonlyMap<string, Buffer>;
}

/** The program on files in a folder of their own, which is taken away afterwards. */
export async function runOn(
  files: Readonly<Record<string, string | Uint8Array>>,
  argv: readonly string[],
  world: Partial<Io> = {},
  onFolder: (folder: string) => void = () => {},
): Promise<Ran> {
  const folder = mkdtempSync(join(tmpdir(), 'rillcheck-run-'));
  try {
    for (const [name, content] of Object.entries(files)) writeFileSync(join(folder, name), content);
    mkdirSync(join(folder, 'inner'));
    onFolder(folder);
    let out = '';
    let err = '';
    const io: Io = {
      out: async (text) => {
        out += text;
      },
      err: (text) => {
        err += text;
      },
      outIsTerminal: false,
      errIsTerminal: false,
      columns: 100,
      env: {},
      cwd: folder,
      readStdin: async () => '',
      now: new Date(0),
      isInterrupted: () => false,
      ...world,
    };
    // CPU time, so that a busy machine does not look like a hang.
    const start = process.cpuUsage();
    const code = await run(argv, io);
    const { user, system } = process.cpuUsage(start);
    const seconds = (user + system) / 1e6;
    const written = new Map<string, Buffer>();
    for (const entry of readdirSync(folder, { recursive: true, withFileTypes: true })) {
      if (!entry.isFile()) continue;
      const path = join(entry.parentPath, entry.name).slice(folder.length + 1);
      if (!(path in files)) written.set(path, readFileSync(join(folder, path)));
    }
    const given = Object.values(files)
      .map((content) => Buffer.from(content).toString('latin1'))
      .join('\n');
    return { given, code, out, err: err.replaceAll(folder, '<folder>'), seconds, written };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

const CODES: ReadonlySet<number> = new Set([0, 1, 2, 3]);

/** What must hold after any run on any files; the list of what does not. */
export function faultsOf(
  { given, code, out, err, seconds, written }: Ran,
  argv: readonly string[],
): string[] {
  const faults: string[] = [];
  if (!CODES.has(code)) faults.push(`exit code ${code}`);
  if (seconds > 10) faults.push(`${seconds.toFixed(1)} s`);
  if (/^\s+at .*(?::\d+:\d+|\(native\))/m.test(err + out)) faults.push('a stack trace');
  const strange = /\bNaN\b|\bInfinity\b|\bundefined\b|\[object /.exec(err)?.[0];
  // What the input itself said may be repeated.
  if (strange !== undefined && !given.includes(strange)) faults.push(`on stderr: ${err.slice(0, 300)}`);
  // Without a command the usage is printed.
  if (code === 2 && !/^usage: /i.test(err) && err.trim().split('\n').length !== 1)
    faults.push(`an error of several lines: ${err.slice(0, 500)}`);
  if (code === 2 && written.size > 0)
    faults.push(`exit 2 and yet written: ${[...written.keys()].join(', ')}`);
  for (const [path, bytes] of written) {
    if (path.endsWith('.tmp')) faults.push(`left behind: ${path}`);
    const fault = faultOfFile(path, bytes);
    if (fault !== null) faults.push(`${path}: ${fault}`);
  }
  if (argv.includes('--json') && code < 2 && !/^(?:Usage: |\d+\.\d+\.\d+\n$)/.test(out)) {
    const fault = faultOfJson(out);
    if (fault !== null) faults.push(`stdout: ${fault}`);
  }
  return faults;
}

function faultOfFile(path: string, bytes: Buffer): string | null {
  if (path.endsWith('.json')) return faultOfJson(bytes.toString());
  if (path.endsWith('.pdf')) {
    const isWhole =
      bytes.subarray(0, 5).toString() === '%PDF-' && bytes.subarray(-6).toString().includes('%%EOF');
    return isWhole ? null : 'a PDF that is not whole';
  }
  if (path.endsWith('.svg')) {
    const text = bytes.toString();
    if (
      /NaN|Infinity|undefined/.test(
        text.replace(/>[^<]*</g, '><').replace(/"[^"]*[^-\d.eE ,A-Za-z][^"]*"/g, '""'),
      )
    )
      return 'an SVG with a number that is none';
    return text.trimEnd().endsWith('</svg>') ? null : 'an SVG that is not whole';
  }
  if (path.endsWith('.csv'))
    return /(?:^|,)(?:NaN|-?Infinity|undefined)(?:,|$)/m.test(bytes.toString()) ? 'NaN' : null;
  return 'an unexpected file';
}

function faultOfJson(text: string): string | null {
  try {
    JSON.parse(text);
    return null;
  } catch (error) {
    return `no JSON: ${error instanceof Error ? error.message : String(error)}`;
  }
}
