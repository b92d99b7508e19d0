import { reachesOfChannel } from '../asked/reaches.ts';
import { isAbove, isBelow } from '../asked/within.ts';
import { roomLengthM } from '../network/lengths.ts';
import { nodeName, reachName } from '../network/names.ts';
import { NODE_KINDS } from '../network/types.ts';
import { CURVED_FLOW_DEAN, deanNumber } from '../physics/dean.ts';
import { entranceLength, spreadingLength } from '../physics/entrance.ts';
import { formatNumber } from '../runsheet/shown.ts';
import { reachState } from '../solve/reach-state.ts';
import type { FindingContext } from './context.ts';
import { type Opening, openingsAt, reachesAtNodes } from './openings.ts';
import { alongReach, middleOfReach, othersText, reachNames, worstReach } from './reaches.ts';
import { found, notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { countText, limitText, showFor } from './words.ts';

/** Is the flow the laminar, developed one of a straight duct that everything was computed with. */
export const regimeRules: readonly Rule[] = [
  { names: ['not-laminar'], run: (context) => ifFlowIsKnown(context, 'not-laminar', notLaminar) },
  { names: ['developing-flow'], run: (context) => ifFlowIsKnown(context, 'developing-flow', developingFlow) },
  { names: ['curved-flow'], run: (context) => ifFlowIsKnown(context, 'curved-flow', curvedFlow) },
  { names: ['short-reach'], run: (context) => found(shortReach(context)) },
];

function ifFlowIsKnown(
  context: FindingContext,
  rule: string,
  run: (context: FindingContext) => Finding[],
): RuleOutcome {
  const { flow, network } = context;
  if (flow === null) return notRun(rule, 'nothing was solved');
  if (network.reachCount > 0 && flow.reachFlow.every(Number.isNaN)) {
    return notRun(rule, 'no flow in the chip is known');
  }
  return found(run(context));
}

/** One finding per channel, at its fastest reach. */
function notLaminar(context: FindingContext): Finding[] {
  const { chip, run, network } = context;
  const limit = run.limits.maxReynolds;
  const show = showFor(context);
  return chip.channels.flatMap((_, c) => {
    const worst = worstReach(
      reachesOfChannel(context.network, c),
      (reach) => {
        const state = reachState(context, reach);
        return state !== null && isAbove(state.reynolds, limit.value) ? state : null;
      },
      ({ reynolds }) => reynolds,
    );
    if (worst === null) return [];
    const { reynolds, flowM3s } = worst.fault;
    const name = reachName(network, worst.reach);
    return [
      toFinding('not-laminar', 'blocker', {
        message: `the Reynolds number in ${name} is ${formatNumber(reynolds)}; the flow counts as laminar up to ${limitText(formatNumber(limit.value), limit)}${othersText(context, worst)}`,
        fix: `send at most ${show.text('flow', (flowM3s * limit.value) / reynolds)} through ${name} (now ${show.text('flow', flowM3s)}), or make it wider or deeper`,
        at: middleOfReach(network, worst.reach),
        names: reachNames(context, worst),
        measure: { value: reynolds, limit: limit.value, unit: '' },
      }),
    ];
  });
}

/* ---------- developing flow ---------- */

/** Share of a reach that may be taken up by developing flow without a word. */
const DEVELOPING_SHARE = 0.1;

interface Developing {
  readonly lengthM: number;
  readonly developingM: number;
  readonly limitM: number;
  readonly hydraulicDiameterM: number;
  readonly opening: Opening | null;
  /** Before the outlet the flow gathers again, by the same length as it would spread. */
  readonly gatheringM: number;
  readonly isReversed: boolean;
}

/**
 * One finding per channel, at the reach of which developing flow takes the largest share: the longer of the entrance
 * length and the length over which a narrower feeder's flow spreads. Reaches without flow have none to develop.
 */
function developingFlow(context: FindingContext): Finding[] {
  const { chip, network } = context;
  const atNodes = reachesAtNodes(context);
  return chip.channels.flatMap((_, c) => {
    const worst = worstReach(
      reachesOfChannel(context.network, c),
      (reach) => lookAt(reach),
      ({ developingM, limitM }) => developingM / limitM,
    );
    if (worst === null) return [];
    const { developingM, limitM, hydraulicDiameterM, opening, isReversed } = worst.fault;
    const show = showFor(context);
    const name = reachName(network, worst.reach);
    const start = nodeName(network, (isReversed ? network.reachTo : network.reachFrom)[worst.reach]);
    const cause =
      opening === null
        ? `the flow that enters ${name} at ${start} needs ${show.text('length', developingM)} to develop`
        : `${reachName(network, opening.feeder)} opens into ${name} ${opening.side === 'axis' ? 'on its axis' : 'off its axis'} at ${start}, and its flow needs ${show.text('length', developingM)} to spread`;
    const remedy =
      opening !== null
        ? ', lead the flow in through a taper or several feeders'
        : entranceLength(0, hydraulicDiameterM) < limitM
          ? ' or send less through it'
          : '';
    const longerM = developingM / DEVELOPING_SHARE;
    return [
      toFinding('developing-flow', 'caution', {
        message: `${cause}, more than a tenth of the reach (${show.text('length', worst.fault.lengthM)}): ${holdsText(context, worst.reach, worst.fault)}${othersText(context, worst)}`,
        fix: `make ${name} ${show.text('length', longerM)} long or longer${remedy}, or read its wall shear only where it is developed`,
        at: alongReach(network, worst.reach, placeMm(context, worst.reach, worst.fault)),
        names: reachNames(context, worst),
        measure: { value: developingM, limit: limitM, unit: 'm' },
      }),
    ];
  });

  function lookAt(reach: number): Developing | null {
    const state = reachState(context, reach);
    if (state === null || state.flowM3s === 0 || context.flow === null) return null;
    const isReversed = context.flow.reachFlow[reach] < 0;
    const lengthM = roomLengthM(network, reach);
    const limitM = lengthM * DEVELOPING_SHARE;
    const opening = longestOpening(openingsAt(context, atNodes, reach, isReversed ? 'to' : 'from', 'in'));
    const spreadingM = opening === null ? 0 : spreadingLength(state.form.widthM, opening.side);
    const developingM = Math.max(state.entranceM, spreadingM);
    if (!isAbove(developingM, limitM)) return null;
    const outlet = longestOpening(openingsAt(context, atNodes, reach, isReversed ? 'from' : 'to', 'out'));
    const gatheringM = outlet === null ? 0 : spreadingLength(state.form.widthM, outlet.side);
    const cause = spreadingM >= state.entranceM ? opening : null;
    const { hydraulicDiameterM } = state.form;
    return { lengthM, developingM, limitM, hydraulicDiameterM, opening: cause, gatheringM, isReversed };
  }
}

function longestOpening(openings: readonly Opening[]): Opening | null {
  return openings.find(({ side }) => side === 'edge') ?? openings[0] ?? null;
}

function placeMm(
  { network }: FindingContext,
  reach: number,
  { developingM, isReversed }: Developing,
): number {
  const drawn = network.reachDrawnMm[reach];
  const along = Math.min(drawn, developingM * 1e3);
  return isReversed ? drawn - along : along;
}

/** From where to where a window on the reach holds, in the direction of the flow. */
function holdsText(context: FindingContext, reach: number, developing: Developing): string {
  const { network, run } = context;
  const { lengthM, developingM, gatheringM, isReversed } = developing;
  const show = showFor(context);
  const [from, to] = isReversed
    ? [network.reachTo[reach], network.reachFrom[reach]]
    : [network.reachFrom[reach], network.reachTo[reach]];
  const settings = run.channels[network.reachChannel[reach]];
  const what = settings?.wallShear ? 'its wall shear window holds' : 'the computed wall shear holds';
  if (developingM + gatheringM >= lengthM) return `${what} nowhere in it`;
  const until =
    gatheringM === 0
      ? nodeName(network, to)
      : `${show.text('length', gatheringM)} before ${nodeName(network, to)}`;
  return `${what} only from ${show.text('length', developingM)} after ${nodeName(network, from)} to ${until}`;
}

/* ---------- curvature ---------- */

/** One finding per channel, at its bend of the largest Dean number. */
function curvedFlow(context: FindingContext): Finding[] {
  const { chip, network } = context;
  return chip.channels.flatMap((_, c) => {
    const worst = worstReach(
      reachesOfChannel(context.network, c),
      (reach) => {
        const tightest = tightestBend(context, reach);
        const state = tightest === null ? null : reachState(context, reach);
        if (tightest === null || state === null) return null;
        const dean = deanNumber(state.reynolds, state.form.hydraulicDiameterM, tightest.radiusMm / 1e3);
        return isAbove(dean, CURVED_FLOW_DEAN) ? { ...tightest, dean } : null;
      },
      ({ dean }) => dean,
    );
    if (worst === null) return [];
    const { dean, radiusMm, xMm, yMm } = worst.fault;
    const name = reachName(network, worst.reach);
    const show = showFor(context);
    return [
      toFinding('curved-flow', 'note', {
        message: `the Dean number in the bend of ${name} (radius ${show.text('length', radiusMm / 1e3)}) is ${formatNumber(dean)}: above ${CURVED_FLOW_DEAN} the flow swirls, and resistance and wall shear are higher there than in the straight duct computed${othersText(context, worst)}`,
        fix: `draw the bend with a radius of ${show.text('length', (radiusMm / 1e3) * (dean / CURVED_FLOW_DEAN) ** 2)} or more, or send less through ${name}, if that matters`,
        at: { xMm, yMm },
        names: reachNames(context, worst),
        measure: { value: dean, limit: CURVED_FLOW_DEAN, unit: '' },
      }),
    ];
  });
}

function tightestBend({ network }: FindingContext, reach: number) {
  let radiusMm = Number.POSITIVE_INFINITY;
  let first = -1;
  let last = -1;
  for (let s = network.firstSegment[reach]; s < network.firstSegment[reach + 1]; s++) {
    const bend = network.segmentBendRadiusMm[s];
    if (bend === 0) continue;
    if (bend < radiusMm * (1 - 1e-6)) {
      radiusMm = bend;
      first = s;
      last = s;
    } else if (last === s - 1 && bend <= radiusMm * (1 + 1e-6)) last = s;
  }
  if (first < 0) return null;
  const middle = (first + last) >> 1;
  // the middle of the arc, whether it was cut into an even or an odd number of chords
  const isOdd = (last - first) % 2 === 0;
  const xMm = isOdd ? (network.segmentX1[middle] + network.segmentX2[middle]) / 2 : network.segmentX2[middle];
  const yMm = isOdd ? (network.segmentY1[middle] + network.segmentY2[middle]) / 2 : network.segmentY2[middle];
  return { radiusMm, xMm, yMm };
}

/* ---------- short reaches ---------- */

/** Widths of duct per joint below which the joints are a noticeable share of a reach's resistance. */
const WIDTHS_PER_JOINT = 10;
/** … and below which a computation that leaves them out should not be trusted. */
const WIDTHS_PER_JOINT_LEFT_OUT = 5;

/** One finding per channel, at its shortest reach for its joints. A reach that nothing flows through adds nothing. */
function shortReach(context: FindingContext): Finding[] {
  const { chip, network, flow } = context;
  return chip.channels.flatMap((channel, c) => {
    const widthMm = channel.ductWidthMm;
    if (Number.isNaN(widthMm)) return [];
    const worst = worstReach(
      reachesOfChannel(context.network, c),
      (reach) => {
        if (flow !== null && flow.reachFlow[reach] === 0) return null;
        const joints = jointsOf(context, reach);
        if (joints === 0) return null;
        const lengthMm = roomLengthM(network, reach) * 1e3;
        const ratio = lengthMm / (widthMm * joints);
        return isBelow(ratio, WIDTHS_PER_JOINT) ? { ratio, joints, lengthMm } : null;
      },
      ({ ratio }) => 1 / (ratio + 1),
    );
    if (worst === null) return [];
    const { ratio, joints, lengthMm } = worst.fault;
    const isLeftOut = chip.joints === 'centreline' && isBelow(ratio, WIDTHS_PER_JOINT_LEFT_OUT);
    const limit = isLeftOut ? WIDTHS_PER_JOINT_LEFT_OUT : WIDTHS_PER_JOINT;
    const name = reachName(network, worst.reach);
    const show = showFor(context);
    const model =
      chip.joints === 'centreline'
        ? 'what the joints add of their own was left out'
        : 'what the joints add of their own was computed one by one, as if they did not feel each other';
    return [
      toFinding('short-reach', isLeftOut ? 'caution' : 'note', {
        message: `${name} is ${show.text('length', lengthMm / 1e3)} long with ${countText(joints, 'joint')} (junctions, corners, steps): ${formatNumber(ratio)} widths for each, under ${limit}; ${model}${othersText(context, worst)}`,
        fix: `make ${name} ${show.text('length', (limit * widthMm * joints) / 1e3)} long or longer, round its corners, or make it narrower${chip.joints === 'centreline' ? '; or compute with joints: resolved' : ''}`,
        at: middleOfReach(network, worst.reach),
        names: reachNames(context, worst),
        measure: { value: ratio, limit, unit: '' },
      }),
    ];
  });
}

const IS_JOINT = NODE_KINDS.map((kind) => kind === 'junction' || kind === 'step');

/** A smaller turn adds next to nothing (its end correction grows with the square of the angle), and chords of curves turn so. */
const CORNER_COSINE = Math.cos((10 * Math.PI) / 180);

/** Ends at junctions and steps, and corners on the way; wells and dead ends do not count. */
function jointsOf({ network }: FindingContext, reach: number): number {
  const { nodeKind, reachFrom, reachTo, firstSegment, segmentBendRadiusMm } = network;
  let joints = 0;
  if (IS_JOINT[nodeKind[reachFrom[reach]]]) joints++;
  if (IS_JOINT[nodeKind[reachTo[reach]]]) joints++;
  for (let s = firstSegment[reach] + 1; s < firstSegment[reach + 1]; s++) {
    if (segmentBendRadiusMm[s - 1] > 0 || segmentBendRadiusMm[s] > 0) continue;
    const ux = network.segmentX2[s - 1] - network.segmentX1[s - 1];
    const uy = network.segmentY2[s - 1] - network.segmentY1[s - 1];
    const vx = network.segmentX2[s] - network.segmentX1[s];
    const vy = network.segmentY2[s] - network.segmentY1[s];
    if (ux * vx + uy * vy < CORNER_COSINE * Math.hypot(ux, uy) * Math.hypot(vx, vy)) joints++;
  }
  return joints;
}
