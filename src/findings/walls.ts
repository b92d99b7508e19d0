import { isBelow } from '../asked/within.ts';
import { grouped, remembered } from '../by-key.ts';
import { minWallMm } from '../chip/limits.ts';
import type { Channel, Sourced } from '../chip/types.ts';
import { findNearPairs, type Nearness } from '../geometry/near.ts';
import { middleOf } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { unjoinedAreas } from './etched-area.ts';
import { replacesWall } from './misses.ts';
import { closePorts } from './near-ports.ts';
import { doubleStrokes } from './overlaps.ts';
import { pairKey } from './pairs.ts';
import { found, lengthMeasure, notRun, type Rule, toFinding, withoutLimit } from './rule.ts';
import type { Wall } from './stretches.ts';
import { findThinWalls, type ThinWall } from './thin.ts';
import type { Finding } from './types.ts';
import { findWellWalls } from './well-walls.ts';
import { distanceText, limitText, moveText, sizeAtMostText } from './words.ts';

/** What stands between two channels, and between a channel and a well. */
export const wallRules: readonly Rule[] = [
  {
    names: ['thin-wall', 'merged-walls'],
    run: (context) => {
      const findings = [
        ...wallFaults(context).map((wall) => toWallFinding(context, wall)),
        ...wellFindings(context),
        ...mergedWells(context),
      ];
      return context.chip.channels.length > 0 && minWallMm(context.chip, Number.NaN) === null
        ? { findings, notRun: withoutLimit('thin-wall', 'min_wall', context).notRun }
        : found(findings);
    },
  },
  {
    names: ['slender-wall'],
    run: (context) =>
      context.chip.process === 'cast elastomer'
        ? found(slenderWalls(context).map((wall) => toSlenderWall(context, wall)))
        : notRun('slender-wall', 'only for the process "cast elastomer"'),
  },
];

/** Walls below min_wall; with no min_wall, only where no material at all is left. */
const wallFaults = oncePerContext((context): readonly ThinWall[] => {
  const { chip, network } = context;
  const doubles = grouped(doubleStrokes(context), ({ a, b }) => pairKey(a, b));
  const limits = new Map<number, number>();
  const limitOf = (a: number, b: number): number => {
    const depthMm = deeper(chip.channels[a], chip.channels[b]);
    return remembered(limits, depthMm, () => minWallMm(chip, depthMm)?.value ?? 0);
  };
  return withUnjoined(context, findThinWalls(context, network.trace.near, limitOf), limitOf).filter(
    (wall) =>
      !replacesWall(context, wall) &&
      !(doubles.get(keyOf(wall)) ?? []).some(({ from, to }) => from <= wall.toA && to >= wall.fromA),
  );
});

function keyOf({ centrelineA, centrelineB }: Wall): string {
  return pairKey(centrelineA, centrelineB);
}

/** The walls, and the overlaps that nothing joins: these say it where a wall and an overlap are one place. */
function withUnjoined(
  context: FindingContext,
  walls: readonly ThinWall[],
  limitOf: (channelA: number, channelB: number) => number,
): readonly ThinWall[] {
  const areas = unjoinedAreas(context);
  if (areas.length === 0) return walls;
  const { pieces } = context.network.trace.near;
  const wallsOf = grouped(walls, keyOf);
  const replaced = new Set(
    areas.flatMap((area) => (wallsOf.get(keyOf(area)) ?? []).filter((wall) => isOnePlace(wall, area))),
  );
  return [
    ...walls.filter((wall) => !replaced.has(wall)),
    ...areas.map((area) => ({
      ...area,
      limitMm: limitOf(pieces.channel[area.pieceA], pieces.channel[area.pieceB]),
    })),
  ];
}

function isOnePlace(wall: Wall, area: Wall): boolean {
  const turned = wall.centrelineA !== area.centrelineA;
  const [fromA, toA, fromB, toB] = turned
    ? [wall.fromB, wall.toB, wall.fromA, wall.toA]
    : [wall.fromA, wall.toA, wall.fromB, wall.toB];
  return fromA <= area.toA && toA >= area.fromA && fromB <= area.toB && toB >= area.fromB;
}

/** Walls of soft material that stand, but are thinner than half as thick as they are high. */
function slenderWalls(context: FindingContext): readonly ThinWall[] {
  const { chip } = context;
  const limitOf = (a: number, b: number): number => deeper(chip.channels[a], chip.channels[b]) / 2;
  const widest = chip.channels.reduce((most, { depthMm }) => Math.max(most, depthMm / 2 || 0), 0);
  const faults = grouped(wallFaults(context), keyOf);
  const { bulge } = context.network.trace.near.pieces;
  return findThinWalls(context, nearPairsWithin(context, widest), limitOf).filter((wall) => {
    const minimum = minWallMm(chip, 2 * wall.limitMm);
    const surelyMm = wall.gapMm + bulge[wall.pieceA] + bulge[wall.pieceB];
    return (
      !(minimum !== null && isBelow(surelyMm, minimum.value)) &&
      wall.gapMm > 0 &&
      !replacesWall(context, wall) &&
      // One fault, one finding: a wall that is too thin somewhere is not slender as well.
      !(faults.get(keyOf(wall)) ?? []).some(({ fromA, toA }) => fromA <= wall.toA && toA >= wall.fromA)
    );
  });
}

/** The network's own list of near pairs; a wider one only where walls half as thick as they are high need it. */
function nearPairsWithin({ chip, network }: FindingContext, withinMm: number): Nearness {
  const { near } = network.trace;
  if (withinMm <= near.withinMm) return near;
  return findNearPairs(near.pieces, withinMm, () => Math.SQRT2, chip.file);
}

/** Two channels, or two stretches of one, with a wall between them: what a finding of it needs in any case. */
function wallFacts({ chip, network }: FindingContext, { pieceA, pieceB, gapMm, limitMm, mark }: ThinWall) {
  const { pieces } = network.trace.near;
  const one = chip.channels[pieces.channel[pieceA]];
  const two = chip.channels[pieces.channel[pieceB]];
  const pair = one === two ? `two stretches of ${one.name}` : `${one.name} and ${two.name}`;
  const names = one === two ? [one.name] : [one.name, two.name];
  const place = { at: middleOf(mark), names, mark, measure: lengthMeasure(gapMm, limitMm) };
  return { one, two, pair, halves: pieces.half[pieceA] + pieces.half[pieceB], place };
}

function toWallFinding(context: FindingContext, wall: ThinWall): Finding {
  const { one, two, pair, halves, place } = wallFacts(context, wall);
  const limit = minWallMm(context.chip, deeper(one, two));
  const needMm = Math.max(wall.limitMm - wall.gapMm, 0);
  const along = wall.lengthMm > 0.0005 ? ` along ${distanceText(wall.lengthMm)}` : '';
  if (wall.gapMm <= 1e-9 * halves) {
    const overlap = wall.gapMm < -0.0005 ? `overlap by ${distanceText(-wall.gapMm)}` : 'touch';
    return toFinding('merged-walls', 'blocker', {
      ...place,
      measure: lengthMeasure(Math.min(0, wall.gapMm), wall.limitMm),
      message: `${pair} ${overlap}${along} and nothing joins them there: no duct describes the place`,
      fix: `${apart(one, two, needMm, limit === null ? 'more than ' : '')}; if they are meant to be one, draw one channel`,
    });
  }
  return toFinding('thin-wall', 'blocker', {
    ...place,
    message: `${distanceText(wall.gapMm)} of wall is left between ${pair}${along}${limitWords(limit)}`,
    fix: apart(one, two, needMm, ''),
  });
}

function limitWords(limit: Sourced<number> | null): string {
  return limit === null ? '' : `; min_wall is ${limitText(distanceText(limit.value), limit)}`;
}

function apart(one: Channel, two: Channel, needMm: number, more: string): string {
  const least = Math.min(one.drawnWidthMm, two.drawnWidthMm) - needMm;
  const [toOne, toTwo] = [one, two].map(({ drawnWidthMm }) => sizeAtMostText(drawnWidthMm - needMm));
  if (one === two) {
    const narrow = least > 0 ? `, or narrow it to ${toOne}` : '';
    return `move the two stretches of ${one.name} ${more}${moveText(needMm)} further apart${narrow}`;
  }
  const narrowed = toOne === toTwo ? `both to ${toOne}` : `them to ${toOne} and ${toTwo}`;
  const narrow = least > 0 ? `, or narrow ${narrowed}` : '';
  return `move ${one.name} ${more}${moveText(needMm)} away from ${two.name}${narrow}`;
}

function toSlenderWall(context: FindingContext, wall: ThinWall): Finding {
  const { one, two, pair, place } = wallFacts(context, wall);
  return toFinding('slender-wall', 'caution', {
    ...place,
    message: `the wall between ${pair} is ${distanceText(wall.gapMm)} thick and ${distanceText(2 * wall.limitMm)} high along ${distanceText(wall.lengthMm)}; a soft wall thinner than half its height may lean or not seal`,
    fix: apart(one, two, wall.limitMm - wall.gapMm, ''),
  });
}

function wellFindings(context: FindingContext): Finding[] {
  const { chip } = context;
  const limits = chip.channels.map(({ depthMm }) => minWallMm(chip, depthMm));
  return findWellWalls(context, (channel) => limits[channel]?.value ?? null).map((wall) => {
    const { name } = chip.channels[wall.channel];
    const port = chip.ports[wall.port].name;
    const needMm = wall.limitMm - wall.gapMm;
    return toFinding('thin-wall', 'blocker', {
      message: `${distanceText(wall.gapMm)} of wall is left between ${name} and the well ${port}, which it does not meet there${limitWords(limits[wall.channel])}`,
      fix: `move ${name} ${moveText(needMm)} away from ${port}, or make the well ${moveText(2 * needMm)} smaller`,
      at: middleOf(wall.mark),
      names: [name, port],
      measure: lengthMeasure(wall.gapMm, wall.limitMm),
      mark: wall.mark,
    });
  });
}

/** Two wells that overlap are one open hole; they are one node only where a centreline passes from one into the other. */
function mergedWells(context: FindingContext): Finding[] {
  const { chip, network } = context;
  return closePorts(context, 0).flatMap(([p, q, gapMm]) => {
    if (-gapMm <= chip.joinWithinMm || network.portNode[p] === network.portNode[q]) return [];
    const [one, two] = [chip.ports[p], chip.ports[q]];
    const share = (one.radiusMm + gapMm / 2) / Math.hypot(two.xMm - one.xMm, two.yMm - one.yMm);
    return [
      toFinding('merged-walls', 'blocker', {
        message: `the wells ${one.name} and ${two.name} overlap by ${distanceText(-gapMm)}: they would be one open hole, but count as two ports`,
        fix: `move ${two.name} more than ${moveText(-gapMm)} away from ${one.name}; if they are meant to be one, draw one port`,
        at: { xMm: one.xMm + share * (two.xMm - one.xMm), yMm: one.yMm + share * (two.yMm - one.yMm) },
        names: [one.name, two.name],
        measure: lengthMeasure(gapMm, 0),
      }),
    ];
  });
}

/** The deeper of two channels, mm; NaN only when neither depth is known. */
function deeper(one: Channel, two: Channel): number {
  if (Number.isNaN(one.depthMm)) return two.depthMm;
  return Number.isNaN(two.depthMm) ? one.depthMm : Math.max(one.depthMm, two.depthMm);
}
