import { DEFAULT_JOINTS } from '../chip/defaults.ts';
import type { RunSheet } from '../runsheet/types.ts';
import type { FindingContext } from './context.ts';
import { type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { listText } from './words.ts';

/** What the run sheet asks for and this program does not compute yet: each is held, so that nobody takes silence for an answer. */
export const notComputedRules: readonly Rule[] = [rule('not-computed', notComputed)];

/** One part of the run sheet that waits for its computation. */
interface Waiting {
  /** Channels, ports, shapes, layers or solutes concerned, as written in the run sheet. */
  readonly names: readonly string[];
  /** "… is not computed yet" */
  readonly what: string;
  /** What the result gives without it. */
  readonly instead: string;
  /** What to take out of the run sheet. */
  readonly key: string;
}

function notComputed({ run }: FindingContext): Finding[] {
  if (run.sheet === null) return [];
  return waitingParts(run.sheet).map(({ names, what, instead, key }) =>
    toFinding('not-computed', 'blocker', {
      message: `${what} is not computed yet: ${instead}`,
      fix: `take ${key} out of the run sheet to go on without it, and answer it by other means`,
      at: null,
      names,
    }),
  );
}

/** A part leaves this list with the issue that computes it. */
function waitingParts(sheet: RunSheet): readonly Waiting[] {
  const { solutes, junctions, fields, pillars, joints } = sheet;
  const parts: Waiting[] = [];
  const add = (names: readonly string[], part: (list: string) => Omit<Waiting, 'names'>): void => {
    if (names.length > 0) parts.push({ names, ...part(listText(names, 8)) });
  };
  const oneFluid = 'pressures and flows are those of one fluid';
  add(Object.keys(solutes), (list) => ({
    what: `what the fluids carry (solutes: ${list})`,
    instead: oneFluid,
    key: 'solutes, with every concentration and mixing of them,',
  }));
  add(namesWith(sheet.ports, 'concentration'), (list) => ({
    what: `the concentration fed at ${list}`,
    instead: oneFluid,
    key: `concentration at ${list}`,
  }));
  add(namesWith(sheet.channels, 'concentration'), (list) => ({
    what: `the concentration asked in ${list}`,
    instead: 'it is not checked',
    key: `concentration at ${list}`,
  }));
  add(namesWith(sheet.channels, 'mixing'), (list) => ({
    what: `the mixing asked of ${list}`,
    instead: 'it is not checked',
    key: `mixing at ${list}`,
  }));
  add([...new Set(sheet.concentrationTargets.map(({ name }) => name))], (list) => ({
    what: `a setting for the concentration at ${list}`,
    instead: 'none is sought',
    key: `the targets of concentration at ${list}`,
  }));
  if (junctions !== null) {
    parts.push({
      names: [],
      what: `how streams meet (junctions: ${junctions})`,
      instead: oneFluid,
      key: 'junctions',
    });
  }
  if (sheet.switch !== null) {
    const { from, reach } = sheet.switch;
    parts.push({
      names: [...(from ?? []), ...(reach === null ? [] : [reach])],
      what: 'how soon a change of fluid arrives (switch)',
      instead: 'no time of arrival is given or checked',
      key: 'switch',
    });
  }
  add(fields, (list) => ({
    what: `the flow in two dimensions in ${list} (fields)`,
    instead:
      'a chamber drawn as a stroke is counted as a channel, and one drawn as a filled shape is left out',
    key: 'fields',
  }));
  add(pillars, (list) => ({
    what: `the flow round the pillars of ${list}`,
    instead: 'they are left out',
    key: 'pillars',
  }));
  if (joints === 'computed') {
    parts.push({
      names: [],
      what: 'each corner and junction by itself (joints: computed)',
      instead: `they are counted as with joints: ${DEFAULT_JOINTS}`,
      key: 'joints: computed',
    });
  }
  return parts;
}

function namesWith<K extends string>(
  entries: Readonly<Record<string, Readonly<Record<K, unknown>>>>,
  key: K,
): string[] {
  return Object.keys(entries).filter((name) => entries[name][key] !== null);
}
