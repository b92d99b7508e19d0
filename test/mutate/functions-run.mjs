// Set-up of the map run: notes for every test file which marked functions it ran (mutations.ts, withMarks).
import { appendFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, expect } from 'vitest';

const MOST_FUNCTIONS = 20_000;
globalThis.functionsRun ??= new Uint8Array(MOST_FUNCTIONS);

/** What ran so far, and forgets it. */
const take = () => {
  const run = [];
  globalThis.functionsRun.forEach((ran, mark) => {
    if (ran === 1) run.push(mark);
  });
  globalThis.functionsRun.fill(0);
  return run;
};

let onLoading;
beforeAll(() => {
  onLoading = take();
});
afterAll(() => {
  const note = { path: expect.getState().testPath, onLoading, onRunning: take() };
  appendFileSync(join(import.meta.dirname, '../../functions-run.jsonl'), `${JSON.stringify(note)}\n`);
});
