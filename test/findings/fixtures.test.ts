import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { RULES } from '../../src/findings/rules.ts';
import type { Finding, FindingReport } from '../../src/findings/types.ts';
import { RULE_MEASURES } from '../../src/runsheet/measures.ts';
import { TURNS, type Turn, turnedPoint, turnedSvg } from './drawing-turns.ts';
import { findingsOf } from './findings-of.ts';

/**
 * A case is three files, fixtures/<family>/<case>.svg, .run.yaml (left out: no run sheet) and .expected.json. Expected is the
 * list of all findings, or { only, findings, not_run, turns }: `only` names the rules to compare when a drawing that shows
 * one fault cannot help having others; `not_run` must be among the rules not run; `turns: false` keeps a case whose
 * rule depends on how the drawing lies.
 */
interface Expected {
  readonly only?: readonly string[];
  readonly findings: readonly ExpectedFinding[];
  readonly not_run?: readonly string[];
  readonly turns?: boolean;
}

interface ExpectedFinding {
  readonly rule: string;
  readonly severity: string;
  readonly names?: readonly string[];
  /** mm */
  readonly x?: number;
  readonly y?: number;
  /** SI, to 1e-6 of its size. */
  readonly measured?: number;
  readonly accepted?: boolean;
  /** A part of the message and of the fix. */
  readonly says?: string;
  readonly fix?: string;
}

/** A place written by hand is good to this; a place in a turned drawing must be better than rounding shows. */
const PLACE_MM = 2e-3;

const FOLDER = new URL('./fixtures', import.meta.url).pathname;

const KNOWN_RULES = new Set([...RULES.flatMap(({ names }) => names), 'unmatched-accept']);

for (const family of readdirSync(FOLDER).sort()) {
  describe(`fixtures of ${family}`, () => {
    const files = readdirSync(join(FOLDER, family)).sort();
    const cases = stemsOf(files, '.expected.json');

    it('has a drawing for every list of expected findings, and such a list for every drawing', () => {
      expect(stemsOf(files, '.svg')).toEqual(cases);
    });

    for (const file of cases) {
      const stem = join(FOLDER, family, file);
      const name = file.replaceAll('-', ' ');
      const svg = readFileSync(`${stem}.svg`, 'utf8');
      const sheet = existsSync(`${stem}.run.yaml`) ? readFileSync(`${stem}.run.yaml`, 'utf8') : null;
      const expected = readExpected(`${stem}.expected.json`);

      it(`finds exactly what is expected in "${name}"`, () => {
        const report = findingsOf(svg, sheet);
        const findings = looked(report, expected);
        expect(findings.map((finding, i) => shown(finding, expected.findings[i]))).toEqual(
          expected.findings.map((finding) => ({ ...finding })),
        );
        const notRun = report.notRun.map(({ rule }) => rule);
        for (const rule of expected.not_run ?? []) expect(notRun).toContain(rule);
      });

      it(`says in whole sentences what is wrong in "${name}", in a unit that accept knows`, () => {
        for (const finding of findingsOf(svg, sheet).findings) expectSound(finding);
      });

      for (const turn of expected.turns === false ? [] : TURNS) {
        it(`finds the same in "${name}" ${turn.name}, at the same places`, () => {
          const plain = looked(findingsOf(svg, sheet), expected);
          const turned = looked(findingsOf(turnedSvg(svg, turn), sheet), expected);
          expect(turned.map(identity).sort()).toEqual(plain.map(identity).sort());
          for (const finding of plain) expectAt(turned, finding, turn);
        });
      }
    }
  });
}

function stemsOf(files: readonly string[], ending: string): readonly string[] {
  return files.filter((file) => file.endsWith(ending)).map((file) => file.slice(0, -ending.length));
}

function readExpected(path: string): Expected {
  // the fixtures are this test's own, and a wrong key shows as a finding that does not match
  const read = JSON.parse(readFileSync(path, 'utf8')) as Expected | readonly ExpectedFinding[];
  const expected = 'findings' in read ? read : { findings: read };
  for (const rule of [...(expected.only ?? []), ...expected.findings.map((finding) => finding.rule)]) {
    if (!KNOWN_RULES.has(rule)) throw new Error(`${path}: there is no rule ${rule}`);
  }
  return expected;
}

function looked({ findings }: FindingReport, { only }: Expected): readonly Finding[] {
  return only === undefined ? findings : findings.filter(({ rule }) => only.includes(rule));
}

/** As much of a finding as the expected one mentions, its numbers as written there when they agree. */
function shown(finding: Finding, expected: ExpectedFinding | undefined): Record<string, unknown> {
  const { rule, severity, names, xMm, yMm, measured, message, fix, accepted } = finding;
  const all: Record<string, unknown> = { rule, severity };
  if (expected === undefined) return { ...all, names, xMm, yMm, measured, message, fix };
  if (expected.names !== undefined) all.names = names;
  if (expected.x !== undefined) all.x = agreed(xMm, expected.x, PLACE_MM);
  if (expected.y !== undefined) all.y = agreed(yMm, expected.y, PLACE_MM);
  if (expected.measured !== undefined) {
    all.measured = agreed(measured, expected.measured, 1e-6 * Math.abs(expected.measured));
  }
  if (expected.accepted !== undefined) all.accepted = accepted !== null;
  if (expected.says !== undefined) all.says = message.includes(expected.says) ? expected.says : message;
  if (expected.fix !== undefined) all.fix = fix.includes(expected.fix) ? expected.fix : fix;
  return all;
}

function agreed(value: number | null, expected: number, within: number): number | null {
  return value !== null && Math.abs(value - expected) <= within ? expected : value;
}

function identity({ rule, severity, names, accepted }: Finding): string {
  return `${severity} ${rule} [${names.join(', ')}]${accepted === null ? '' : ' accepted'}`;
}

/** SI units of the quantities that a rule may measure in, as accept reads its ceilings. */
const UNIT_OF: Readonly<Record<string, string>> = {
  length: 'm',
  ratio: '',
  share: '',
  angle: 'rad',
  pressure: 'Pa',
  wall_shear: 'Pa',
  time: 's',
  flow: 'm³/s',
};

function expectSound({ rule, message, fix, names, measured, limit, unit }: Finding): void {
  for (const text of [message, fix, ...names]) {
    expect(text).not.toMatch(/NaN|undefined|null|Infinity|\[object/);
    expect(text).not.toBe('');
  }
  // a word that was to stand there is missing
  for (const text of [message, fix]) expect(text).not.toMatch(/^\s|\s$|\s\s|\s[,.;:)]|[(]\s|[(][)]/);
  expect((limit === null) === (unit === null), `${rule} has a limit and a unit, or neither`).toBe(true);
  if (measured !== null) expect(unit, `${rule} measures in a unit`).not.toBeNull();
  const measure = RULE_MEASURES.get(rule);
  if (unit !== null && measure !== undefined && measure.quantities.length > 0) {
    expect(measure.quantities.map((quantity) => UNIT_OF[quantity])).toContain(unit);
  }
}

function expectAt(turned: readonly Finding[], plain: Finding, turn: Turn): void {
  const alike = turned.filter((finding) => identity(finding) === identity(plain));
  if (plain.xMm === null || plain.yMm === null) {
    expect(alike.some(({ xMm, yMm }) => xMm === null && yMm === null)).toBe(true);
    return;
  }
  const [x, y] = turnedPoint(turn, plain.xMm, plain.yMm);
  const nearest = Math.min(...alike.map(({ xMm, yMm }) => Math.hypot((xMm ?? NaN) - x, (yMm ?? NaN) - y)));
  expect(nearest, `${identity(plain)} at ${x}, ${y}`).toBeLessThan(PLACE_MM);
}
