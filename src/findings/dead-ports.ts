import { type FindingContext, oncePerContext } from './context.ts';
import { type DeadPart, deadParts } from './dead-parts.ts';
import { type Gap, nearestGap } from './gaps.ts';
import { partsOnOutlines } from './outlines.ts';
import { toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { conditionText, distanceText, keyText, listText, placeText } from './words.ts';

/** One finding per dead part, at the gap that cuts it off where an end shows one, else at its first port. */
export function deadPorts(context: FindingContext): Finding[] {
  // What an outline would join follows from the outline.
  const onOutlines = partsOnOutlines(context);
  return deadParts(context)
    .filter(({ part }) => !onOutlines.has(part))
    .map((dead) => toDeadPort(context, dead));
}

/** The gap nearest to each dead part; null where there is nothing else, or nothing that closing a gap could lead to. */
export const gapOfDeadPart = oncePerContext((context): ReadonlyMap<number, Gap | null> => {
  const gapOf = (part: number): Gap | null =>
    hasElsewhere(context, part) ? nearestGap(context, part) : null;
  return new Map(deadParts(context).map(({ part }) => [part, gapOf(part)]));
});

/** Whether another part has a port that fluid may pass; one without a condition may yet be given one. */
function hasElsewhere({ run, flow }: FindingContext, part: number): boolean {
  const passes = (port: number): boolean => run.ports[port].condition.kind !== 'sealed';
  return flow?.parts.some(({ ports }, other) => other !== part && ports.some(passes)) ?? false;
}

function toDeadPort(context: FindingContext, dead: DeadPart): Finding {
  const { ports } = context.chip;
  const first = ports[dead.ports[0]];
  const names = dead.ports.map((port) => ports[port].name);
  const gap = gapOfDeadPart(context).get(dead.part) ?? null;
  const isolation =
    gap !== null
      ? `the nearest gap is ${gapText(gap)}`
      : hasElsewhere(context, dead.part)
        ? 'it has no other part near it'
        : 'the chip has no other such port';
  const atGap = gap === null || gap.stopsShort === null ? null : gap;
  return toFinding('dead-port', dead.severity, {
    message: `${whatIsDead(context, dead)}; ${isolation}`,
    fix: `${wayOut(context, dead, gap)}; if it is meant to stand still, accept dead-port at ${keyText(first.name)}`,
    at: atGap ?? first,
    names: [...new Set([...names, ...(gap === null ? [] : [gap.from, gap.to])])],
    mark: atGap?.mark ?? null,
  });
}

/** "125 µm between branch and feed at (12, 5 mm)" */
export function gapText({ gapMm, from, to, xMm, yMm }: Gap): string {
  const size = gapMm > 0 ? distanceText(gapMm) : 'none to be seen, they touch without a join,';
  return `${size} between ${from} and ${to} at ${placeText(xMm, yMm)}`;
}

function whatIsDead(context: FindingContext, { ports, kind }: DeadPart): string {
  const given = listText(
    ports.map((port) => `${context.chip.ports[port].name} (${conditionText(context, port)})`),
    6,
  );
  const one = ports.length === 1;
  switch (kind) {
    case 'alone':
      return `no channel leads from ${given}${one ? '' : ', which are one hole,'} to another driven or open port: nothing can flow there`;
    case 'undriven':
      return `${given} are connected only with one another, at one pressure, and cut off from what drives the chip: nothing flows there`;
    case 'unheld':
      return `only flows are given in the part of ${given}, and it is cut off from every port that is open or held`;
    default:
      return kind satisfies never;
  }
}

function wayOut({ chip, run, flow }: FindingContext, { part, ports }: DeadPart, gap: Gap | null): string {
  const short = gap?.stopsShort ?? null;
  if (short !== null) return `close the gap: carry ${short.channel} on to ${short.of} there`;
  const { name } = chip.ports[ports[0]];
  const idle = flow?.parts[part].ports.find((port) => !ports.includes(port));
  const set =
    idle === undefined ? '' : `, or set ${chip.ports[idle].name} (${run.ports[idle].condition.kind}) to open`;
  return `draw a channel from the part of ${name} to the port it was meant to reach${set}`;
}
