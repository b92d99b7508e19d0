import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { acceptFindings } from '../../src/findings/accept.ts';
import { toFinding } from '../../src/findings/rule.ts';
import type { Finding } from '../../src/findings/types.ts';
import { showOf } from '../../src/runsheet/shown.ts';
import type { AcceptEntry } from '../../src/runsheet/types.ts';

const SHOW = showOf(null);
const RULES = new Set([
  'thin-wall',
  'roof-span',
  'shear-window',
  'under-pressure',
  'open-end',
  'merged-walls',
]);

function entry(parts: Partial<AcceptEntry>): AcceptEntry {
  return {
    rule: 'thin-wall',
    at: 'lane-1',
    upTo: 35e-6,
    because: 'measured on the last batch',
    by: 'AM',
    on: '2026-05-04',
    line: 12,
    ...parts,
  };
}

function finding(
  rule: string,
  measure: { value: number | null; limit: number; unit: string } | null,
): Finding {
  return toFinding(rule, 'blocker', {
    message: 'something is wrong',
    fix: 'mend it',
    at: null,
    names: ['lane-2', 'lane-1'],
    ...(measure === null ? {} : { measure }),
  });
}

function judged(one: Finding, ...entries: AcceptEntry[]): Finding[] {
  return acceptFindings([one], [], entries, RULES, SHOW);
}

describe('acceptFindings', () => {
  it('takes on a value below its limit down to the ceiling, and not further', () => {
    const wall = (value: number) => finding('thin-wall', { value, limit: 40e-6, unit: 'm' });
    expect(judged(wall(35e-6), entry({}))[0].accepted?.by).toBe('AM');
    expect(judged(wall(35e-6 * (1 - 1e-12)), entry({}))[0].accepted).not.toBeNull();
    const [beyond] = judged(wall(34.9e-6), entry({}));
    expect(beyond.accepted).toBeNull();
    expect(beyond.message).toBe('something is wrong; beyond the accepted 35 µm (AM, 2026-05-04)');
  });

  it('takes on a value above its limit up to the ceiling, and not further', () => {
    const roof = (value: number) => finding('roof-span', { value, limit: 10, unit: '' });
    const ceiling = entry({ rule: 'roof-span', upTo: 13 });
    expect(judged(roof(13), ceiling)[0].accepted).not.toBeNull();
    expect(judged(roof(13.1), ceiling)[0].accepted).toBeNull();
  });

  it('reads a ceiling below a negative limit as the deeper one', () => {
    const suction = (value: number) => finding('under-pressure', { value, limit: -30e3, unit: 'Pa' });
    const ceiling = entry({ rule: 'under-pressure', upTo: -40e3 });
    expect(judged(suction(-39e3), ceiling)[0].accepted).not.toBeNull();
    expect(judged(suction(-41e3), ceiling)[0].accepted).toBeNull();
  });

  it('does not let a ceiling in one unit cover a value in another', () => {
    const share = finding('shear-window', { value: 0.7, limit: 0.8, unit: '' });
    const inPascal = entry({ rule: 'shear-window', upTo: 0.6, upToUnit: 'Pa' });
    const [kept] = judged(share, inPascal);
    expect(kept.accepted).toBeNull();
    expect(kept.message).toContain('which is of another kind');
    expect(
      judged(share, entry({ rule: 'shear-window', upTo: 0.6, upToUnit: '' }))[0].accepted,
    ).not.toBeNull();
  });

  it('accepts a rule without measure by name alone, and nothing of which the value does not exist', () => {
    expect(
      judged(finding('open-end', null), entry({ rule: 'open-end', upTo: null }))[0].accepted,
    ).not.toBeNull();
    const unknown = finding('thin-wall', { value: null, limit: 40e-6, unit: 'm' });
    expect(judged(unknown, entry({}))[0].message).toContain('there is no value to compare');
  });

  it('has for a ceiling the slack that limits have', () => {
    const wall = (value: number) => finding('thin-wall', { value, limit: 40e-6, unit: 'm' });
    expect(judged(wall(35e-6 * (1 - 0.9e-6)), entry({}))[0].accepted).not.toBeNull();
    expect(judged(wall(35e-6 * (1 - 1.1e-6)), entry({}))[0].accepted).toBeNull();
  });

  it('takes on whatever a pattern matches, each up to its ceiling, and says what was matched', () => {
    const wall = finding('thin-wall', { value: 36e-6, limit: 40e-6, unit: 'm' });
    const [taken] = judged(wall, entry({ at: 'lane-*' }));
    expect(taken.accepted?.at).toBe('lane-*');
    expect(taken.message).toBe('something is wrong; accepted as lane-2, which lane-* matches');
    const [named] = judged(wall, entry({ at: 'lane-*', upTo: 38e-6 }), entry({ at: 'lane-1' }));
    expect(named.accepted?.at).toBe('lane-1');
    expect(named.message).toBe('something is wrong');
    expect(judged(wall, entry({ at: 'l*-3' }))).toHaveLength(2);
  });

  it('has no pattern mean a name that the drawing does not have, nor a reach of such', () => {
    const at = (names: readonly string[]) => {
      const one = { ...finding('open-end', null), names };
      const entries = [entry({ rule: 'open-end', at: 'channel-*', upTo: null })];
      return acceptFindings([one], [], entries, RULES, SHOW, new Set(['channel-3']))[0].accepted;
    };
    expect(at(['channel-3', 'channel-3:2'])).toBeNull();
    expect(at(['channel-4'])).not.toBeNull();
    expect(at(['channel-4:1'])).not.toBeNull();
  });

  it('tries every entry that matches, as trying them one by one does', () => {
    const words = fc.string({ unit: fc.constantFrom('a', 'b'), minLength: 1, maxLength: 4 });
    const patterns = fc.string({ unit: fc.constantFrom('a', 'b', '*'), minLength: 1, maxLength: 4 });
    const entries = fc.array(fc.tuple(patterns, fc.integer({ min: 20, max: 45 })), { maxLength: 5 });
    fc.assert(
      fc.property(fc.array(words, { minLength: 1, maxLength: 3 }), entries, (names, given) => {
        const wall = { ...finding('thin-wall', { value: 32e-6, limit: 40e-6, unit: 'm' }), names };
        const [one] = judged(wall, ...given.map(([at, um], i) => entry({ at, upTo: um * 1e-6, line: i })));
        const covers = given.some(
          ([at, um]) =>
            um <= 32 && names.some((name) => new RegExp(`^${at.replaceAll('*', '.*')}$`).test(name)),
        );
        expect(one.accepted !== null).toBe(covers);
      }),
      { seed: 5, numRuns: 2000 },
    );
  });

  it('goes by the entry that covers the finding when several name it', () => {
    const wall = finding('thin-wall', { value: 32e-6, limit: 40e-6, unit: 'm' });
    const both = [entry({}), entry({ at: 'lane-2', upTo: 30e-6, by: 'KO' })];
    expect(judged(wall, ...both)).toHaveLength(1);
    expect(judged(wall, ...both)[0].accepted?.by).toBe('KO');
  });

  it('never accepts what makes the numbers themselves wrong, whatever the entry says', () => {
    const merged = finding('merged-walls', null);
    const [kept] = judged(merged, entry({ rule: 'merged-walls', upTo: null }));
    expect(kept.accepted).toBeNull();
  });

  it('reports an entry that matches nothing, with the line and where the rule did find something', () => {
    const wall = finding('thin-wall', { value: 36e-6, limit: 40e-6, unit: 'm' });
    const [, unmatched] = judged(wall, entry({ at: 'lane-7' }));
    expect(unmatched).toMatchObject({ rule: 'unmatched-accept', severity: 'caution', names: ['lane-7'] });
    expect(unmatched.message).toBe(
      'the accept entry in line 12 of the run sheet, thin-wall at lane-7, matches no finding; thin-wall findings are at lane-2 and lane-1',
    );
  });

  it('says of an unmatched entry when its rule was not run, and leaves rules of other commands alone', () => {
    const notRun = [{ rule: 'roof-span', why: 'limits.max_width_to_depth is not given' }];
    const entries = [entry({ rule: 'roof-span', upTo: 12 }), entry({ rule: 'pump-limit', upTo: null })];
    const found = acceptFindings([], notRun, entries, RULES, SHOW);
    expect(found).toHaveLength(1);
    expect(found[0].message).toContain('the rule was not run: limits.max_width_to_depth is not given');
  });
});
