import { passagesOf } from '../asked/passages.ts';
import { reachesOfChannel } from '../asked/reaches.ts';
import { asksOf, type WindowAsk, wallsOf } from '../asked/windows.ts';
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
import type { ChannelEntry, Window } from '../runsheet/types.ts';
import { reachState } from '../solve/reach-state.ts';
import type { FindingContext } from './context.ts';
import { middleOfReach, worstReach } from './reaches.ts';
import { notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { listText, showFor } from './words.ts';

/** Does every channel with a window keep it. */
export const windowRules: readonly Rule[] = [
  windowRule('shear-window', 'wall_shear', ({ wallShear: window }) => window),
  windowRule('residence-window', 'residence_time', ({ residenceTime }) => residenceTime),
  windowRule('flow-window', 'flow', ({ flow }) => flow),
];

/** A channel of which something is asked, and its reaches whose flow is known. */
interface Watched {
  readonly channel: Channel;
  readonly settings: ChannelEntry;
  readonly reaches: readonly number[];
}

function windowRule(
  name: WindowAsk['rule'],
  key: string,
  windowOf: (settings: ChannelEntry) => Window | null,
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
        if (settings === null || windowOf(settings) === null) return;
        asked++;
        const all = Array.from(reachesOfChannel(context.network, c));
        const reaches = all.filter((reach) => reachState(context, reach) !== null);
        if (reaches.length < all.length || all.length === 0) unknown.push(channel.name);
        for (const ask of asksOf(settings)) {
          if (ask.rule === name) findings.push(...notKept(context, { channel, settings, reaches }, ask));
        }
      });
      if (asked === 0) return notRun(name, `no channel is given a ${key} window`);
      if (unknown.length === 0) return { findings, notRun: [] };
      return { findings, notRun: notRun(name, `the flow through ${listText(unknown)} is not known`).notRun };
    },
  };
}

/** Where a number is not kept: a reach, or a passage of several. */
interface Fault {
  readonly value: number;
  readonly wall: Wall;
  /** Of the first reach. */
  readonly state: DuctState;
  readonly reaches: readonly number[];
  /** Of the reach, or of the channel for several. */
  readonly name: string;
  /** " (and in 3 more reaches of lane)" */
  readonly others: string;
}

/** The worst place of a channel at which what is asked is not kept; nothing where it is. */
function notKept(context: FindingContext, watched: Watched, ask: WindowAsk): Finding[] {
  const { network, flow } = context;
  if (flow === null) return [];
  const { channel, settings, reaches } = watched;
  const places: (readonly number[])[] =
    ask.of.kind === 'time' ? passagesOf(network, reaches, flow.reachFlow) : reaches.map((reach) => [reach]);
  const walls: readonly Wall[] = ask.rule === 'shear-window' ? wallsOf(settings) : ['floor'];
  const isLow = ask.side === 'least';
  const isFault = (value: number): boolean => (isLow ? isBelow(value, ask.limit) : isAbove(value, ask.limit));
  const badness = (value: number): number => (isLow ? 1 / (value / ask.limit + 1) : value);
  const worst = worstReach(
    places.keys(),
    (place) => {
      const faults = walls
        .map((wall) => ({ value: valueAt(context, ask, places[place], wall), wall }))
        .filter(({ value }) => isFault(value));
      return faults.length === 0
        ? null
        : faults.reduce((most, one) => (badness(one.value) > badness(most.value) ? one : most));
    },
    ({ value }) => badness(value),
  );
  if (worst === null) return [];
  const at = places[worst.reach];
  const name = at.length === 1 ? reachName(network, at[0]) : channel.name;
  const more = worst.faulty.length - 1;
  const others =
    more === 0 ? '' : ` (and in ${more} more ${more === 1 ? 'reach' : 'reaches'} of ${channel.name})`;
  const otherPlaces = worst.faulty.filter((place) => place !== worst.reach).map((place) => places[place]);
  const fault: Fault = { ...worst.fault, state: knownState(context, at[0]), reaches: at, name, others };
  return [
    toFinding(ask.rule, 'blocker', {
      ...SAY[ask.rule](context, watched, ask, fault),
      at: middleOfReach(network, at[at.length >> 1]),
      names: [
        ...new Set([
          name,
          channel.name,
          ...[at, ...otherPlaces].flat().map((reach) => reachName(network, reach)),
        ]),
      ],
      measure: {
        value: Number.isFinite(fault.value) ? fault.value : null,
        limit: ask.limit,
        unit: UNITS[ask.of.kind],
      },
    }),
  ];
}

const UNITS: Readonly<Record<WindowAsk['of']['kind'], string>> = {
  shear: 'Pa',
  'share inside': '',
  time: 's',
  flow: 'm³/s',
};

function valueAt(context: FindingContext, { of }: WindowAsk, reaches: readonly number[], wall: Wall): number {
  const state = knownState(context, reaches[0]);
  switch (of.kind) {
    case 'shear':
      return wallShear(state, wall, of.at);
    case 'share inside':
      return shareInside(state, wall, of.range);
    case 'flow':
      return state.flowM3s;
    case 'time': {
      const timeOf = of.at === 'mean' ? meanTime : fastestTime;
      return reaches.reduce(
        (sum, reach) => sum + timeOf(knownState(context, reach), roomLengthM(context.network, reach)),
        0,
      );
    }
    default:
      return of satisfies never;
  }
}

/** Of a reach whose flow is known: the others were left out. */
function knownState(context: FindingContext, reach: number): DuctState {
  const state = reachState(context, reach);
  if (state === null) throw new RangeError('a window is judged where the flow is known');
  return state;
}

type Said = Pick<Finding, 'message' | 'fix'>;

const SAY: Readonly<
  Record<WindowAsk['rule'], (context: FindingContext, watched: Watched, ask: WindowAsk, fault: Fault) => Said>
> = { 'shear-window': sayShear, 'residence-window': sayTime, 'flow-window': sayFlow };

/* ---------- wall shear ---------- */

function sayShear(context: FindingContext, { settings }: Watched, ask: WindowAsk, fault: Fault): Said {
  const show = showFor(context);
  const { value, wall, name, others } = fault;
  if (ask.of.kind === 'share inside') return sayShare(context, settings, ask.limit, fault);
  const [measure, side] = ask.side === 'least' ? ['mean', 'below'] : ['peak', 'above'];
  return {
    message: `the ${measure} wall shear on the ${wall} of ${name} is ${show.text('wall_shear', value)}, ${side} the ${ask.side} of ${show.text('wall_shear', ask.limit)}${others}`,
    fix: shearFix(context, settings, fault),
  };
}

/** The flows that keep the window are known at once. */
function shearFix(
  context: FindingContext,
  settings: ChannelEntry,
  { name, state: { form, flowM3s } }: Fault,
): string {
  const show = showFor(context);
  const { min, max } = settings.wallShear ?? NO_WINDOW;
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

const NO_WINDOW: Window = { min: null, max: null };

function sayShare(
  context: FindingContext,
  { wallShear: window }: ChannelEntry,
  over: number,
  { value, wall, state, name, others }: Fault,
): Said {
  const show = showFor(context);
  const { min, max } = window ?? NO_WINDOW;
  const mean = wallShear(state, wall, 'mean');
  const peak = wallShear(state, wall, 'peak');
  const isLow = min !== null && mean < min;
  const isHigh = max !== null && peak > max;
  const now = `(now ${show.text('flow', state.flowM3s)})`;
  const fix =
    isLow && !isHigh
      ? `send more through ${name} ${now}, or make it narrower or shallower`
      : isHigh && !isLow
        ? `send less through ${name} ${now}, or make it wider or deeper`
        : `make ${name} flatter, so that its shear is more even, or the window wider`;
  return {
    message: `${formatShare(value)} of the ${wall} of ${name} has its wall shear ${windowText(context, 'wall_shear', { min, max })}; ${formatShare(over)} is asked for (mean ${show.text('wall_shear', mean)}, peak ${show.text('wall_shear', peak)})${others}`,
    fix,
  };
}

/* ---------- residence time ---------- */

function sayTime(
  context: FindingContext,
  _: Watched,
  { side, limit }: WindowAsk,
  { value: time, name, others }: Fault,
): Said {
  const show = showFor(context);
  const limitNow = show.text('residence_time', limit);
  if (!Number.isFinite(time)) {
    return {
      message: `nothing flows through ${name}, so the fluid stays for ever; at most ${limitNow} is allowed${others}`,
      fix: `lead a flow through ${name}, or take the window off it`,
    };
  }
  const timeNow = show.text('residence_time', time);
  return side === 'least'
    ? {
        message: `the fastest fluid passes ${name} in ${timeNow}, under the least of ${limitNow}${others}`,
        fix: `send ${formatNumber(limit / time)} times less through ${name}, or make it longer, wider or deeper`,
      }
    : {
        message: `fluid stays in ${name} for ${timeNow} on average, over the most of ${limitNow}${others}`,
        fix: `send ${formatNumber(time / limit)} times more through ${name}, or make it shorter, narrower or shallower`,
      };
}

/* ---------- flow ---------- */

function sayFlow(
  context: FindingContext,
  _: Watched,
  { side, limit }: WindowAsk,
  { value, name, others }: Fault,
): Said {
  const show = showFor(context);
  const isLow = side === 'least';
  const factor = isLow ? limit / value : value / limit;
  return {
    message: `${show.text('flow', value)} flows through ${name}, ${isLow ? 'below' : 'above'} the ${side} of ${show.text('flow', limit)}${others}`,
    fix: `${isLow ? 'raise' : 'lower'} what drives ${name}${value > 0 ? ` by a factor of ${formatNumber(factor)}` : ''}, or make its branch ${isLow ? 'wider, deeper or shorter' : 'narrower, shallower or longer'}`,
  };
}

function windowText(context: FindingContext, shown: Shown, { min, max }: Window): string {
  const show = showFor(context);
  if (min === null) return `at most ${show.text(shown, max)}`;
  if (max === null) return `at least ${show.text(shown, min)}`;
  return `between ${show.text(shown, min)} and ${show.text(shown, max)}`;
}
