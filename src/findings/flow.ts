import { reachesOfChannel } from '../asked/reaches.ts';
import { reachName } from '../network/names.ts';
import type { FindingContext } from './context.ts';
import { deadPartAt } from './dead-parts.ts';
import { middleOfReach, othersText, reachNames, worstReach } from './reaches.ts';
import { found, isBelow, notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
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
  const { network, flow, chip } = context;
  if (flow === null) return notRun('stagnant', 'nothing was solved');
  const isDead = onTheWayToADeadEnd(context);
  for (let reach = 0; reach < network.reachCount; reach++) {
    if (deadPartAt(context, flow.nodePart[network.reachFrom[reach]]) !== undefined) isDead[reach] = 1;
  }
  const flows: number[] = [];
  let largest = 0;
  for (let reach = 0; reach < network.reachCount; reach++) {
    const magnitude = Math.abs(flow.reachFlow[reach]);
    if (isDead[reach] === 1 || Number.isNaN(magnitude)) continue;
    flows.push(magnitude);
    largest = Math.max(largest, magnitude);
  }
  if (flows.length === 0) return notRun('stagnant', 'no flow in the chip is known');
  if (largest === 0) return notRun('stagnant', 'nothing flows anywhere in the chip');
  // What stands still does not count: where most of the chip does, it would make nought the measure of the rest.
  const median = medianOf(Float64Array.from(flows.filter((one) => one > NO_FLOW_SHARE * largest)));
  const show = showFor(context);
  const findings: Finding[] = [];
  chip.channels.forEach((_, c) => {
    const worst = worstReach(
      reachesOfChannel(context.network, c),
      (reach) => {
        const magnitude = Math.abs(flow.reachFlow[reach]);
        if (isDead[reach] === 1 || Number.isNaN(magnitude)) return null;
        return isBelow(magnitude, STAGNANT_SHARE * median) ? magnitude : null;
      },
      // what is left of a balanced flow is rounding: all of it is equally still
      (magnitude) => 1 / (magnitude / median + STAGNANT_SHARE),
    );
    if (worst === null) return;
    const name = reachName(network, worst.reach);
    const share = worst.fault / median;
    const flowText = share < NO_FLOW_SHARE ? 'practically nothing' : show.text('flow', worst.fault);
    findings.push(
      toFinding('stagnant', 'caution', {
        message: `${flowText} flows through ${name}, less than a thousandth of the chip's median flow (${show.text('flow', median)})${othersText(context, worst)}: what is in there stays there`,
        fix: `if ${name} is meant to be swept, set its two ends to different pressures: move one junction along, or make its neighbours unequal; if it only balances, leave it`,
        at: middleOfReach(network, worst.reach),
        names: reachNames(context, worst),
        measure: { value: share, limit: STAGNANT_SHARE, unit: '' },
      }),
    );
  });
  return found(findings);
}

/** Below this share of the median, and of the largest, a flow is what rounding left of a balance. */
const NO_FLOW_SHARE = 1e-9;

/**
 * 1 for each reach from which every way on ends dead: nodes that are no driving port and have one reach left are taken
 * off, with that reach, until there are none.
 */
function onTheWayToADeadEnd({ network, run }: FindingContext): Uint8Array {
  const { nodeCount, reachCount, reachFrom, reachTo, nodePort } = network;
  const first = new Int32Array(nodeCount + 1);
  for (let r = 0; r < reachCount; r++) {
    first[reachFrom[r] + 1]++;
    first[reachTo[r] + 1]++;
  }
  for (let n = 0; n < nodeCount; n++) first[n + 1] += first[n];
  const fill = first.slice(0, nodeCount);
  const reachesAt = new Int32Array(2 * reachCount);
  for (let r = 0; r < reachCount; r++) {
    reachesAt[fill[reachFrom[r]]++] = r;
    reachesAt[fill[reachTo[r]]++] = r;
  }
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
      const reach = reachesAt[k];
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
  let largest = 0;
  for (const value of flow.portFlow) if (Math.abs(value) > largest) largest = Math.abs(value);
  const show = showFor(context);
  const findings: Finding[] = [];
  chip.ports.forEach(({ name, xMm, yMm }, p) => {
    if (!isAsked(p)) return;
    const { condition, expect } = run.ports[p];
    const into = flow.portFlow[p];
    const against = wants[p] === 'in' ? -into : into;
    if (!(against > NO_DIRECTION_SHARE * largest)) return;
    const isDriven = condition.kind === 'pressure' || condition.kind === 'head' || condition.kind === 'flow';
    const isInletTakingBack = isDriven && wants[p] === 'in';
    const meant = expect === null ? 'an open outlet' : wants[p] === 'in' ? 'an inlet' : 'an outlet';
    findings.push(
      toFinding('backflow', isInletTakingBack ? 'blocker' : 'caution', {
        message: `port ${name} is ${meant}, but ${show.text('flow', against)} flows ${into < 0 ? 'out of' : 'into'} the chip there`,
        fix: isInletTakingBack
          ? condition.kind === 'flow'
            ? `turn the sign of the flow at ${name} (into the chip is positive), or its expect`
            : `raise ${name} above the pressure at its first junction, or lower the other inlets; a longer or narrower channel from ${name} does not help`
          : wants[p] === 'in'
            ? `write expect: out for ${name} if it is an outlet, or raise it above the pressure at its first junction`
            : `write expect: in for ${name} if fluid is meant to be drawn in there, or raise the pressure at its junction above it`,
        at: { xMm, yMm },
        names: [name],
        measure: { value: into, limit: 0, unit: 'm³/s' },
      }),
    );
  });
  return found(findings);
}

/** What each port is for: as the run sheet says; else an open well is an outlet, unless the chip is only sucked at. */
function expectations({ run, flow }: FindingContext): readonly ('in' | 'out' | null)[] {
  let driving = 0;
  let sucking = 0;
  run.ports.forEach(({ condition: { kind } }, p) => {
    if (kind !== 'pressure' && kind !== 'head' && kind !== 'flow') return;
    driving++;
    if (flow !== null && flow.portFlow[p] <= 0) sucking++;
  });
  const isSuckedOnly = sucking === driving;
  return run.ports.map(({ expect, condition }) => {
    if (expect !== null) return expect;
    return condition.kind === 'open' && !isSuckedOnly ? 'out' : null;
  });
}
