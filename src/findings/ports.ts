import type { Port } from '../chip/types.ts';
import { closePorts } from './close-ports.ts';
import { closestPoints } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { nearMisses } from './misses.ts';
import { portsOnOutlines } from './outlines.ts';
import { gapToHole, lineOf } from './painted.ts';
import { portGridFaults } from './port-grid.ts';
import { found, isBelow, limitRule, type Rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText, limitText, listText, moveText } from './words.ts';

/** Wells: what they meet, what they swallow, and how they stand to each other. */
export const portRules: readonly Rule[] = [
  { names: ['loose-port'], run: (context) => found(loosePorts(context)) },
  { names: ['small-port'], run: (context) => found(smallPorts(context)) },
  { names: ['swallowed-channel'], run: (context) => found(swallowedChannels(context)) },
  limitRule(
    'port-crowding',
    'port_gap',
    ({ run }) => run.limits.portGapM,
    ({ chip }, limit) => {
      const limitMm = limit.value * 1e3;
      return closePorts(chip.ports, limitMm).map(([p, q, gapMm]) => {
        const [one, two] = [chip.ports[p], chip.ports[q]];
        const ux = (two.xMm - one.xMm) / (Math.hypot(two.xMm - one.xMm, two.yMm - one.yMm) || 1);
        const uy = (two.yMm - one.yMm) / (Math.hypot(two.xMm - one.xMm, two.yMm - one.yMm) || 1);
        const mark = {
          x1Mm: one.xMm + ux * one.radiusMm,
          y1Mm: one.yMm + uy * one.radiusMm,
          x2Mm: two.xMm - ux * two.radiusMm,
          y2Mm: two.yMm - uy * two.radiusMm,
        };
        const how =
          gapMm > 0 ? `${distanceText(gapMm)} from rim to rim` : 'one hole: their rims touch or overlap';
        return toFinding('port-crowding', 'caution', {
          message: `${one.name} and ${two.name} are ${how}; port_gap is ${limitText(distanceText(limitMm), limit)}`,
          fix: `move ${two.name} ${moveText(limitMm - gapMm)} away from ${one.name}`,
          at: { xMm: (mark.x1Mm + mark.x2Mm) / 2, yMm: (mark.y1Mm + mark.y2Mm) / 2 },
          names: [one.name, two.name],
          measure: { value: gapMm / 1e3, limit: limit.value, unit: 'm' },
          mark,
        });
      });
    },
  ),
  limitRule('port-grid', 'port_grid', ({ run }) => run.limits.portGridM, portGridFaults),
];

/** Centrelines and channels that come to each port. */
interface PortMeetings {
  readonly channels: ReadonlySet<number>;
}

const portMeetings = oncePerContext(({ network, chip }): readonly PortMeetings[] => {
  const { firstPlace, placeCentreline, near } = network.trace;
  return chip.ports.map((_, p) => {
    const node = network.portNode[p];
    const channels = new Set<number>();
    for (let k = firstPlace[node]; k < firstPlace[node + 1]; k++) {
      channels.add(near.pieces.centrelineChannel[placeCentreline[k]]);
    }
    return { channels };
  });
});

/** Wells that no channel comes to, and that no end just misses. */
export const loosePortSet: (context: FindingContext) => ReadonlySet<number> = oncePerContext((context) => {
  const { chip, network } = context;
  const missed = new Set(nearMisses(context).map(({ port }) => port));
  const meetings = portMeetings(context);
  const loose = new Set<number>();
  for (let p = 0; p < chip.ports.length; p++) {
    const isFirst = network.nodePort[network.portNode[p]] === p;
    if (meetings[p].channels.size === 0 && isFirst && !missed.has(p)) loose.add(p);
  }
  return loose;
});

function loosePorts(context: FindingContext): Finding[] {
  const { chip } = context;
  const onOutlines = portsOnOutlines(context);
  const findings: Finding[] = [];
  chip.ports.forEach((port, p) => {
    if (!loosePortSet(context).has(p) || onOutlines.has(port.name)) return;
    const nearest = nearestPiece(context, port);
    const near =
      nearest === null
        ? ''
        : `; the nearest, ${nearest.name}, is ${distanceText(nearest.gapMm)} from its rim`;
    findings.push(
      toFinding('loose-port', 'blocker', {
        message: `the well ${port.name} touches no channel${near}`,
        fix:
          nearest === null
            ? `draw a channel to ${port.name}, or take it out`
            : `draw a channel to ${port.name}, move it ${moveText(nearest.gapMm)} to ${nearest.name}, or take it out`,
        at: { xMm: port.xMm, yMm: port.yMm },
        names: nearest === null ? [port.name] : [port.name, nearest.name],
        ...(nearest === null ? {} : { mark: nearest.mark }),
      }),
    );
  });
  return findings;
}

/** The painted piece nearest to a well, among those whose boxes are nearest. */
function nearestPiece({ chip, network }: FindingContext, port: Port) {
  const { index, pieces } = network.trace.near;
  let best: { name: string; gapMm: number; mark: NonNullable<Finding['mark']> } | null = null;
  for (const i of index.neighbors(port.xMm, port.yMm, 16)) {
    const gap = gapToHole(chip, pieces, i, port);
    if (best !== null && gap.distanceMm >= best.gapMm) continue;
    best = {
      name: chip.channels[pieces.channel[i]].name,
      gapMm: Math.max(0, gap.distanceMm),
      mark: { x1Mm: gap.x1, y1Mm: gap.y1, x2Mm: gap.x2, y2Mm: gap.y2 },
    };
  }
  return best;
}

/** A hole must be wider than its channel by this much, so that it still covers it when it is drilled or punched off. */
const HOLE_ALLOWANCE_MM = 0.2;

function smallPorts(context: FindingContext): Finding[] {
  const { chip } = context;
  const meetings = portMeetings(context);
  const findings: Finding[] = [];
  chip.ports.forEach((port, p) => {
    let widest = -1;
    for (const channel of meetings[p].channels) {
      if (widest < 0 || chip.channels[channel].stripHalfWidthMm > chip.channels[widest].stripHalfWidthMm) {
        widest = channel;
      }
    }
    if (widest < 0) return;
    const { name, stripHalfWidthMm } = chip.channels[widest];
    const holeMm = 2 * port.radiusMm;
    const limitMm = 2 * stripHalfWidthMm + HOLE_ALLOWANCE_MM;
    if (!isBelow(holeMm, limitMm)) return;
    findings.push(
      toFinding('small-port', 'caution', {
        message: `the hole ${port.name} is ${distanceText(holeMm)} wide on ${name}, which is ${distanceText(2 * stripHalfWidthMm)} wide; a hole drilled a little off would leave it uncovered`,
        fix: `make ${port.name} ${distanceText(limitMm)} wide or wider, or narrow ${name} where they meet`,
        at: { xMm: port.xMm, yMm: port.yMm },
        names: [port.name, name],
        measure: { value: holeMm / 1e3, limit: limitMm / 1e3, unit: 'm' },
        mark: {
          x1Mm: port.xMm - port.radiusMm,
          y1Mm: port.yMm,
          x2Mm: port.xMm + port.radiusMm,
          y2Mm: port.yMm,
        },
      }),
    );
  });
  return findings;
}

/** A well may take in one junction or two; with more of them, part of the network has gone. */
const MOST_NODES_IN_A_WELL = 2;

function swallowedChannels(context: FindingContext): Finding[] {
  const { chip, network } = context;
  const { index, pieces } = network.trace.near;
  const findings: Finding[] = [];
  const slack = chip.joinWithinMm;
  chip.ports.forEach((port) => {
    const r = port.radiusMm;
    const inside = index.search(port.xMm - r, port.yMm - r, port.xMm + r, port.yMm + r);
    const channels = new Set(inside.map((i) => pieces.channel[i]));
    const swallowed = [...channels].filter((channel) =>
      chip.channels[channel].centrelines.every(({ points }) => isAllInside(points, port, r + slack)),
    );
    const names = swallowed.sort((a, b) => a - b).map((channel) => chip.channels[channel].name);
    const nodes = meetingsInside(context, inside, port);
    if (names.length === 0 && nodes <= MOST_NODES_IN_A_WELL) return;
    const what =
      names.length > 0
        ? `${listText(names)} lie${names.length === 1 ? 's' : ''} wholly inside the well ${port.name}`
        : `the well ${port.name} covers ${nodes} places where channels meet`;
    findings.push(
      toFinding('swallowed-channel', 'blocker', {
        message: `${what}: all of it is open well and has no resistance`,
        fix:
          names.length > 0
            ? `make ${port.name} smaller, draw ${listText(names)} out beyond its rim, or take ${names.length === 1 ? 'it' : 'them'} out`
            : `make ${port.name} smaller, or move it off the junctions`,
        at: { xMm: port.xMm, yMm: port.yMm },
        names: names.length > 0 ? [...names, port.name] : [port.name],
      }),
    );
  });
  return findings;
}

function isAllInside(points: Float64Array, { xMm, yMm }: Port, within: number): boolean {
  for (let k = 0; k < points.length; k += 2) {
    if (Math.hypot(points[k] - xMm, points[k + 1] - yMm) > within) return false;
  }
  return true;
}

/** How many separate places inside the well there are where centrelines meet. */
function meetingsInside({ chip, network }: FindingContext, inside: readonly number[], port: Port): number {
  const { pieces, firstPair, pairOf, pairA, pairB, pairDistance } = network.trace.near;
  const slack = chip.joinWithinMm;
  /** Cells as wide as the slack, so that a place is found again without looking at all of them. */
  const cells = new Set<string>();
  const close = new Set(inside);
  let count = 0;
  for (const i of inside) {
    for (let k = firstPair[i]; k < firstPair[i + 1]; k++) {
      const pair = pairOf[k];
      if (pairA[pair] !== i || pairDistance[pair] > slack || !close.has(pairB[pair])) continue;
      const { x1, y1 } = closestPoints(lineOf(pieces, i), lineOf(pieces, pairB[pair]));
      if (Math.hypot(x1 - port.xMm, y1 - port.yMm) >= port.radiusMm) continue;
      const column = Math.round(x1 / slack);
      const row = Math.round(y1 / slack);
      let known = false;
      for (let dx = -1; dx <= 1; dx++) {
        for (let dy = -1; dy <= 1; dy++) known ||= cells.has(`${column + dx} ${row + dy}`);
      }
      cells.add(`${column} ${row}`);
      if (!known) count++;
    }
  }
  return count;
}
