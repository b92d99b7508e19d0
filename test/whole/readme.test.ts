import { cpSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { run } from '../../src/cli.ts';
import { fakeIo } from '../commands/fake-io.ts';

const root = new URL('../..', import.meta.url).pathname;
const readme = readFileSync(join(root, 'README.md'), 'utf8');
const folder = mkdtempSync(join(tmpdir(), 'rillcheck-readme-'));
cpSync(join(root, 'layouts-demo'), join(folder, 'layouts-demo'), { recursive: true });

afterAll(() => {
  rmSync(folder, { recursive: true, force: true });
});

/** Splits a command line as a shell does, for plain words and words in double quotes. */
function wordsOf(line: string): string[] {
  return [...line.matchAll(/"([^"]*)"|(\S+)/g)].map(([, quoted, plain]) => quoted ?? plain);
}

describe('the README', () => {
  const examples = [...readme.matchAll(/```console\n\$ rillcheck (.*)\n([\s\S]*?)```/g)];

  it('has examples', () => {
    expect(examples.length).toBeGreaterThanOrEqual(4);
  });

  for (const [, command, output] of examples) {
    it(`shows what rillcheck ${command} really prints`, async () => {
      const io = fakeIo(folder);
      await run(wordsOf(command), io);
      expect(io.stderr()).toBe('');
      const cut = output.endsWith('...\n');
      const shown = cut ? output.slice(0, -'...\n'.length) : output;
      if (cut) expect(io.stdout().startsWith(shown)).toBe(true);
      else expect(io.stdout()).toBe(shown);
    }, 60_000);
  }

  it('shows the run sheet that lies beside the layout', () => {
    const sheet = readFileSync(join(root, 'layouts-demo/chamber.run.yaml'), 'utf8');
    expect(readme).toContain(`\`\`\`yaml\n${sheet}\`\`\``);
  });

  it('states the two commands that a newcomer needs', () => {
    expect(readme).toContain('    npm ci && npm run demo\n    npm ci && npm test\n');
  });
});
