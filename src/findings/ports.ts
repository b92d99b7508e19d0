import { isBelow } from '../asked/within.ts';
import type { Port, Sourced } from '../chip/types.ts';
import { closestPoints, type Line, lineBetween, middleOf } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { nearMisses } from './misses.ts';
import { closePorts } from './near-ports.ts';
import { portsOnOutlines } from './outlines.ts';
import { gapToHole, lineOf } from './painted.ts';
import { portGridFaults } from './port-grid.ts';
import { lengthMeasure, limitRule, type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText, limitText, listText, moveText } from './words.ts';

/** Wells: what they meet, what they swallow, and how they stand to each other. */
export const portRules: readonly Rule[] = [
  rule('loose-port', loosePorts),
  rule('small-port', smallPorts),
  rule('swallowed-channel', swallowedChannels),
  limitRule('port-crowding', 'port_gap', 'portGapM', portCrowding),
  limitRule('port-grid', 'port_grid', 'portGridM', portGridFaults),
];

function portCrowding(context: FindingContext, limit: Sourced<number>): Finding[] {
  const { ports } = context.chip;
  const limitMm = limit.value * 1e3;
  return closePorts(context, limitMm).map(([p, q, gapMm]) => {
    const [one, two] = [ports[p], ports[q]];
    const apartMm = Math.hypot(two.xMm - one.xMm, two.yMm - one.yMm) || 1;
    const ux = (two.xMm - one.xMm) / apartMm;
    const uy = (two.yMm - one.yMm) / apartMm;
    const mark: Line = [
      one.xMm + ux * one.radiusMm,
      one.yMm + uy * one.radiusMm,
      two.xMm - ux * two.radiusMm,
      two.yMm - uy * two.radiusMm,
    ];
    const how =
      gapMm > 0 ? `${distanceText(gapMm)} from rim to rim` : 'one hole: their rims touch or overlap';
    return toFinding('port-crowding', 'caution', {
      message: `${one.name} and ${two.name} are ${how}; port_gap is ${limitText(distanceText(limitMm), limit)}`,
      fix: `move ${two.name} ${moveText(limitMm - gapMm)} away from ${one.name}`,
      at: middleOf(mark),
      names: [one.name, two.name],
      measure: { value: gapMm / 1e3, limit: limit.value, unit: 'm' },
      mark,
    });
  });
}

/** Channels that come to each port. */
const channelsAtPorts = oncePerContext(({ network }): readonly number[][] => {
  const { firstPlace, placeCentreline, near } = network.trace;
  return Array.from(network.portNode, (node) => {
    const own = placeCentreline.subarray(firstPlace[node], firstPlace[node + 1]);
    return [...new Set(own.map((c) => near.pieces.centrelineChannel[c]))];
  });
});

/** Wells that no channel comes to, and that no end just misses. */
export const loosePortSet = oncePerContext((context): ReadonlySet<number> => {
  const { chip, network } = context;
  const missed = new Set(nearMisses(context).map(({ port }) => port));
  const channels = channelsAtPorts(context);
  const isLoose = (p: number): boolean =>
    channels[p].length === 0 && network.nodePort[network.portNode[p]] === p && !missed.has(p);
  return new Set(chip.ports.map((_, p) => p).filter(isLoose));
});

function loosePorts(context: FindingContext): Finding[] {
  const onOutlines = portsOnOutlines(context);
  const loose = context.chip.ports.filter(
    ({ name }, p) => loosePortSet(context).has(p) && !onOutlines.has(name),
  );
  return loose.map((port) => {
    const { name } = port;
    const nearest = nearestPiece(context, port);
    const [near, move] =
      nearest === null
        ? ['', '']
        : [
            `; the nearest, ${nearest.name}, is ${distanceText(nearest.gapMm)} from its rim`,
            ` move it ${moveText(nearest.gapMm)} to ${nearest.name},`,
          ];
    return toFinding('loose-port', 'blocker', {
      message: `the well ${name} touches no channel${near}`,
      fix: `draw a channel to ${name},${move} or take it out`,
      at: port,
      names: nearest === null ? [name] : [name, nearest.name],
      mark: nearest?.mark ?? null,
    });
  });
}

/** The painted piece nearest to a well, among those whose boxes are nearest. */
function nearestPiece({ chip, network }: FindingContext, port: Port) {
  const { index, pieces } = network.trace.near;
  const near = index.neighbors(port.xMm, port.yMm, 16);
  if (near.length === 0) return null;
  const { piece, gap } = near
    .map((i) => ({ piece: i, gap: gapToHole(chip, pieces, i, port) }))
    .reduce((best, one) => (one.gap.distanceMm < Math.max(0, best.gap.distanceMm) ? one : best));
  const { name } = chip.channels[pieces.channel[piece]];
  return { name, gapMm: Math.max(0, gap.distanceMm), mark: lineBetween(gap) };
}

/** A hole must be wider than its channel by this much, so that it still covers it when it is drilled or punched off. */
const HOLE_ALLOWANCE_MM = 0.2;

function smallPorts(context: FindingContext): Finding[] {
  const { channels } = context.chip;
  return context.chip.ports.flatMap((port, p) => {
    const [widest] = channelsAtPorts(context)
      [p].map((channel) => channels[channel])
      .sort((one, two) => two.stripHalfWidthMm - one.stripHalfWidthMm);
    if (widest === undefined) return [];
    const { name, stripHalfWidthMm } = widest;
    const { xMm, yMm, radiusMm } = port;
    const holeMm = 2 * radiusMm;
    const limitMm = 2 * stripHalfWidthMm + HOLE_ALLOWANCE_MM;
    if (!isBelow(holeMm, limitMm)) return [];
    return [
      toFinding('small-port', 'caution', {
        message: `the hole ${port.name} is ${distanceText(holeMm)} wide on ${name}, which is ${distanceText(2 * stripHalfWidthMm)} wide; a hole drilled a little off would leave it uncovered`,
        fix: `make ${port.name} ${distanceText(limitMm)} wide or wider, or narrow ${name} where they meet`,
        at: port,
        names: [port.name, name],
        measure: lengthMeasure(holeMm, limitMm),
        mark: [xMm - radiusMm, yMm, xMm + radiusMm, yMm],
      }),
    ];
  });
}

/** A well may take in one junction or two; with more of them, part of the network has gone. */
const MOST_NODES_IN_A_WELL = 2;

function swallowedChannels(context: FindingContext): Finding[] {
  const { chip, network } = context;
  const { index, pieces } = network.trace.near;
  const slack = chip.joinWithinMm;
  return chip.ports.flatMap((port) => {
    const { name, xMm, yMm, radiusMm: r } = port;
    const inside = index.search(xMm - r, yMm - r, xMm + r, yMm + r);
    const names = [...new Set(inside.map((i) => pieces.channel[i]))]
      .sort((a, b) => a - b)
      .map((channel) => chip.channels[channel])
      .filter(({ centrelines }) => centrelines.every(({ points }) => isAllInside(points, port, r + slack)))
      .map((channel) => channel.name);
    const nodes = meetingsInside(context, inside, port);
    if (names.length === 0 && nodes <= MOST_NODES_IN_A_WELL) return [];
    const all = listText(names);
    const [lie, them] = names.length === 1 ? ['lies', 'it'] : ['lie', 'them'];
    const [what, way] =
      names.length > 0
        ? [
            `${all} ${lie} wholly inside the well ${name}`,
            `draw ${all} out beyond its rim, or take ${them} out`,
          ]
        : [`the well ${name} covers ${nodes} places where channels meet`, 'or move it off the junctions'];
    return [
      toFinding('swallowed-channel', 'blocker', {
        message: `${what}: all of it is open well and has no resistance`,
        fix: `make ${name} smaller, ${way}`,
        at: port,
        names: [...names, name],
      }),
    ];
  });
}

function isAllInside(points: Float64Array, { xMm, yMm }: Port, within: number): boolean {
  for (let k = 0; k < points.length; k += 2) {
    if (Math.hypot(points[k] - xMm, points[k + 1] - yMm) > within) return false;
  }
  return true;
}

/** How many separate places inside the well there are where centrelines meet. */
function meetingsInside({ chip, network }: FindingContext, inside: readonly number[], port: Port): number {
  const { pieces, pairA, pairB, pairDistance, firstPair, pairOf } = network.trace.near;
  const slack = chip.joinWithinMm;
  /** Cells as wide as the slack, so that a place is found again without looking at all of them. */
  const cells = new Set<string>();
  const isKnown = (column: number, row: number): boolean =>
    NEXT.some((dx) => NEXT.some((dy) => cells.has(`${column + dx} ${row + dy}`)));
  const close = new Set(inside);
  let count = 0;
  for (const i of inside) {
    for (const pair of pairOf.subarray(firstPair[i], firstPair[i + 1])) {
      if (pairA[pair] !== i || pairDistance[pair] > slack || !close.has(pairB[pair])) continue;
      const { x1, y1 } = closestPoints(lineOf(pieces, i), lineOf(pieces, pairB[pair]));
      if (Math.hypot(x1 - port.xMm, y1 - port.yMm) >= port.radiusMm) continue;
      const [column, row] = [Math.round(x1 / slack), Math.round(y1 / slack)];
      if (!isKnown(column, row)) count++;
      cells.add(`${column} ${row}`);
    }
  }
  return count;
}

const NEXT = [-1, 0, 1];
