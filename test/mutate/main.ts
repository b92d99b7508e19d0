import { type ChildProcess, execFileSync, fork } from 'node:child_process';
import {
  cpSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readFileSync,
  rmSync,
  symlinkSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { parseArgs } from 'node:util';
import { functionsOf, type Mutation, mutationsOf, withMarks } from './mutations.ts';
import { seededSample, shareInterval } from './score.ts';

/** What is mutated: everything that decides a number or a finding. */
const MUTATED = [
  'src/asked/',
  'src/physics/',
  'src/network/',
  'src/solve/',
  'src/spread/',
  'src/findings/',
  'src/report/result.ts',
  'src/report/pump-part.ts',
  'src/report/spread-part.ts',
];
/** These ask a browser or the built program and see no mutation. */
const LEFT_OUT = /^test\/(?:bench|browser|faults|fuzz|mutate)\//;

/**
 * npm run mutate -- [--sample 600] [--seed 1] [--minutes 60] [--only src/solve,src/findings/windows.ts:20] [--tests test/solve,…]
 *   [--each 120]
 *
 * Changes one place of the source at a time and asks the tests that run this place whether they notice. All happens in a copy of
 * the committed tree, so nothing here is ever touched. First all tests run once and note which functions each file of tests runs;
 * then each mutation is put before those files, the nearest first, until one fails. Those that take longest are left out beyond
 * `--each` seconds of tests for one mutation, so the score is a lower bound. The sample is in random order: what an hour allows of it
 * is a smaller sample, as fair.
 */
export async function main(args: readonly string[]): Promise<void> {
  const { values } = parseArgs({
    args: [...args],
    options: {
      sample: { type: 'string', default: '600' },
      seed: { type: 'string', default: '1' },
      minutes: { type: 'string', default: '60' },
      only: { type: 'string', default: '' },
      tests: { type: 'string', default: 'test/' },
      each: { type: 'string', default: '120' },
    },
  });
  const endsAt = Date.now() + Number(values.minutes) * 60_000;
  const files = committedFiles();
  const copy = mkdtempSync(join(tmpdir(), 'rillcheck-mutate-'));
  let runner: Runner | null = null;
  const clear = (): void => {
    runner?.stop();
    rmSync(copy, { recursive: true, force: true });
  };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const)
    process.once(signal, () => {
      clear();
      process.exit(130);
    });
  try {
    copyTree(files, copy);
    const tests = files.filter((file) => isTest(file) && startsWithOne(file, values.tests.split(',')));
    const sources = files.filter((file) => startsWithOne(file, MUTATED) && file.endsWith('.ts'));
    const table = await mapTests(copy, sources, tests);
    const all = sources.flatMap((file) => mutationsOf(file, readFileSync(join(copy, file), 'utf8')));
    const asked = values.only === '' ? all : all.filter((one) => isAsked(one, values.only.split(',')));
    const sample = seededSample(asked, Number(values.sample), Number(values.seed));
    console.log(`${asked.length} mutations are possible, ${sample.length} are tried.`);
    const outcomes: Outcome[] = [];
    for (const mutation of sample) {
      if (Date.now() > endsAt) break;
      const files = testsFor(table, mutation, Number(values.each));
      let tried: Omit<Outcome, 'mutation'> | null = null;
      for (let again = 0; again < 2 && tried === null; again++) {
        runner ??= new Runner(copy, 'mutate');
        tried = await tryOne(copy, runner, table, mutation, files);
        if (tried === null || tried.by === 'time' || tried.by === 'a crash') {
          runner.stop();
          runner = null;
        }
      }
      if (tried === null) {
        console.log(`not counted, its tests fail without it too: ${placeOf(mutation)}`);
        continue;
      }
      const outcome = { mutation, ...tried };
      outcomes.push(outcome);
      console.error(`${outcomes.length}/${sample.length} ${outcome.by ?? 'SURVIVED'} ${placeOf(mutation)}`);
    }
    report(outcomes, sample.length);
  } finally {
    clear();
  }
}

/** @throws on a dirty tree: what is not committed would not be measured. */
function committedFiles(): string[] {
  const git = (...command: string[]): string => execFileSync('git', command, { encoding: 'utf8' });
  if (git('status', '--porcelain') !== '')
    throw new Error('the tree has changes that are not committed: commit or stash them first');
  return git('ls-files', '-z').split('\0').filter(existsSync);
}

function copyTree(files: readonly string[], copy: string): void {
  for (const file of files) {
    mkdirSync(join(copy, dirname(file)), { recursive: true });
    cpSync(file, join(copy, file));
  }
  symlinkSync(join(process.cwd(), 'node_modules'), join(copy, 'node_modules'));
}

function isTest(file: string): boolean {
  return file.endsWith('.test.ts') && file.startsWith('test/') && !LEFT_OUT.test(file);
}

function startsWithOne(file: string, beginnings: readonly string[]): boolean {
  return beginnings.some((beginning) => file.startsWith(beginning));
}

/** Whether a mutation lies under one of these paths, at this line where one is given. */
function isAsked({ file, line }: Mutation, places: readonly string[]): boolean {
  return places.some((place) => {
    const [path, at] = place.split(':');
    return file.startsWith(path) && (at === undefined || Number(at) === line);
  });
}

/* ---------- which tests run what ---------- */

interface TestTable {
  /** Mark of each file's first function. */
  readonly firstMark: ReadonlyMap<string, number>;
  readonly functionCount: ReadonlyMap<string, number>;
  /** Of each mark, the files of tests that run it. */
  readonly testsOf: readonly ReadonlySet<string>[];
  /** Marks that run while modules are loaded: what they make is seen by every test of their file. */
  readonly onLoading: ReadonlySet<number>;
  readonly seconds: ReadonlyMap<string, number>;
}

async function mapTests(
  copy: string,
  sources: readonly string[],
  tests: readonly string[],
): Promise<TestTable> {
  const firstMark = new Map<string, number>();
  const functionCount = new Map<string, number>();
  let marks = 0;
  for (const file of sources) {
    const text = readFileSync(join(copy, file), 'utf8');
    const bodies = functionsOf(file, text);
    firstMark.set(file, marks);
    functionCount.set(file, bodies.length);
    writeFileSync(join(copy, file), withMarks(text, bodies, marks));
    marks += bodies.length;
  }
  const runner = new Runner(copy, 'map');
  const answer = await runner.ask(tests, [], 3_600_000);
  runner.stop();
  if (typeof answer === 'string') throw new Error(`the tests did not end: ${answer}`);
  for (const file of sources) cpSync(file, join(copy, file));
  if (answer.failed.length > 0)
    console.log(`Left out, as they fail without any mutation: ${answer.failed.join(', ')}`);
  const failed = new Set(answer.failed);
  const testsOf = Array.from({ length: marks }, () => new Set<string>());
  const onLoading = new Set<number>();
  for (const line of readFileSync(join(copy, 'functions-run.jsonl'), 'utf8').trim().split('\n')) {
    const note = JSON.parse(line) as { path: string; onLoading: number[]; onRunning: number[] };
    const test = note.path.slice(note.path.lastIndexOf('/test/') + 1);
    for (const mark of note.onLoading) onLoading.add(mark);
    if (failed.has(test)) continue;
    for (const mark of [...note.onLoading, ...note.onRunning]) testsOf[mark].add(test);
  }
  const seconds = new Map(Object.entries(answer.seconds));
  const whole = [...seconds.values()].reduce((sum, one) => sum + one, 0);
  console.log(`${tests.length} files of tests take ${whole.toFixed(0)} s; ${marks} functions are marked.`);
  return { firstMark, functionCount, testsOf, onLoading, seconds };
}

/** The files of tests that run a mutation's function: those of its own folder first, then the quickest, for so many seconds. */
function testsFor(table: TestTable, { file, within }: Mutation, mostSeconds: number): string[] {
  const first = table.firstMark.get(file) ?? 0;
  const own = first + within;
  const found = new Set<string>();
  if (within >= 0) for (const test of table.testsOf[own]) found.add(test);
  if (within < 0 || table.onLoading.has(own)) {
    for (let k = 0; k < (table.functionCount.get(file) ?? 0); k++)
      for (const test of table.testsOf[first + k]) found.add(test);
  }
  // a table of constants without a function: nothing says who reads it
  if ((table.functionCount.get(file) ?? 0) === 0) for (const test of table.seconds.keys()) found.add(test);
  const folder = dirname(file).replace(/^src/, 'test');
  const cost = (test: string): number =>
    (dirname(test) === folder ? 0 : 1e6) + (table.seconds.get(test) ?? 0);
  let seconds = 0;
  return [...found]
    .sort((a, b) => cost(a) - cost(b))
    .filter((test, i) => {
      seconds += table.seconds.get(test) ?? 0;
      return i === 0 || seconds <= mostSeconds;
    });
}

/* ---------- one mutation ---------- */

interface Outcome {
  readonly mutation: Mutation;
  /** The file of tests that noticed it, `time` or `a crash` where they did not end; null where nothing did. */
  readonly by: string | null;
  readonly asked: number;
}

/** null where the tests fail without the mutation too. */
async function tryOne(
  copy: string,
  runner: Runner,
  { seconds }: TestTable,
  { file, start, end, becomes }: Mutation,
  tests: readonly string[],
): Promise<Omit<Outcome, 'mutation'> | null> {
  if (tests.length === 0) return { by: null, asked: 0 };
  const path = join(copy, file);
  const text = readFileSync(path, 'utf8');
  try {
    writeFileSync(path, text.slice(0, start) + becomes + text.slice(end));
    const expected = tests.reduce((sum, test) => sum + (seconds.get(test) ?? 0), 0);
    const answer = await runner.ask(tests, [file], 1000 * (20 + 4 * expected));
    if (typeof answer === 'string') {
      return { by: answer, asked: tests.length };
    }
    const by = answer.failed[0] ?? null;
    if (by === null) return { by: answer.hasErrors ? 'an error outside tests' : null, asked: tests.length };
    // Without the mutation the same file must pass, or what failed is this process (what earlier mutations left in it).
    writeFileSync(path, text);
    const control = await runner.ask([by], [file], 1000 * (20 + 4 * expected));
    return typeof control === 'string' || control.failed.length > 0 ? null : { by, asked: tests.length };
  } finally {
    writeFileSync(path, text);
  }
}

interface Answer {
  readonly failed: readonly string[];
  readonly seconds: Readonly<Record<string, number>>;
  readonly hasErrors: boolean;
}

/** The tests hung, or took their process with them. */
type NoAnswer = 'time' | 'a crash';

/** The process that runs the tests; one that hangs is ended whole. */
class Runner {
  private readonly child: ChildProcess;
  private readonly ready: Promise<unknown>;

  constructor(copy: string, mode: 'map' | 'mutate') {
    this.child = fork(join(copy, 'test/mutate/runner.mjs'), [mode], {
      cwd: copy,
      stdio: ['ignore', 'ignore', 'inherit', 'ipc'],
    });
    this.ready = this.next();
  }

  async ask(
    files: readonly string[],
    changed: readonly string[],
    withinMs: number,
  ): Promise<Answer | NoAnswer> {
    await this.ready;
    const answer = this.next();
    this.child.send({ files, changed });
    let timer: NodeJS.Timeout | undefined;
    const late = new Promise<NoAnswer>((resolve) => {
      timer = setTimeout(() => resolve('time'), withinMs);
    });
    try {
      return (await Promise.race([answer, late])) as Answer | NoAnswer;
    } finally {
      clearTimeout(timer);
    }
  }

  stop(): void {
    this.child.removeAllListeners();
    this.child.kill('SIGKILL');
  }

  private next(): Promise<unknown> {
    return new Promise((resolve) => {
      const onExit = (): void => resolve('a crash');
      this.child.once('exit', onExit);
      this.child.once('message', (message) => {
        this.child.off('exit', onExit);
        resolve(message);
      });
    });
  }
}

/* ---------- report ---------- */

function placeOf({ file, line, was, becomes }: Mutation): string {
  const short = (text: string): string => {
    const one = text.replace(/\s+/g, ' ');
    return one.length > 70 ? `${one.slice(0, 67)}…` : one;
  };
  return `${file}:${line}: ${short(was)} → ${short(becomes)}`;
}

function report(outcomes: readonly Outcome[], wanted: number): void {
  const survivors = outcomes.filter(({ by }) => by === null);
  const killed = outcomes.length - survivors.length;
  const percent = (share: number): string => (100 * share).toFixed(1);
  const { low, high } = shareInterval(killed, outcomes.length);
  if (outcomes.length < wanted) console.log(`The time was up after ${outcomes.length} of ${wanted}.`);
  console.log(
    `${killed} of ${outcomes.length} mutations were noticed: ${percent(killed / outcomes.length)} % (95 % interval ${percent(low)} to ${percent(high)} %).`,
  );
  const late = outcomes.filter(({ by }) => by === 'time' || by === 'a crash').length;
  if (late > 0) console.log(`${late} of them since the tests did not end.`);
  for (const { mutation, asked } of survivors)
    console.log(`survived ${asked} files of tests: ${placeOf(mutation)}`);
}
