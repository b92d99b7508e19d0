import { evenGroupsOf } from '../asked/even.ts';
import { reachesOfChannel } from '../asked/reaches.ts';
import { isAbove } from '../asked/within.ts';
import { reachName } from '../network/names.ts';
import { formatNumber, formatShare } from '../runsheet/shown.ts';
import { drivesOf } from '../solve/drives.ts';
import { factorFlow, flowStateOf, kindsOf, prepareFlow } from '../solve/flow-state.ts';
import type { FindingContext } from './context.ts';
import { middleOfReach } from './reaches.ts';
import { notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { countText, listText, showFor } from './words.ts';

/** Does every channel of a group that is to be even take its share. */
export const unevenRules: readonly Rule[] = [{ names: ['uneven-flow'], run: unevenFlow }];

/** One channel of a group, at the reach that carries most. */
export interface Lane {
  readonly name: string;
  readonly reach: number;
  /** m³/s, a size. */
  readonly flowM3s: number;
  /** Pa s/m³ of all its reaches in terms of that flow: what it takes of the pressure, by its flow. */
  readonly resistance: number;
}

/** Each ratio is found by some ten solutions of the chip, so a sheet of many such entries gets no more than this. */
const MOST_RATIOS = 5;

/** One finding per entry with `even`, at the channel that lies farthest from the mean of all that match its name. */
function unevenFlow(context: FindingContext): RuleOutcome {
  const { chip, run, flow } = context;
  const asked = evenGroupsOf(chip, run);
  if (asked.length === 0) return notRun('uneven-flow', 'no channels are asked to be even');
  if (flow === null) return notRun('uneven-flow', 'nothing was solved');
  const findings: Finding[] = [];
  const whys: string[] = [];
  for (const { key, even, members } of asked) {
    const lanes = members.flatMap((channel) => laneOf(context, channel) ?? []);
    const unknown = members.length - lanes.length;
    if (members.length < 2) whys.push(`${key} is one channel, which has nothing to be even with`);
    else if (unknown > 0)
      whys.push(`the flow through ${countText(unknown, 'channel')} of ${key} is not known`);
    else if (lanes.every(({ flowM3s }) => flowM3s === 0)) whys.push(`nothing flows through ${key}`);
    else {
      const finding = judge(context, key, even, lanes, findings.length < MOST_RATIOS);
      if (finding !== null) findings.push(finding);
    }
  }
  return { findings, notRun: whys.map((why) => ({ rule: 'uneven-flow', why })) };
}

function laneOf(context: FindingContext, channel: number): Lane | null {
  const { chip, flow } = context;
  if (flow === null) return null;
  let most = -1;
  let dropPa = 0;
  for (const reach of reachesOfChannel(context.network, channel)) {
    const flowM3s = Math.abs(flow.reachFlow[reach]);
    if (Number.isNaN(flowM3s)) return null;
    dropPa += Math.abs(flow.reachPressureDrop[reach]);
    // of flows that differ by rounding only the first drawn, so that a turned drawing points at the same place
    if (most < 0 || flowM3s > Math.abs(flow.reachFlow[most]) * (1 + 1e-9)) most = reach;
  }
  if (most < 0) return null;
  const flowM3s = Math.abs(flow.reachFlow[most]);
  const resistance = flowM3s > 0 ? dropPa / flowM3s : flow.reachResistance[most];
  return { name: chip.channels[channel].name, reach: most, flowM3s, resistance };
}

function judge(
  context: FindingContext,
  key: string,
  even: number,
  lanes: readonly Lane[],
  withRatio: boolean,
): Finding | null {
  const mean = meanOf(lanes.map(({ flowM3s }) => flowM3s));
  const offBy = ({ flowM3s }: Lane): number => Math.abs(flowM3s - mean) / mean;
  const outside = lanes.filter((lane) => isAbove(offBy(lane), even));
  if (outside.length === 0) return null;
  // of equally far ones the first drawn
  const worst = outside.reduce((a, b) => (offBy(b) > offBy(a) * (1 + 1e-9) ? b : a));
  const least = lanes.reduce((a, b) => (b.flowM3s < a.flowM3s * (1 - 1e-9) ? b : a));
  const most = lanes.reduce((a, b) => (b.flowM3s > a.flowM3s * (1 + 1e-9) ? b : a));
  const show = showFor(context);
  const { network } = context;
  const side = worst.flowM3s > mean ? 'above' : 'below';
  const others = outside.length - 1;
  const also =
    others === 0
      ? ''
      : ` (and ${others} more ${others === 1 ? 'lies' : 'lie'} outside ±${formatShare(even)})`;
  return toFinding('uneven-flow', 'blocker', {
    message: `${show.text('flow', worst.flowM3s)} flows through ${worst.name}, ${formatShare(offBy(worst))} ${side} the mean of ${show.text('flow', mean)} of the ${lanes.length} channels ${key}, which are to be within ±${formatShare(even)}; they spread from ${show.text('flow', least.flowM3s)} in ${least.name} to ${show.text('flow', most.flowM3s)} in ${most.name}${also}`,
    fix: fixText(
      lanes,
      worst,
      even,
      withRatio && unlikeLanes(lanes, even).length === 0 ? timesToEven(context, even, lanes) : null,
    ),
    at: middleOfReach(network, worst.reach),
    names: [...new Set([worst.name, reachName(network, worst.reach), ...outside.map(({ name }) => name)])],
    measure: { value: offBy(worst), limit: even, unit: '' },
  });
}

/** Channels that resist alike get unlike flows from what feeds them; others from themselves. */
function fixText(lanes: readonly Lane[], worst: Lane, even: number, times: number | null): string {
  const mean = meanOf(lanes.map(({ resistance }) => resistance));
  const unlike = unlikeLanes(lanes, even);
  if (unlike.length > 0) {
    const odd = unlike.reduce((a, b) => (oddness(b, mean) > oddness(a, mean) * (1 + 1e-9) ? b : a));
    const rest = unlike.filter((lane) => lane !== odd).map(({ name }) => name);
    const also =
      rest.length === 0 ? '' : `, and ${listText(rest)} ${rest.length === 1 ? 'differs' : 'differ'} too`;
    return `make the channels alike in length, width and depth: ${odd.name} resists ${formatNumber(odd.resistance / mean)} times the mean of them all${also}; or give each the length that makes up for what feeds it`;
  }
  if (times === null)
    return `the channels are alike, but what drives them is not: give each the same flow or pressure, or lead ways of one length and width to all of them from one supply (${worst.name} differs most)`;
  const ratio = roundedUp(times);
  return `the channels are alike, but the headers and feeders between them take unlike pressures: bring the resistance of those to 1/${formatNumber(ratio)} of what it is (about ${formatNumber(ratio)} times as wide where they are flat, or ${formatNumber(roundedUp(Math.cbrt(times)))} times as deep), or that of the channels to ${formatNumber(ratio)} times; or lead ways of equal length to all of them`;
}

function unlikeLanes(lanes: readonly Lane[], even: number): readonly Lane[] {
  const mean = meanOf(lanes.map(({ resistance }) => resistance));
  return lanes.filter(({ resistance }) => isAbove(Math.abs(resistance - mean) / mean, even));
}

function oddness({ resistance }: Lane, mean: number): number {
  return Math.abs(Math.log(resistance / mean));
}

/** Two digits, rounded up so that doing it is enough. */
function roundedUp(times: number): number {
  const step = 10 ** (Math.floor(Math.log10(times)) - 1);
  return Number((Math.ceil(times / step - 1e-9) * step).toPrecision(2));
}

const MOST_TIMES = 1e5;
/** How near the ratio is found, as a quotient. */
const RATIO_WITHIN = 1.01;

/**
 * How many times the channels must resist what they do for their flows to be even, or the headers be that much easier;
 * null when no ratio will do. Found by solving the chip with the channels' resistance raised.
 *
 * Why a ratio: a channel's flow is (P − h)/R, with P the pressure between the ends of the headers and h what these take on
 * the way to the channel and back. Channels of one R differ by h/R alone, which is proportional to the headers' resistance
 * over R, so d off the mean calls for about d/e times the ratio. It takes more where d is large: evened out, the far parts
 * of the headers carry more than they do. Two channels at the ends of one header of resistance r: d = r/(2R + r), so the
 * ratio is d (1 − e)/(e (1 − d)).
 */
export function timesToEven(context: FindingContext, even: number, lanes: readonly Lane[]): number | null {
  const { network, run } = context;
  const prepared = prepareFlow(network, run);
  const drives = drivesOf(run);
  const channels = new Set(lanes.map(({ reach }) => network.reachChannel[reach]));
  const isEvenAt = (times: number): boolean => {
    const reach = prepared.nominal.reach.map((resistance, r) =>
      channels.has(network.reachChannel[r]) ? resistance * times : resistance,
    );
    const resistances = { reach, tubing: prepared.nominal.tubing };
    const { reachFlow } = flowStateOf(factorFlow(prepared, kindsOf(drives), resistances), drives);
    const flows = lanes.map((lane) => Math.abs(reachFlow[lane.reach]));
    const mean = meanOf(flows);
    return flows.every((flow) => !isAbove(Math.abs(flow - mean) / mean, even));
  };
  let low = 1;
  let high = 2;
  while (!isEvenAt(high)) {
    if (high > MOST_TIMES) return null;
    low = high;
    high *= 4;
  }
  while (high / low > RATIO_WITHIN) {
    const middle = Math.sqrt(low * high);
    if (isEvenAt(middle)) high = middle;
    else low = middle;
  }
  return high;
}

function meanOf(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}
