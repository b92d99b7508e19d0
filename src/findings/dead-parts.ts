import { drivesOf, type PortDrive } from '../solve/drives.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { nearMisses, sidesOf } from './misses.ts';
import { channelMember, partsOnDrawing } from './parts.ts';
import { loosePortSet } from './ports.ts';
import { tipsOf } from './tips.ts';

/**
 * A connected part in which nothing can flow as the run sheet means it, because its driven and open ports have no way to
 * another part's. Judged by topology: a part whose ports stand at equal pressures carries nothing, and is not dead.
 */
export interface DeadPart {
  /** Index into flow.parts. */
  readonly part: number;
  /** Driven and open ports of the part. */
  readonly ports: readonly number[];
  readonly kind: DeadKind;
  readonly severity: 'blocker' | 'caution';
}

/**
 * alone: all its driven and open ports are one port, or one hole.
 * undriven: held at one pressure all over, cut off from what drives the chip.
 * unheld: only flows are given, cut off from what is held or open.
 */
type DeadKind = 'alone' | 'undriven' | 'unheld';

/** The dead parts of the chip, by number; none while nothing is solved. Cost: linear in the ports and parts. */
export const deadParts = oncePerContext((context): readonly DeadPart[] => {
  const { run, flow } = context;
  if (flow === null) return [];
  const drives = drivesOf(run);
  const all = flow.parts.map(({ ports }, part) => stateOf(context, drives, part, ports));
  return all.flatMap((one): DeadPart[] => {
    if (one.kind === 'live' || one.kind === 'stray' || isLoose(context, one)) return [];
    const { part, ports, kind } = one;
    if (kind === 'alone') return [{ part, ports, kind, severity: severityAlone(context, ports) }];
    return isCutOff(context, all, one) ? [{ part, ports, kind, severity: 'blocker' }] : [];
  });
});

/** The dead part of that number, if it is one. */
export function deadPartAt(context: FindingContext, part: number): DeadPart | undefined {
  return byPart(context).get(part);
}

const byPart = oncePerContext((context) => new Map(deadParts(context).map((dead) => [dead.part, dead])));

interface PartState {
  readonly part: number;
  readonly ports: readonly number[];
  readonly kind: DeadKind | 'live' | 'stray';
  readonly hasFlow: boolean;
  /** Pressures held in it, Pa. */
  readonly held: ReadonlySet<number>;
  readonly planes: ReadonlySet<number>;
}

function stateOf(
  context: FindingContext,
  drives: readonly PortDrive[],
  part: number,
  partPorts: readonly number[],
): PartState {
  const { portNode } = context.network;
  const ports = partPorts.filter((port) => drives[port].kind !== 'none');
  const holes = new Set(ports.map((port) => portNode[port]));
  const given = ports.map((port) => drives[port]);
  const held = new Set(given.flatMap((drive) => (drive.kind === 'pressure' ? drive.pressurePa : [])));
  const hasFlow = given.some(({ kind }) => kind === 'flow');
  return { part, ports, kind: kindOf(), hasFlow, held, planes: planesOf(context, part) };

  function kindOf(): PartState['kind'] {
    if (holes.size < 2) return holes.size === 0 ? 'stray' : 'alone';
    if (held.size === 0) return 'unheld';
    return held.size === 1 && !hasFlow ? 'undriven' : 'live';
  }
}

function planesOf(context: FindingContext, part: number): Set<number> {
  const { plane } = context.network.trace.near.pieces;
  const { firstPiece, pieceOf } = partsOnDrawing(context);
  const own = pieceOf.subarray(firstPiece[part], firstPiece[part + 1]);
  return new Set(own.map((piece) => plane[piece]));
}

/** A well that no channel comes to is a loose port, and nothing more need be said of it. */
function isLoose(context: FindingContext, { part, ports }: PartState): boolean {
  const { firstPiece } = partsOnDrawing(context);
  const { nodePort, portNode } = context.network;
  return (
    firstPiece[part + 1] === firstPiece[part] &&
    ports.every((p) => loosePortSet(context).has(nodePort[portNode[p]]))
  );
}

/** A port that is only held may be a control line; one that must pass fluid can't do so alone. */
function severityAlone({ run }: FindingContext, ports: readonly number[]): DeadPart['severity'] {
  const mustFlow = ports.some((port) => {
    const { condition, expect } = run.ports[port];
    return condition.kind === 'open' || condition.kind === 'flow' || expect !== null;
  });
  return mustFlow ? 'blocker' : 'caution';
}

/**
 * Whether a part with several ports lacks what another part has, and the drawing shows that they were one: an end of it
 * stands dead or just misses something, or there is a part in its plane that lacks what this one has. Else it may be a
 * circuit of its own that rests, or that is pushed and pulled by two pumps.
 */
function isCutOff(context: FindingContext, all: readonly PartState[], one: PartState): boolean {
  const others = all.filter(({ part }) => part !== one.part);
  const gives = (other: PartState): boolean =>
    one.kind === 'unheld'
      ? other.held.size > 0
      : other.hasFlow || [...other.held].some((p) => !one.held.has(p));
  const givers = others.filter(gives);
  if (givers.length === 0) return false;
  if (standsDead(context).has(one.part)) return true;
  const idle = givers.filter(({ kind }) => kind !== 'live');
  const sharesPlane = idle.some(({ planes }) => [...planes].some((plane) => one.planes.has(plane)));
  return sharesPlane || all.every(({ kind }) => kind !== 'live');
}

/** Parts with an end that stands dead, or at which something is just missed. */
const standsDead = oncePerContext((context): ReadonlySet<number> => {
  const parts = new Set<number>();
  for (const { ends, kind } of tipsOf(context))
    if (kind === 'end') parts.add(channelMember(context, ends[0] >> 1).part);
  for (const miss of nearMisses(context)) for (const { part } of sidesOf(context, miss)) parts.add(part);
  return parts;
});
