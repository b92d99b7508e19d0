import { describe, expect, it } from 'vitest';
import { isAbove, isBelow } from '../../src/asked/within.ts';
import { findAll } from '../../src/findings/check.ts';
import type { FindingContext } from '../../src/findings/context.ts';
import { found, notRun, type Rule, toFinding } from '../../src/findings/rule.ts';
import { RULES } from '../../src/findings/rules.ts';
import type { Severity } from '../../src/findings/types.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { RULE_MEASURES, UNACCEPTABLE_RULES } from '../../src/runsheet/measures.ts';
import type { AcceptEntry } from '../../src/runsheet/types.ts';
import { chipOf, runOf } from '../network/chip-of.ts';

function contextWith(accept: readonly AcceptEntry[] = []): FindingContext {
  const chip = chipOf([{ name: 'a', widthMm: 0.2, lines: [[0, 0, 10, 0]] }]);
  return { chip, run: { ...runOf(chip), accept }, network: buildNetwork(chip), flow: null };
}

function saying(rule: string, severity: Severity, xMm: number | null, name = 'a'): Rule {
  const at = xMm === null ? null : { xMm, yMm: 0 };
  return {
    names: [rule],
    run: () => found([toFinding(rule, severity, { message: 'm', fix: 'f', at, names: [name] })]),
  };
}

describe('findAll', () => {
  it('puts blockers first, then cautions, then notes, each by rule and place, and what has no place last', () => {
    const report = findAll(contextWith(), [
      saying('ignored-shapes', 'note', null),
      saying('open-end', 'caution', 3),
      saying('thin-wall', 'blocker', null),
      saying('thin-wall', 'blocker', 7),
      saying('narrow-channel', 'blocker', 9),
      saying('thin-wall', 'blocker', 2),
    ]);
    expect(report.findings.map(({ rule, xMm }) => [rule, xMm])).toEqual([
      ['narrow-channel', 9],
      ['thin-wall', 2],
      ['thin-wall', 7],
      ['thin-wall', null],
      ['open-end', 3],
      ['ignored-shapes', null],
    ]);
  });

  it('holds exactly while a blocker is left that nobody accepted, and counts accepted findings by themselves', () => {
    const accept: AcceptEntry = {
      rule: 'loose-port',
      at: 'a',
      upTo: null,
      because: 'a tooling hole',
      by: 'AM',
      on: '2026-05-04',
      line: 3,
    };
    const rules = [saying('loose-port', 'blocker', 1), saying('open-end', 'caution', 1)];
    expect(findAll(contextWith(), rules)).toMatchObject({
      verdict: 'hold',
      counts: { blockers: 1, cautions: 1, notes: 0, accepted: 0 },
    });
    expect(findAll(contextWith([accept]), rules)).toMatchObject({
      verdict: 'ready',
      counts: { blockers: 0, cautions: 1, notes: 0, accepted: 1 },
    });
  });

  it('lists a rule that was not run once, with all its reasons', () => {
    const skipping = (why: string): Rule => ({ names: ['thin-wall'], run: () => notRun('thin-wall', why) });
    const report = findAll(contextWith(), [skipping('no limit'), skipping('no depth'), skipping('no limit')]);
    expect(report.notRun).toEqual([{ rule: 'thin-wall', why: 'no limit; no depth' }]);
    expect(report.counts.rulesNotRun).toBe(1);
  });

  it('runs the rules of the drawing without a solved flow, and lists those of the flow as not run', () => {
    const { notRun: skipped } = findAll(contextWith());
    const names = skipped.map(({ rule }) => rule);
    for (const rule of ['stray-channel', 'no-reference', 'not-laminar', 'stagnant', 'backflow']) {
      expect(names).toContain(rule);
    }
    expect(names).not.toContain('short-reach');
  });

  it('gives the same report for the same chip, whatever ran before', () => {
    expect(findAll(contextWith())).toEqual(findAll(contextWith()));
  });
});

describe('the rules', () => {
  it('are each known to the run sheet as acceptable or not', () => {
    const names = RULES.flatMap((rule) => rule.names);
    expect(names.filter((name) => !RULE_MEASURES.has(name) && !UNACCEPTABLE_RULES.has(name))).toEqual([]);
    expect(names.length).toBe(new Set(names).size);
  });
});

describe('a limit', () => {
  it('is passed by more than a millionth of itself only, in the drawing’s favour', () => {
    expect(isBelow(20e-6 * (1 - 0.9e-6), 20e-6)).toBe(false);
    expect(isBelow(20e-6 * (1 - 1.1e-6), 20e-6)).toBe(true);
    expect(isAbove(10 * (1 + 0.9e-6), 10)).toBe(false);
    expect(isAbove(10 * (1 + 1.1e-6), 10)).toBe(true);
    expect(isBelow(-30e3 * (1 + 0.9e-6), -30e3)).toBe(false);
    expect(isBelow(-30e3 * (1 + 1.1e-6), -30e3)).toBe(true);
  });
});
