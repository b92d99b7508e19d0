import type { Run } from '../chip/types.ts';
import type { FlowPart, FlowState } from '../solve/types.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { deadPorts, gapOfDeadPart, gapText } from './dead-ports.ts';
import { partsOnOutlines } from './outlines.ts';
import { middleOfReach } from './reaches.ts';
import { found, notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { listText, portText, showFor } from './words.ts';

/** Is every channel connected to something that drives it, and is the pressure fixed. */
export const networkRules: readonly Rule[] = [
  { names: ['dead-port'], run: (context) => ifAnyPortIsSet(context, 'dead-port', deadPorts) },
  { names: ['stray-channel'], run: (context) => ifAnyPortIsSet(context, 'stray-channel', strayChannels) },
  { names: ['no-reference'], run: (context) => ifAnyPortIsSet(context, 'no-reference', noReferences) },
];

/** While no port has a condition, that is the fault, and unset-port says so port by port. */
function ifAnyPortIsSet(
  context: FindingContext,
  rule: string,
  look: (context: FindingContext, flow: FlowState) => Finding[],
): RuleOutcome {
  const { run, flow } = context;
  if (flow === null) return notRun(rule, 'nothing was solved');
  if (run.ports.length > 0 && run.ports.every(({ condition }) => condition.kind === 'unset')) {
    return notRun(rule, 'no port has a condition yet');
  }
  return found(look(context, flow));
}

/** One finding per connected part that no port with pressure, flow, head or open belongs to. */
function strayChannels(context: FindingContext, flow: FlowState): Finding[] {
  const { chip, run, network } = context;
  const reachesByPart = partReaches(context);
  const onOutlines = partsOnOutlines(context);
  return flow.parts.flatMap((part, p) => {
    const reaches = reachesByPart[p] ?? [];
    if (onOutlines.has(p) || reaches.length === 0 || part.ports.some((port) => drives(run, port))) return [];
    const channels = [...new Set(reaches.map((reach) => chip.channels[network.reachChannel[reach]].name))];
    const ports = part.ports.map((port) => chip.ports[port].name);
    const verb = channels.length === 1 ? 'is' : 'are';
    const meets =
      ports.length === 0
        ? 'connected to no port'
        : `connected to no port that drives it, only to ${listText(ports.map((name, i) => `${name} (${run.ports[part.ports[i]].condition.kind})`))}`;
    return [
      toFinding('stray-channel', 'blocker', {
        message: `${listText(channels)} ${verb} ${meets}: nothing known flows there`,
        fix:
          ports.length === 0
            ? `join ${channels[0]} to the channel or well it was meant to meet, or take it out of the drawing; if it is no channel, name it or its layer under ignore: in the run sheet`
            : `give ${ports.length === 1 ? ports[0] : `one of ${listText(ports, 4)}`} a pressure, flow or head, or set it to open; or join ${channels[0]} to a driven part of the chip`,
        at: middleOfReach(network, reaches[0]),
        names: [...new Set([...channels, ...ports])],
      }),
    ];
  });
}

/** One finding per connected part whose pressures are fixed by nothing, or by ports that contradict each other. */
function noReferences(context: FindingContext, flow: FlowState): Finding[] {
  const onOutlines = partsOnOutlines(context);
  return flow.parts.flatMap((part, p) => {
    if (onOutlines.has(p)) return [];
    switch (part.status) {
      case 'no-reference':
      case 'flows-do-not-add-up':
        return [noReference(context, part, p)];
      case 'conflict':
        return [conflict(context, part)];
      case 'solved':
      case 'no-drive':
      case 'unsized':
        return [];
      default:
        return part.status satisfies never;
    }
  });
}

function noReference(context: FindingContext, part: FlowPart, number: number): Finding {
  const { chip, run } = context;
  const show = showFor(context);
  const driven = part.ports.filter((port) => drives(run, port));
  const given = driven.map((port) => portText(context, port));
  const idle = part.ports.find((port) => !drives(run, port));
  const outlet = driven.reduce((least, port) => (flowOf(run, port) < flowOf(run, least) ? port : least));
  const well = chip.ports[idle ?? outlet].name;
  const first = chip.ports[driven[0]];
  const cutOff = cutOffFix(context, number);
  const rest = {
    at: { xMm: first.xMm, yMm: first.yMm },
    names: driven.map((port) => chip.ports[port].name),
    measure: { value: part.flowSumM3s, limit: 0, unit: 'm³/s' },
  };
  if (part.status === 'flows-do-not-add-up') {
    return toFinding('no-reference', 'blocker', {
      message: `only flows are given (${listText(given, 6)}) and they do not add up: ${show.text('flow', Math.abs(part.flowSumM3s))} more ${part.flowSumM3s > 0 ? 'goes in than comes out' : 'comes out than goes in'}, and nothing sets a pressure`,
      fix:
        cutOff ??
        `let one well take what is left: set ${well} to open, or give it a pressure or a head instead of a flow`,
      ...rest,
    });
  }
  return toFinding('no-reference', 'blocker', {
    message: `nothing sets a pressure: only flows are given (${listText(given, 6)}); they add up, so the flows are known, but the pressures only up to a constant`,
    fix: cutOff ?? `set one well to open, for example ${well}, or give one port a pressure or a head`,
    ...rest,
  });
}

/** Where a gap cuts the part off, opening a port of it would only hide the gap. Null where no gap does. */
function cutOffFix(context: FindingContext, part: number): string | null {
  const gap = gapOfDeadPart(context).get(part) ?? null;
  return gap === null
    ? null
    : `join the part first to the open or held port it was meant to reach (see dead-port): the nearest gap is ${gapText(gap)}`;
}

/** Wells that open into each other are one node, which can hold one pressure only. */
function conflict(context: FindingContext, part: FlowPart): Finding {
  const { chip, run, network } = context;
  const byNode = new Map<number, number[]>();
  for (const port of part.ports) {
    const { kind } = run.ports[port].condition;
    if (kind !== 'pressure' && kind !== 'head' && kind !== 'open') continue;
    const node = network.portNode[port];
    byNode.set(node, [...(byNode.get(node) ?? []), port]);
  }
  const ports = [...byNode.values()].find((group) => group.length > 1) ?? part.ports;
  const first = chip.ports[ports[0]];
  const names = ports.map((port) => chip.ports[port].name);
  return toFinding('no-reference', 'blocker', {
    message: `${listText(names)} open into one another but are held at different pressures (${listText(
      ports.map((port) => portText(context, port)),
      6,
    )}): nothing can be computed there`,
    fix: `draw ${listText(names)} apart, or give them one pressure`,
    at: { xMm: first.xMm, yMm: first.yMm },
    names,
  });
}

function flowOf({ ports }: Run, port: number): number {
  const { condition } = ports[port];
  return condition.kind === 'flow' ? condition.flowM3s : 0;
}

function drives({ ports }: Run, port: number): boolean {
  const { kind } = ports[port].condition;
  return kind !== 'sealed' && kind !== 'unset';
}

/** Reaches of each connected part. */
const partReaches = oncePerContext(({ network, flow }: FindingContext): readonly number[][] => {
  const of: number[][] = [];
  if (flow === null) return of;
  for (let reach = 0; reach < network.reachCount; reach++) {
    const part = flow.nodePart[network.reachFrom[reach]];
    of[part] ??= [];
    of[part].push(reach);
  }
  return of;
});
