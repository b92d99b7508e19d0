/**
 * The drawings of fixtures/, read and checked. Beside a drawing may lie
 * - `NAME.run.yaml` and `NAME.expected.json`: its channels (name → width in mm), ports (name → diameter in mm), what was
 *   counted as ignored, and findings that must be there, each with words that its fix must hold;
 * - `NAME.error.txt`: the whole message with which it is refused.
 * That all the others are read as a browser draws them is for test/browser.
 */
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readSvg } from '../../src/svg/read.ts';
import { analyseText } from '../whole/analyse-text.ts';

interface Expected {
  readonly channels: Readonly<Record<string, number>>;
  readonly ports: Readonly<Record<string, number>>;
  readonly ignored: Readonly<Record<string, number>>;
  readonly finds: readonly { readonly rule: string; readonly name: string; readonly fix: string }[];
}

const FIXTURES = join(import.meta.dirname, 'fixtures');

const names = readdirSync(FIXTURES, { recursive: true, encoding: 'utf8' })
  .filter((name) => name.endsWith('.svg'))
  .map((name) => name.slice(0, -'.svg'.length))
  .sort();

const textOf = (name: string): string => readFileSync(join(FIXTURES, name), 'utf8');
const has = (name: string): boolean => existsSync(join(FIXTURES, name));

describe('what is drawn is read right, refused with a way out, or counted', () => {
  it.each(names.filter((name) => has(`${name}.expected.json`)))('%s', async (name) => {
    // Written beside the drawing in this shape.
    const expected = JSON.parse(textOf(`${name}.expected.json`)) as Expected;
    const { chip, findings } = await analyseText(textOf(`${name}.svg`), textOf(`${name}.run.yaml`));
    const mm = (value: number): number => Number(value.toFixed(4));
    const read: Expected = {
      channels: Object.fromEntries(chip.channels.map(({ name, drawnWidthMm }) => [name, mm(drawnWidthMm)])),
      ports: Object.fromEntries(chip.ports.map(({ name, radiusMm }) => [name, mm(2 * radiusMm)])),
      ignored: { ...chip.ignored },
      finds: expected.finds.filter(({ rule, name, fix }) =>
        findings.findings.some(
          (one) => one.rule === rule && one.names.includes(name) && one.fix.includes(fix),
        ),
      ),
    };

    expect(read).toEqual(expected);
  });
});

describe('what cannot be read for sure is refused by file, line and element', () => {
  it.each(names.filter((name) => has(`${name}.error.txt`)))('%s', (name) => {
    let message = 'it was read';
    try {
      readSvg(textOf(`${name}.svg`), `${name}.svg`);
    } catch (error) {
      message = error instanceof Error ? error.message : String(error);
    }
    expect(message).toBe(textOf(`${name}.error.txt`).trim());
  });
});

it('every drawing that has a run sheet says what must come of it', () => {
  expect(names.filter((name) => has(`${name}.run.yaml`) && !has(`${name}.expected.json`))).toEqual([]);
});
