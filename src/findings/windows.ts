import { passagesOf } from '../asked/passages.ts';
import { reachesOfChannel } from '../asked/reaches.ts';
import { wallsOf } from '../asked/windows.ts';
import { isAbove, isBelow } from '../asked/within.ts';
import type { Channel } from '../chip/types.ts';
import { roomLengthM } from '../network/lengths.ts';
import { reachName } from '../network/names.ts';
import {
  type DuctState,
  fastestTime,
  flowForShear,
  meanTime,
  type ShearAt,
  shareInside,
  shearPerGradient,
  type Wall,
  wallShear,
} from '../physics/duct-state.ts';
import { formatNumber, formatShare, type Shown } from '../runsheet/shown.ts';
import type { ChannelEntry, ShearWindow, Window } from '../runsheet/types.ts';
import { reachState } from '../solve/reach-state.ts';
import type { FindingContext } from './context.ts';
import { middleOfReach, othersText, reachNames, type Worst, worstReach } from './reaches.ts';
import { notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { listText, showFor } from './words.ts';

/** Does every channel with a window keep it. */
export const windowRules: readonly Rule[] = [
  windowRule('shear-window', 'wall_shear', ({ wallShear }) => wallShear, shearFindings),
  windowRule('residence-window', 'residence_time', ({ residenceTime }) => residenceTime, residenceFindings),
  windowRule('flow-window', 'flow', ({ flow }) => flow, flowFindings),
];

/** What is asked of one channel, and its reaches whose flow is known. */
interface Watched<W> {
  readonly channel: Channel;
  readonly settings: ChannelEntry;
  readonly window: W;
  readonly reaches: readonly number[];
}

function windowRule<W extends Window>(
  name: string,
  key: string,
  windowOf: (settings: ChannelEntry) => W | null,
  judge: (context: FindingContext, watched: Watched<W>) => readonly Finding[],
): Rule {
  return {
    names: [name],
    run: (context): RuleOutcome => {
      const { chip, run } = context;
      const findings: Finding[] = [];
      const unknown: string[] = [];
      let asked = 0;
      chip.channels.forEach((channel, c) => {
        const settings = run.channels[c];
        const window = settings === null ? null : windowOf(settings);
        if (settings === null || window === null) return;
        asked++;
        const all = Array.from(reachesOfChannel(context.network, c));
        const reaches = all.filter((reach) => reachState(context, reach) !== null);
        if (reaches.length < all.length || all.length === 0) unknown.push(channel.name);
        for (const finding of judge(context, { channel, settings, window, reaches })) findings.push(finding);
      });
      if (asked === 0) return notRun(name, `no channel is given a ${key} window`);
      if (unknown.length === 0) return { findings, notRun: [] };
      return { findings, notRun: notRun(name, `the flow through ${listText(unknown)} is not known`).notRun };
    },
  };
}

/* ---------- wall shear ---------- */

interface ShearFault {
  readonly value: number;
  readonly wall: Wall;
  readonly state: DuctState;
}

function shearFindings(context: FindingContext, watched: Watched<ShearWindow>): Finding[] {
  const { reaches, settings, window } = watched;
  const walls = wallsOf(settings);
  const { over, min, max } = window;
  const worst = (
    shareOrShear: (state: DuctState, wall: Wall) => number,
    isFault: (value: number) => boolean,
    badness: (value: number) => number,
  ): Worst<ShearFault> | null =>
    worstReach(
      reaches,
      (reach) => {
        // the caller leaves out reaches without a state
        const state = reachState(context, reach)!;
        let fault: ShearFault | null = null;
        for (const wall of walls) {
          const value = shareOrShear(state, wall);
          if (isFault(value) && (fault === null || badness(value) > badness(fault.value))) {
            fault = { value, wall, state };
          }
        }
        return fault;
      },
      ({ value }) => badness(value),
    );

  if (over !== null) {
    const range = { minPa: min, maxPa: max };
    const short = worst(
      (state, wall) => shareInside(state, wall, range),
      (share) => isBelow(share, over),
      (share) => 1 + over - share,
    );
    return short === null ? [] : [shareFinding(context, watched, short, over)];
  }
  const findings: Finding[] = [];
  const low =
    min === null
      ? null
      : worst(
          (state, wall) => wallShear(state, wall, 'mean'),
          (value) => isBelow(value, min),
          (value) => 1 / (value / min + 1),
        );
  if (low !== null && min !== null) findings.push(shearFinding(context, watched, low, 'below', min));
  const high =
    max === null
      ? null
      : worst(
          (state, wall) => wallShear(state, wall, 'peak'),
          (value) => isAbove(value, max),
          (value) => value,
        );
  if (high !== null && max !== null) findings.push(shearFinding(context, watched, high, 'above', max));
  return findings;
}

function shearFinding(
  context: FindingContext,
  watched: Watched<ShearWindow>,
  worst: Worst<ShearFault>,
  side: 'below' | 'above',
  limit: number,
): Finding {
  const { network } = context;
  const show = showFor(context);
  const { value, wall } = worst.fault;
  const name = reachName(network, worst.reach);
  const measure = side === 'below' ? 'mean' : 'peak';
  return toFinding('shear-window', 'blocker', {
    message: `the ${measure} wall shear on the ${wall} of ${name} is ${show.text('wall_shear', value)}, ${side} the ${side === 'below' ? 'least' : 'most'} of ${show.text('wall_shear', limit)}${othersText(context, worst)}`,
    fix: shearFix(context, watched, worst),
    at: middleOfReach(network, worst.reach),
    names: reachNames(context, worst),
    measure: { value, limit, unit: 'Pa' },
  });
}

/** The flows that keep the window are known at once. */
function shearFix(
  context: FindingContext,
  { settings, window: { min, max } }: Watched<ShearWindow>,
  { reach, fault }: Worst<ShearFault>,
): string {
  const show = showFor(context);
  const name = reachName(context.network, reach);
  const { form, flowM3s } = fault.state;
  const { fluid } = context.run;
  const walls = wallsOf(settings);
  const flowsFor = (at: ShearAt, shearPa: number): number[] =>
    walls.map((wall) => flowForShear(form, wall, at, shearPa, fluid));
  const least = min === null ? 0 : Math.max(...flowsFor('mean', min));
  const most = max === null ? Infinity : Math.min(...flowsFor('peak', max));
  if (isAbove(least, most)) {
    const mean = Math.min(...walls.map((wall) => shearPerGradient(form, wall, 'mean')));
    const peak = Math.max(...walls.map((wall) => shearPerGradient(form, wall, 'peak')));
    return `no flow keeps ${name} inside: its peak is ${formatNumber(peak / mean)} times its mean; make the window wider, ask for it over a share of the floor (over: 80 %), or make the channel flatter`;
  }
  const now = `(now ${show.text('flow', flowM3s)})`;
  if (flowM3s < least) {
    const upTo = most === Infinity ? ' or more' : ` to ${show.text('flow', most)}`;
    return `send ${show.text('flow', least)}${upTo} through ${name} ${now}, or make it narrower or shallower`;
  }
  const from = least === 0 ? 'at most ' : `${show.text('flow', least)} to `;
  return `send ${from}${show.text('flow', most)} through ${name} ${now}, or make it wider or deeper`;
}

function shareFinding(
  context: FindingContext,
  { window }: Watched<ShearWindow>,
  worst: Worst<ShearFault>,
  over: number,
): Finding {
  const { network } = context;
  const show = showFor(context);
  const { value, wall, state } = worst.fault;
  const name = reachName(network, worst.reach);
  const mean = wallShear(state, wall, 'mean');
  const peak = wallShear(state, wall, 'peak');
  const isLow = window.min !== null && mean < window.min;
  const isHigh = window.max !== null && peak > window.max;
  const fix =
    isLow && !isHigh
      ? `send more through ${name} (now ${show.text('flow', state.flowM3s)}), or make it narrower or shallower`
      : isHigh && !isLow
        ? `send less through ${name} (now ${show.text('flow', state.flowM3s)}), or make it wider or deeper`
        : `make ${name} flatter, so that its shear is more even, or the window wider`;
  return toFinding('shear-window', 'blocker', {
    message: `${formatShare(value)} of the ${wall} of ${name} has its wall shear ${windowText(context, 'wall_shear', window)}; ${formatShare(over)} is asked for (mean ${show.text('wall_shear', mean)}, peak ${show.text('wall_shear', peak)})${othersText(context, worst)}`,
    fix,
    at: middleOfReach(network, worst.reach),
    names: reachNames(context, worst),
    measure: { value, limit: over, unit: '' },
  });
}

/* ---------- residence time ---------- */

/** Reaches that fluid passes one after the other, with its times through all of them. */
interface Passage {
  readonly reaches: readonly number[];
  readonly meanS: number;
  readonly fastestS: number;
}

function residenceFindings(context: FindingContext, watched: Watched<Window>): Finding[] {
  const { min, max } = watched.window;
  const { network, flow } = context;
  if (flow === null) return [];
  const passages = passagesOf(network, watched.reaches, flow.reachFlow).map((reaches) =>
    passageOf(context, reaches),
  );
  const findings: Finding[] = [];
  if (min !== null) {
    const faults = passages.filter(({ fastestS }) => isBelow(fastestS, min));
    const worst = mostOf(faults, ({ fastestS }) => 1 / fastestS);
    if (worst !== null) findings.push(residenceFinding(context, worst, faults, 'below', min));
  }
  if (max !== null) {
    const faults = passages.filter(({ meanS }) => isAbove(meanS, max));
    const worst = mostOf(faults, ({ meanS }) => meanS);
    if (worst !== null) findings.push(residenceFinding(context, worst, faults, 'above', max));
  }
  return findings;
}

function passageOf(context: FindingContext, reaches: readonly number[]): Passage {
  let meanS = 0;
  let fastestS = 0;
  for (const reach of reaches) {
    // the caller leaves out reaches without a state
    const state = reachState(context, reach)!;
    const lengthM = roomLengthM(context.network, reach);
    meanS += meanTime(state, lengthM);
    fastestS += fastestTime(state, lengthM);
  }
  return { reaches, meanS, fastestS };
}

function mostOf(passages: readonly Passage[], badness: (passage: Passage) => number): Passage | null {
  let worst: Passage | null = null;
  for (const passage of passages) {
    if (worst === null || badness(passage) > badness(worst) * (1 + 1e-9)) worst = passage;
  }
  return worst;
}

function residenceFinding(
  context: FindingContext,
  worst: Passage,
  faults: readonly Passage[],
  side: 'below' | 'above',
  limit: number,
): Finding {
  const { network, chip } = context;
  const show = showFor(context);
  const [first] = worst.reaches;
  const channel = chip.channels[network.reachChannel[first]].name;
  const name = worst.reaches.length === 1 ? reachName(network, first) : channel;
  const time = side === 'below' ? worst.fastestS : worst.meanS;
  const more = faults.length - 1;
  const others = more === 0 ? '' : ` (and in ${more} more ${more === 1 ? 'reach' : 'reaches'} of ${channel})`;
  const limitNow = show.text('residence_time', limit);
  const otherReaches = faults.filter((fault) => fault !== worst).flatMap(({ reaches }) => reaches);
  const still = !Number.isFinite(time);
  const message = still
    ? `nothing flows through ${name}, so the fluid stays for ever; at most ${limitNow} is allowed`
    : side === 'below'
      ? `the fastest fluid passes ${name} in ${show.text('residence_time', time)}, under the least of ${limitNow}`
      : `fluid stays in ${name} for ${show.text('residence_time', time)} on average, over the most of ${limitNow}`;
  const fix = still
    ? `lead a flow through ${name}, or take the window off it`
    : side === 'below'
      ? `send ${formatNumber(limit / time)} times less through ${name}, or make it longer, wider or deeper`
      : `send ${formatNumber(time / limit)} times more through ${name}, or make it shorter, narrower or shallower`;
  return toFinding('residence-window', 'blocker', {
    message: `${message}${others}`,
    fix,
    at: middleOfReach(network, worst.reaches[worst.reaches.length >> 1]),
    names: [
      ...new Set([
        name,
        channel,
        ...worst.reaches.map((r) => reachName(network, r)),
        ...otherReaches.map((r) => reachName(network, r)),
      ]),
    ],
    measure: { value: still ? null : time, limit, unit: 's' },
  });
}

/* ---------- flow ---------- */

function flowFindings(context: FindingContext, { reaches, window }: Watched<Window>): Finding[] {
  const { network, flow } = context;
  if (flow === null) return [];
  const show = showFor(context);
  const { min, max } = window;
  const flowOf = (reach: number): number => Math.abs(flow.reachFlow[reach]);
  const low =
    min === null
      ? null
      : worstReach(
          reaches,
          (reach) => (isBelow(flowOf(reach), min) ? flowOf(reach) : null),
          (value) => 1 / (value / min + 1),
        );
  const high =
    max === null
      ? null
      : worstReach(
          reaches,
          (reach) => (isAbove(flowOf(reach), max) ? flowOf(reach) : null),
          (value) => value,
        );
  const findings: Finding[] = [];
  if (low !== null && min !== null) findings.push(flowFinding(low, 'below', min));
  if (high !== null && max !== null) findings.push(flowFinding(high, 'above', max));
  return findings;

  function flowFinding(worst: Worst<number>, side: 'below' | 'above', limit: number): Finding {
    const name = reachName(network, worst.reach);
    const limitNow = show.text('flow', limit);
    const isLow = side === 'below';
    return toFinding('flow-window', 'blocker', {
      message: `${show.text('flow', worst.fault)} flows through ${name}, ${side} the ${isLow ? 'least' : 'most'} of ${limitNow}${othersText(context, worst)}`,
      fix: `${isLow ? 'raise' : 'lower'} what drives ${name}${worst.fault > 0 ? ` by a factor of ${formatNumber(isLow ? limit / worst.fault : worst.fault / limit)}` : ''}, or make its branch ${isLow ? 'wider, deeper or shorter' : 'narrower, shallower or longer'}`,
      at: middleOfReach(network, worst.reach),
      names: reachNames(context, worst),
      measure: { value: worst.fault, limit, unit: 'm³/s' },
    });
  }
}

function windowText(context: FindingContext, shown: Shown, { min, max }: Window): string {
  const show = showFor(context);
  if (min === null) return `at most ${show.text(shown, max)}`;
  if (max === null) return `at least ${show.text(shown, min)}`;
  return `between ${show.text(shown, min)} and ${show.text(shown, max)}`;
}
