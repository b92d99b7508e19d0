import { isBelow } from '../asked/within.ts';
import type { PortRun } from '../chip/types.ts';
import { largestMagnitude } from '../runsheet/shown.ts';
import type { FindingContext } from './context.ts';
import { deadPartAt } from './dead-parts.ts';
import { reachesAtNodes } from './openings.ts';
import { perChannel } from './reaches.ts';
import { found, notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import { showFor } from './words.ts';

/** Does fluid go where it is meant to, and does it go everywhere. */
export const flowRules: readonly Rule[] = [
  { names: ['stagnant'], run: stagnant },
  { names: ['backflow'], run: backflow },
];

/** Share of the chip's median flow below which a reach is called stagnant. */
const STAGNANT_SHARE = 1e-3;

/**
 * One finding per channel, at its stillest reach. Dead ends, sealed and unset ports are meant to stand still; of a part
 * whose ports have no way to others, dead-port speaks.
 */
function stagnant(context: FindingContext): RuleOutcome {
  const { network, flow } = context;
  if (flow === null) return notRun('stagnant', 'nothing was solved');
  const isDead = onTheWayToADeadEnd(context);
  for (let reach = 0; reach < network.reachCount; reach++) {
    if (deadPartAt(context, flow.nodePart[network.reachFrom[reach]]) !== undefined) isDead[reach] = 1;
  }
  const flows = flow.reachFlow
    .filter((one, reach) => isDead[reach] !== 1 && !Number.isNaN(one))
    .map(Math.abs);
  const largest = largestMagnitude(flows);
  if (flows.length === 0) return notRun('stagnant', 'no flow in the chip is known');
  if (largest === 0) return notRun('stagnant', 'nothing flows anywhere in the chip');
  // What stands still does not count: where most of the chip does, it would make nought the measure of the rest.
  const median = medianOf(flows.filter((one) => one > NO_FLOW_SHARE * largest));
  const show = showFor(context);
  return found(
    perChannel(
      context,
      (reach) => {
        const magnitude = Math.abs(flow.reachFlow[reach]);
        if (isDead[reach] === 1 || Number.isNaN(magnitude)) return null;
        return isBelow(magnitude, STAGNANT_SHARE * median) ? magnitude : null;
      },
      // what is left of a balanced flow is rounding: all of it is equally still
      (magnitude) => 1 / (magnitude / median + STAGNANT_SHARE),
      (magnitude, { name, others, place, names }) => {
        const share = magnitude / median;
        const flowText = share < NO_FLOW_SHARE ? 'practically nothing' : show.text('flow', magnitude);
        return toFinding('stagnant', 'caution', {
          message: `${flowText} flows through ${name}, less than a thousandth of the chip's median flow (${show.text('flow', median)})${others}: what is in there stays there`,
          fix: `if ${name} is meant to be swept, set its two ends to different pressures: move one junction along, or make its neighbours unequal; if it only balances, leave it`,
          at: place,
          names,
          measure: { value: share, limit: STAGNANT_SHARE, unit: '' },
        });
      },
    ),
  );
}

/** Below this share of the median, and of the largest, a flow is what rounding left of a balance. */
const NO_FLOW_SHARE = 1e-9;

/**
 * 1 for each reach from which every way on ends dead: nodes that are no driving port and have one reach left are taken
 * off, with that reach, until there are none.
 */
function onTheWayToADeadEnd(context: FindingContext): Uint8Array {
  const { network, run } = context;
  const { nodeCount, reachCount, reachFrom, reachTo, nodePort } = network;
  const { first, item } = reachesAtNodes(context);
  const left = new Int32Array(nodeCount);
  for (let n = 0; n < nodeCount; n++) left[n] = first[n + 1] - first[n];
  const isDead = new Uint8Array(reachCount);
  const isLeaf = (node: number): boolean => {
    if (left[node] !== 1) return false;
    if (nodePort[node] < 0) return true;
    const { kind } = run.ports[nodePort[node]].condition;
    return kind === 'sealed' || kind === 'unset';
  };
  const leaves: number[] = [];
  for (let n = 0; n < nodeCount; n++) if (isLeaf(n)) leaves.push(n);
  for (let node = leaves.pop(); node !== undefined; node = leaves.pop()) {
    for (let k = first[node]; k < first[node + 1]; k++) {
      const reach = item[k] >> 1;
      if (isDead[reach] === 1) continue;
      isDead[reach] = 1;
      for (const end of [reachFrom[reach], reachTo[reach]]) {
        left[end]--;
        if (end !== node && isLeaf(end)) leaves.push(end);
      }
    }
  }
  return isDead;
}

function medianOf(values: Float64Array): number {
  values.sort();
  const middle = values.length >> 1;
  return values.length % 2 === 1 ? values[middle] : (values[middle - 1] + values[middle]) / 2;
}

/** A flow below this share of the chip's largest port flow has no direction worth a finding. */
const NO_DIRECTION_SHARE = 1e-9;

/** One finding per port that flows against what it is for. */
function backflow(context: FindingContext): RuleOutcome {
  const { flow, chip, run } = context;
  if (flow === null) return notRun('backflow', 'nothing was solved');
  const wants = expectations(context);
  if (wants.every((want) => want === null)) {
    return notRun('backflow', 'no port says what it is for (expect: in or out) and none is an open outlet');
  }
  const isAsked = (p: number): boolean => wants[p] !== null && !Number.isNaN(flow.portFlow[p]);
  if (!chip.ports.some((_, p) => isAsked(p))) {
    return notRun('backflow', 'the flow at no port that says what it is for is known');
  }
  const largest = largestMagnitude(flow.portFlow);
  const show = showFor(context);
  const findings = chip.ports.flatMap((port, p) => {
    const { name } = port;
    const { condition, expect } = run.ports[p];
    const into = flow.portFlow[p];
    const against = wants[p] === 'in' ? -into : into;
    if (!isAsked(p) || !(against > NO_DIRECTION_SHARE * largest)) return [];
    const isInletTakingBack = isDriven(condition) && wants[p] === 'in';
    const meant = expect === null ? 'an open outlet' : wants[p] === 'in' ? 'an inlet' : 'an outlet';
    return [
      toFinding('backflow', isInletTakingBack ? 'blocker' : 'caution', {
        message: `port ${name} is ${meant}, but ${show.text('flow', against)} flows ${into < 0 ? 'out of' : 'into'} the chip there`,
        fix: isInletTakingBack
          ? condition.kind === 'flow'
            ? `turn the sign of the flow at ${name} (into the chip is positive), or its expect`
            : `raise ${name} above the pressure at its first junction, or lower the other inlets; a longer or narrower channel from ${name} does not help`
          : wants[p] === 'in'
            ? `write expect: out for ${name} if it is an outlet, or raise it above the pressure at its first junction`
            : `write expect: in for ${name} if fluid is meant to be drawn in there, or raise the pressure at its junction above it`,
        at: port,
        names: [name],
        measure: { value: into, limit: 0, unit: 'm³/s' },
      }),
    ];
  });
  return found(findings);
}

function isDriven({ kind }: PortRun['condition']): boolean {
  return kind === 'pressure' || kind === 'head' || kind === 'flow';
}

/** What each port is for: as the run sheet says; else an open well is an outlet, unless the chip is only sucked at. */
function expectations({ run, flow }: FindingContext): readonly ('in' | 'out' | null)[] {
  const driven = run.ports.flatMap(({ condition }, p) => (isDriven(condition) ? [p] : []));
  const isSuckedOnly = driven.every((p) => flow !== null && flow.portFlow[p] <= 0);
  return run.ports.map(({ expect, condition }) => {
    if (expect !== null) return expect;
    return condition.kind === 'open' && !isSuckedOnly ? 'out' : null;
  });
}
