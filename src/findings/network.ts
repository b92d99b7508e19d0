import { grouped } from '../by-key.ts';
import type { Run } from '../chip/types.ts';
import { itemsOf, toGroups } from '../groups.ts';
import type { FlowPart, FlowState } from '../solve/types.ts';
import type { FindingContext } from './context.ts';
import { deadPorts, gapOfDeadPart, gapText } from './dead-ports.ts';
import { partsOnOutlines } from './outlines.ts';
import { middleOfReach } from './reaches.ts';
import { found, notRun, type Rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { listText, portText, showFor } from './words.ts';

/** Is every channel connected to something that drives it, and is the pressure fixed. */
export const networkRules: readonly Rule[] = [
  ifAnyPortIsSet('dead-port', deadPorts),
  ifAnyPortIsSet('stray-channel', strayChannels),
  ifAnyPortIsSet('no-reference', noReferences),
];

/** While no port has a condition, that is the fault, and unset-port says so port by port. */
function ifAnyPortIsSet(
  name: string,
  look: (context: FindingContext, flow: FlowState) => readonly Finding[],
): Rule {
  return {
    names: [name],
    run: (context) => {
      const { run, flow } = context;
      if (flow === null) return notRun(name, 'nothing was solved');
      const isUnset = run.ports.length > 0 && run.ports.every(({ condition }) => condition.kind === 'unset');
      return isUnset ? notRun(name, 'no port has a condition yet') : found(look(context, flow));
    },
  };
}

/** One finding per connected part that no port with pressure, flow, head or open belongs to. */
function strayChannels(context: FindingContext, flow: FlowState): Finding[] {
  const { chip, run, network } = context;
  const partOfReach = network.reachFrom.map((node) => flow.nodePart[node]);
  const byPart = toGroups(flow.parts.length, partOfReach);
  const onOutlines = partsOnOutlines(context);
  return flow.parts.flatMap((part, p) => {
    const reaches = itemsOf(byPart, p);
    if (onOutlines.has(p) || reaches.length === 0 || part.ports.some((port) => drives(run, port))) return [];
    const drawn = new Set(reaches.map((reach) => network.reachChannel[reach]));
    const channels = Array.from(drawn, (channel) => chip.channels[channel].name);
    const ports = part.ports.map((port) => chip.ports[port].name);
    const given = ports.map((name, i) => `${name} (${run.ports[part.ports[i]].condition.kind})`);
    const [meets, fix] =
      ports.length === 0
        ? [
            'connected to no port',
            `join ${channels[0]} to the channel or well it was meant to meet, or take it out of the drawing; if it is no channel, name it or its layer under ignore: in the run sheet`,
          ]
        : [
            `connected to no port that drives it, only to ${listText(given)}`,
            `give ${ports.length === 1 ? ports[0] : `one of ${listText(ports, 4)}`} a pressure, flow or head, or set it to open; or join ${channels[0]} to a driven part of the chip`,
          ];
    return [
      toFinding('stray-channel', 'blocker', {
        message: `${listText(channels)} ${channels.length === 1 ? 'is' : 'are'} ${meets}: nothing known flows there`,
        fix,
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
  const given = listText(
    driven.map((port) => portText(context, port)),
    6,
  );
  const idle = part.ports.find((port) => !drives(run, port));
  const outlet = driven.reduce((least, port) => (flowOf(run, port) < flowOf(run, least) ? port : least));
  const well = chip.ports[idle ?? outlet].name;
  const [message, fix] =
    part.status === 'flows-do-not-add-up'
      ? [
          `only flows are given (${given}) and they do not add up: ${show.text('flow', Math.abs(part.flowSumM3s))} more ${part.flowSumM3s > 0 ? 'goes in than comes out' : 'comes out than goes in'}, and nothing sets a pressure`,
          `let one well take what is left: set ${well} to open, or give it a pressure or a head instead of a flow`,
        ]
      : [
          `nothing sets a pressure: only flows are given (${given}); they add up, so the flows are known, but the pressures only up to a constant`,
          `set one well to open, for example ${well}, or give one port a pressure or a head`,
        ];
  return toFinding('no-reference', 'blocker', {
    message,
    fix: cutOffFix(context, number) ?? fix,
    at: chip.ports[driven[0]],
    names: driven.map((port) => chip.ports[port].name),
    measure: { value: part.flowSumM3s, limit: 0, unit: 'm³/s' },
  });
}

/** Where a gap cuts the part off, opening a port of it would only hide the gap. Null where no gap does. */
function cutOffFix(context: FindingContext, part: number): string | null {
  const gap = gapOfDeadPart(context).get(part) ?? null;
  return gap === null
    ? null
    : `join the part first to the open or held port it was meant to reach (see dead-port): the nearest gap is ${gapText(gap)}`;
}

/** Conditions that fix a pressure. */
const HOLDING: ReadonlySet<string> = new Set(['pressure', 'head', 'open']);

/** Wells that open into each other are one node, which can hold one pressure only. */
function conflict(context: FindingContext, part: FlowPart): Finding {
  const { chip, run, network } = context;
  const held = part.ports.filter((port) => HOLDING.has(run.ports[port].condition.kind));
  const byNode = grouped(held, (port) => network.portNode[port]);
  const ports = [...byNode.values()].find((group) => group.length > 1) ?? part.ports;
  const names = ports.map((port) => chip.ports[port].name);
  const given = listText(
    ports.map((port) => portText(context, port)),
    6,
  );
  return toFinding('no-reference', 'blocker', {
    message: `${listText(names)} open into one another but are held at different pressures (${given}): nothing can be computed there`,
    fix: `draw ${listText(names)} apart, or give them one pressure`,
    at: chip.ports[ports[0]],
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
